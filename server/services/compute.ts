import {createHash} from 'node:crypto';

import type {Operation} from '../../shared/api.ts';
import type {Deps} from '../deps.ts';
import type {Outcome, Prepared} from '../engine/pool.ts';
import * as entries from '../ledger/entries.ts';
import type {Left, Spender} from '../ledger/entries.ts';
import * as idempotency from '../ledger/idempotency.ts';
import type {Claim} from '../ledger/idempotency.ts';

export interface ComputeCall {
  readonly spender: Spender;
  readonly operation: Operation;
  readonly bytes: Uint8Array;
  readonly idempotencyKey: string | null;
  /** Aborted when nobody waits for the answer any more; asked for only by calls that take a while. */
  readonly signal: () => AbortSignal;
  readonly at: Date;
}

export interface Computed {
  readonly bytes: Uint8Array;
  readonly pairs: number;
  readonly left: Left;
  readonly isReplay: boolean;
}

/**
 * Computes a request and charges its spender. No answer comes back without its settled entry; what
 * fails, is refused or is no longer wanted costs nothing.
 */
export async function compute(deps: Deps, call: ComputeCall): Promise<Computed> {
  const {engine, database} = deps;
  const {driver} = database;
  const prepared = await engine.prepare(call.operation, call.bytes);
  const claim = claimOf(call);
  const isReplay = claim !== null && idempotency.isReplay(driver, claim, call.at);
  if (!isReplay && prepared.route === 'inline') return computeInline(deps, prepared, call, claim);
  const {bytes} = isReplay
    ? await recompute(deps, prepared, call)
    : await computeHeld(deps, prepared, call, claim);
  const left = entries.left(driver, call.spender, call.at);
  return {bytes, pairs: isReplay ? 0 : prepared.pairs, left, isReplay};
}

/** The engine is deterministic, so a repeated call is computed again instead of being kept. */
async function recompute({engine}: Deps, prepared: Prepared, call: ComputeCall): Promise<Outcome> {
  return prepared.route === 'inline'
    ? engine.runInline(prepared)
    : engine.run(prepared, {signal: call.signal()});
}

/** What a small call costs is known to be owed once it is computed: one entry reserves and settles. */
async function computeInline(
  {engine, database: {driver}, groupCommit}: Deps,
  prepared: Prepared,
  call: ComputeCall,
  claim: Claim | null,
): Promise<Computed> {
  const {bytes} = engine.runInline(prepared);
  const {pairs} = prepared;
  const left = await groupCommit.run(() => {
    spend(driver, entries.charge, pairs, call, claim);
    return entries.left(driver, call.spender, call.at);
  });
  return {bytes, pairs, left, isReplay: false};
}

async function computeHeld(
  {engine, database: {driver}, now}: Deps,
  prepared: Prepared,
  call: ComputeCall,
  claim: Claim | null,
): Promise<Outcome> {
  const entry = spend(driver, entries.reserve, prepared.pairs, call, claim);
  let outcome: Outcome;
  try {
    outcome = await engine.run(prepared, {signal: call.signal()});
  } catch (error) {
    // Any failure: a time-out, a refusal of the engine, a caller who left.
    entries.release(driver, entry, now());
    throw error;
  }
  entries.settle(driver, entry, now());
  return outcome;
}

function spend(
  driver: Deps['database']['driver'],
  enter: typeof entries.charge,
  pairs: number,
  call: ComputeCall,
  claim: Claim | null,
): number {
  if (!claim) return enter(driver, call.spender, call.operation, pairs, call.at);
  // Inside a group this is a savepoint, so an entry without its claim is undone.
  return driver
    .transaction(() => {
      const entry = enter(driver, call.spender, call.operation, pairs, call.at);
      idempotency.claim(driver, claim, entry, call.at);
      return entry;
    })
    .immediate();
}

function claimOf({idempotencyKey, spender, operation, bytes}: ComputeCall): Claim | null {
  if (idempotencyKey === null) return null;
  const fingerprint = createHash('sha256').update(operation).update('\n').update(bytes).digest();
  return {accountId: spender.accountId, operation, key: idempotencyKey, fingerprint};
}
