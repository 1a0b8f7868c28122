import type {Database as Driver} from 'better-sqlite3';

import type {Operation} from '../../shared/api.ts';
import {statement} from '../db/open.ts';
import {ServiceError} from '../errors.ts';
import {dayOf, periodOf} from './period.ts';

/** Who spends: a key of an account, or a person through the console. */
export interface Spender {
  readonly accountId: string;
  readonly lineageId: string;
  readonly sourceId: string;
  readonly personId: string | null;
}

export const CONSOLE = 'console';

/** What is left, in pairs, after an entry. */
export interface Left {
  readonly allowance: number;
  readonly left: number;
}

// The limit of the spender: of its key, or of the console in the account; NULL is none.
const LIMIT = `CASE WHEN @source = '${CONSOLE}' THEN a.console_limit
  ELSE (SELECT k.monthly_limit FROM api_key k WHERE k.id = @source) END`;

const SPENT = (lineage: string): string =>
  `coalesce((SELECT b.settled + b.held FROM balance b
    WHERE b.month = @month AND b.account_id = @account AND b.lineage_id = ${lineage}), 0)`;

// One conditional statement, so that two calls can not spend the same last pair.
const SPEND = `INSERT INTO ledger_entry
    (kind, account_id, lineage_id, source_id, person_id, operation, day, pairs, at)
  SELECT @kind, a.id, @lineage, @source, @person, @operation, @day, @pairs, @at
  FROM account a
  WHERE a.id = @account
    AND a.allowance >= @pairs + ${SPENT("''")}
    AND coalesce(${LIMIT} >= @pairs + ${SPENT('@lineage')}, true)`;

const BALANCE = `SELECT a.allowance, ${LIMIT} AS spenderLimit,
    ${SPENT("''")} AS accountSpent, ${SPENT('@lineage')} AS spenderSpent
  FROM account a WHERE a.id = @account`;

interface BalanceRow {
  readonly allowance: number;
  readonly spenderLimit: number | null;
  readonly accountSpent: number;
  readonly spenderSpent: number;
}

/**
 * Reserves and settles `pairs` in one entry, for a call whose answer is ready to leave.
 *
 * @returns the id of the entry
 * @throws ServiceError exceeds-limit, allowance-exhausted
 */
export function charge(
  driver: Driver,
  spender: Spender,
  operation: Operation,
  pairs: number,
  now: Date,
): number {
  return spend(driver, 'charge', spender, operation, pairs, now);
}

/**
 * Holds `pairs` for a call that is about to be computed.
 *
 * @returns the id of the entry, to be settled or released
 * @throws ServiceError exceeds-limit, allowance-exhausted
 */
export function reserve(
  driver: Driver,
  spender: Spender,
  operation: Operation,
  pairs: number,
  now: Date,
): number {
  return spend(driver, 'reserve', spender, operation, pairs, now);
}

function spend(
  driver: Driver,
  kind: 'charge' | 'reserve',
  spender: Spender,
  operation: Operation,
  pairs: number,
  now: Date,
): number {
  const day = dayOf(now);
  const values = {
    kind,
    account: spender.accountId,
    lineage: spender.lineageId,
    source: spender.sourceId,
    person: spender.personId,
    operation,
    day,
    month: day.slice(0, 7),
    pairs: pairs,
    at: now.toISOString(),
  };
  const result = statement<[typeof values], never>(driver, SPEND).run(values);
  if (result.changes === 0) throw refusal(balanceRow(driver, spender, values.month), pairs, now);
  return Number(result.lastInsertRowid);
}

/** Says why a spending was refused: for good, or until the month ends. */
function refusal(row: BalanceRow, pairs: number, now: Date): ServiceError {
  const whole = Math.min(row.allowance, row.spenderLimit ?? row.allowance);
  if (pairs > whole) {
    return new ServiceError(
      'exceeds-limit',
      `The call costs ${pairs} pairs; the whole limit of a month is ${whole}.`,
    );
  }
  const {left} = leftOf(row);
  const {end} = periodOf(now);
  return new ServiceError(
    'allowance-exhausted',
    `The call costs ${pairs} pairs; ${left} are left until ${end}.`,
    {retryAfter: Math.ceil((Date.parse(end) - now.getTime()) / 1000)},
  );
}

function leftOf(row: BalanceRow): Left {
  const ofAccount = row.allowance - row.accountSpent;
  if (row.spenderLimit === null || row.spenderLimit > row.allowance) {
    return {allowance: row.allowance, left: Math.max(0, ofAccount)};
  }
  const ofSpender = row.spenderLimit - row.spenderSpent;
  return {allowance: row.spenderLimit, left: Math.max(0, Math.min(ofAccount, ofSpender))};
}

function balanceRow(driver: Driver, spender: Spender, month: string): BalanceRow {
  const values = {
    month,
    account: spender.accountId,
    lineage: spender.lineageId,
    source: spender.sourceId,
  };
  const row = statement<[typeof values], BalanceRow>(driver, BALANCE).get(values);
  if (!row) throw new RangeError(`no account ${spender.accountId}`);
  return row;
}

/** What the spender can still spend this month: of its own limit and of the account's allowance. */
export function left(driver: Driver, spender: Spender, now: Date): Left {
  return leftOf(balanceRow(driver, spender, dayOf(now).slice(0, 7)));
}

// A settled entry keeps the day, and so the month, of its reservation.
const CLOSE = `INSERT INTO ledger_entry
    (kind, closes, account_id, lineage_id, source_id, person_id, operation, day, pairs, at)
  SELECT @kind, id, account_id, lineage_id, source_id, person_id, operation, day, pairs, @at
  FROM ledger_entry WHERE id = @id AND kind = 'reserve'`;

/** Charges a reservation. Must be durable before its answer leaves. */
export function settle(driver: Driver, id: number, now: Date): void {
  close(driver, 'settle', id, now);
}

/** Gives a reservation back, and frees the idempotency key that it was made under. */
export const release = (driver: Driver, id: number, now: Date): void =>
  driver
    .transaction(() => {
      close(driver, 'release', id, now);
      statement(driver, 'DELETE FROM idempotency WHERE entry_id = ?').run(id);
    })
    .immediate();

function close(driver: Driver, kind: 'settle' | 'release', id: number, now: Date): void {
  const values = {kind, id, at: now.toISOString()};
  const {changes} = statement<[typeof values], never>(driver, CLOSE).run(values);
  if (changes !== 1) throw new RangeError(`ledger entry ${id} is no open reservation`);
}

/**
 * Releases what a process that ended without a goodbye left held. Only at start-up, when no call
 * of this database is open.
 *
 * @returns how many reservations were released
 */
export function releaseAbandoned(driver: Driver, now: Date): number {
  const open = statement<[], {id: number}>(
    driver,
    `SELECT r.id FROM ledger_entry r WHERE r.kind = 'reserve'
      AND NOT EXISTS (SELECT 1 FROM ledger_entry e WHERE e.closes = r.id)`,
  ).all();
  for (const {id} of open) release(driver, id, now);
  return open.length;
}
