import type {Database as Driver} from 'better-sqlite3';

import type {Operation} from '../../shared/api.ts';
import {statement} from '../db/open.ts';
import {ServiceError} from '../errors.ts';

export const KEPT_HOURS = 24;

export interface Claim {
  readonly accountId: string;
  readonly operation: Operation;
  readonly key: string;
  /** SHA-256 of what the caller asked for. */
  readonly fingerprint: Buffer;
}

interface Row {
  readonly fingerprint: Buffer;
  readonly open: 0 | 1;
}

const FIND = `SELECT i.fingerprint,
    e.kind = 'reserve' AND NOT EXISTS (SELECT 1 FROM ledger_entry c WHERE c.closes = e.id) AS open
  FROM idempotency i JOIN ledger_entry e ON e.id = i.entry_id
  WHERE i.account_id = @accountId AND i.operation = @operation AND i.key = @key
    AND i.created_at > @since`;

/**
 * Whether the claim repeats a call that was charged.
 *
 * @throws ServiceError idempotency-mismatch for another request, call-in-flight for one not yet answered
 */
export function isReplay(driver: Driver, claim: Claim, now: Date): boolean {
  const {accountId, operation, key} = claim;
  const row = statement<[object], Row>(driver, FIND).get({
    accountId,
    operation,
    key,
    since: keptSince(now),
  });
  if (!row) return false;
  if (!row.fingerprint.equals(claim.fingerprint)) {
    throw new ServiceError(
      'idempotency-mismatch',
      `The Idempotency-Key was used for another request within ${KEPT_HOURS} hours.`,
    );
  }
  if (row.open) {
    throw new ServiceError('call-in-flight', 'A call with this Idempotency-Key is still open.', {
      retryAfter: 1,
    });
  }
  return true;
}

const CLAIM = `INSERT INTO idempotency (account_id, operation, key, fingerprint, entry_id, created_at)
  VALUES (@accountId, @operation, @key, @fingerprint, @entryId, @at)
  ON CONFLICT (account_id, operation, key) DO UPDATE SET
    fingerprint = @fingerprint, entry_id = @entryId, created_at = @at
  WHERE created_at <= @since`;

/** Ties the claim to a ledger entry; in the same transaction as the entry. */
export function claim(driver: Driver, wanted: Claim, entryId: number, now: Date): void {
  const {changes} = statement<[object], never>(driver, CLAIM).run({
    ...wanted,
    entryId,
    at: now.toISOString(),
    since: keptSince(now),
  });
  if (changes !== 1) {
    throw new ServiceError('call-in-flight', 'A call with this Idempotency-Key is still open.', {
      retryAfter: 1,
    });
  }
}

/** Forgets claims that are older than they are kept. */
export function forgetOld(driver: Driver, now: Date): void {
  statement(driver, 'DELETE FROM idempotency WHERE created_at <= ?').run(keptSince(now));
}

function keptSince(now: Date): string {
  return new Date(now.getTime() - KEPT_HOURS * 3_600_000).toISOString();
}
