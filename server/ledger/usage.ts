import type {Database as Driver} from 'better-sqlite3';

import type {AccountBalance, Quota, UsageDay, UsageReport} from '../../shared/api.ts';
import {statement, type Database} from '../db/open.ts';
import {ServiceError} from '../errors.ts';
import {CONSOLE, type Spender} from './entries.ts';
import {dayOf, periodOf} from './period.ts';

const MAX_DAYS = 400;

interface Balance {
  readonly settled: number;
  readonly held: number;
}

const BALANCE = `SELECT settled, held FROM balance
  WHERE month = ? AND account_id = ? AND lineage_id = ?`;

function balanceOf(driver: Driver, month: string, accountId: string, lineageId: string): Balance {
  return (
    statement<[string, string, string], Balance>(driver, BALANCE).get(
      month,
      accountId,
      lineageId,
    ) ?? {
      settled: 0,
      held: 0,
    }
  );
}

/** The balances of the present month for the account. */
export function accountBalance({driver}: Database, accountId: string, now: Date): AccountBalance {
  const {month} = periodOf(now);
  const account = statement<[string], {allowance: number}>(
    driver,
    'SELECT allowance FROM account WHERE id = ?',
  ).get(accountId);
  if (!account) throw new RangeError(`no account ${accountId}`);
  const {settled, held} = balanceOf(driver, month, accountId, '');
  const left = Math.max(0, account.allowance - settled - held);
  return {allowance: account.allowance, settled, held, left};
}

/** The balances of the present month for the account and for the key, with its predecessors. */
export function quota(database: Database, spender: Spender, now: Date): Quota {
  const {month, start, end} = periodOf(now);
  const account = accountBalance(database, spender.accountId, now);
  const {settled, held} = balanceOf(database.driver, month, spender.accountId, spender.lineageId);
  const key = statement<[string], {monthly_limit: number | null}>(
    database.driver,
    'SELECT monthly_limit FROM api_key WHERE id = ?',
  ).get(spender.sourceId);
  const limit = key?.monthly_limit ?? null;
  const ownLeft = limit === null ? account.left : limit - settled - held;
  return {
    period: {start, end},
    account,
    key: {limit, settled, held, left: Math.max(0, Math.min(account.left, ownLeft))},
  };
}

export interface Range {
  readonly since: string;
  readonly until: string;
}

/**
 * The days that a caller asked for, with the defaults filled.
 *
 * @throws ServiceError invalid-query for a day that does not exist or a range beyond 400 days
 */
export function rangeOf(since: string | undefined, until: string | undefined, now: Date): Range {
  const range = {since: since ?? `${periodOf(now).month}-01`, until: until ?? dayOf(now)};
  const days = (Date.parse(range.until) - Date.parse(range.since)) / 86_400_000;
  if (days < 0) {
    throw new ServiceError(
      'invalid-query',
      `since is ${range.since}, after until, ${range.until}.`,
    );
  }
  if (days >= MAX_DAYS) {
    throw new ServiceError(
      'invalid-query',
      `The range is ${days + 1} days; at most ${MAX_DAYS} can be read at once.`,
    );
  }
  return range;
}

/** Charged calls and pairs of an account by day, source and operation. */
export async function report(
  {db}: Database,
  accountId: string,
  range: Range,
): Promise<UsageReport> {
  const rows = await db
    .selectFrom('usage_day as u')
    .leftJoin('api_key as k', 'k.id', 'u.source_id')
    .where('u.account_id', '=', accountId)
    .where('u.day', '>=', range.since)
    .where('u.day', '<=', range.until)
    .select(['u.day', 'u.source_id', 'u.operation', 'u.calls', 'u.pairs', 'k.name', 'k.last_four'])
    .orderBy('u.day')
    .orderBy('u.source_id')
    .orderBy('u.operation')
    .execute();
  const days = rows.map((row): UsageDay => ({
    day: row.day,
    source: {
      kind: row.source_id === CONSOLE ? 'console' : 'key',
      id: row.source_id,
      name: row.name ?? 'Console',
      lastFour: row.last_four ?? '',
    },
    operation: row.operation,
    calls: row.calls,
    pairs: row.pairs,
  }));
  const sum = (pick: (day: UsageDay) => number): number =>
    days.reduce((total, day) => total + pick(day), 0);
  return {...range, calls: sum(day => day.calls), pairs: sum(day => day.pairs), days};
}
