import type {Operation} from '../../shared/api.ts';
import type {Deps} from '../deps.ts';
import {keyOf, personOf, type Call, type Handler, type Reply} from '../http/call.ts';
import {CONSOLE} from '../ledger/entries.ts';
import * as entries from '../ledger/entries.ts';
import {compute, type Computed} from '../services/compute.ts';

type ComputeId = 'createPotentials' | 'createFields' | 'createForces' | 'createMoments';

/** Computes for a key. */
const computeWithKey =
  (deps: Deps, operation: Operation) =>
  async (call: Call<ComputeId>): Promise<Reply<ComputeId>> =>
    replyOf(
      await compute(deps, {
        spender: keyOf(call),
        operation,
        bytes: call.bytes,
        idempotencyKey: call.idempotencyKey,
        signal: call.signal,
        at: call.at,
      }),
    );

export const createPotentials = (deps: Deps): Handler<'createPotentials'> =>
  computeWithKey(deps, 'potentials');
export const createFields = (deps: Deps): Handler<'createFields'> => computeWithKey(deps, 'fields');
export const createForces = (deps: Deps): Handler<'createForces'> => computeWithKey(deps, 'forces');
export const createMoments = (deps: Deps): Handler<'createMoments'> =>
  computeWithKey(deps, 'moments');

export const createEstimates =
  (deps: Deps): Handler<'createEstimates'> =>
  async call => ({
    body: await deps.engine.estimate(call.bytes),
    pairs: 0,
    left: entries.left(deps.database.driver, keyOf(call), call.at),
  });

/** Runs the same body as the operation itself, charged to the account, the entry naming the person. */
export const createConsoleRequest =
  (deps: Deps): Handler<'createConsoleRequest'> =>
  async call => {
    const {operation} = call.path;
    if (operation === 'estimates') return {body: await deps.engine.estimate(call.bytes)};
    const {accountId, personId} = personOf(call);
    const {bytes, pairs} = await compute(deps, {
      spender: {accountId, lineageId: CONSOLE, sourceId: CONSOLE, personId},
      operation,
      bytes: call.bytes,
      idempotencyKey: call.idempotencyKey,
      signal: call.signal,
      at: call.at,
    });
    return {bytes, pairs};
  };

function replyOf({bytes, pairs, left, isReplay}: Computed): Reply<ComputeId> {
  return isReplay
    ? {bytes, pairs, left, headers: {'Fieldstead-Replay': 'true'}}
    : {bytes, pairs, left};
}
