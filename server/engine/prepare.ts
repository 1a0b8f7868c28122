import type {EstimateRequest, Operation} from '../../shared/api.ts';
import {readJson} from '../contract/read-json.ts';
import {compileContract, operationIds, validateRequest} from '../contract/validate.ts';
import type {ComputeRequest} from './filled-request.ts';
import type {EngineLimits} from './limits.ts';
import {plan, type Plan} from './plan.ts';

/**
 * From the body of a call to its plan; `estimates` plans the request inside.
 *
 * @throws ServiceError for whatever is wrong with the body
 */
export function planBody(
  operation: Operation | 'estimates',
  bytes: Uint8Array,
  limits: EngineLimits,
): Plan {
  const value = readJson(bytes);
  if (operation === 'estimates') {
    validateRequest('createEstimates', value);
    const {operation: inner, request} = value as EstimateRequest;
    return plan(inner, request, bytes.length, limits, '/request');
  }
  validateRequest(operationIds[operation], value);
  // The contract has just checked that it is one.
  return plan(operation, value as ComputeRequest, bytes.length, limits);
}

/** Compiles the checks of all bodies, which takes the better part of a second in a new thread. */
export function compileChecks(): void {
  compileContract([...Object.values(operationIds), 'createEstimates']);
}
