import type {Deps} from '../deps.ts';
import {withBody, withBytes, type Routes} from '../http/call.ts';
import * as compute from './compute.ts';
import * as health from './health.ts';
import * as keys from './keys.ts';
import * as sessions from './sessions.ts';
import * as usage from './usage.ts';

/** operationId → handler. An operation that is added to the contract is missing here until it is written. */
export function createRoutes(deps: Deps): Routes {
  return {
    createPotentials: withBytes(compute.createPotentials(deps)),
    createFields: withBytes(compute.createFields(deps)),
    createForces: withBytes(compute.createForces(deps)),
    createMoments: withBytes(compute.createMoments(deps)),
    createEstimates: withBytes(compute.createEstimates(deps)),
    createConsoleRequest: withBytes(compute.createConsoleRequest(deps)),
    getQuota: withBody(usage.getQuota(deps)),
    listUsage: withBody(usage.listUsage(deps)),
    getConsoleUsage: withBody(usage.getConsoleUsage(deps)),
    createSession: withBody(sessions.createSession(deps)),
    getSession: withBody(sessions.getSession(deps)),
    deleteSession: withBody(sessions.deleteSession(deps)),
    createPassword: withBody(sessions.createPassword(deps)),
    listKeys: withBody(keys.listKeys(deps)),
    createKey: withBody(keys.createKey(deps)),
    deleteKey: withBody(keys.deleteKey(deps)),
    createRotation: withBody(keys.createRotation(deps)),
    getLiveness: withBody(health.getLiveness()),
    getReadiness: withBody(health.getReadiness(deps)),
  };
}
