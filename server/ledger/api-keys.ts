import {timingSafeEqual} from 'node:crypto';
import type {Database as Driver} from 'better-sqlite3';

import type {CreatedKey, Key, NewKey, Operation, Scope} from '../../shared/api.ts';
import {statement, type Database} from '../db/open.ts';
import type {ApiKeyTable} from '../db/schema.ts';
import {ServiceError} from '../errors.ts';
import type {Spender} from './entries.ts';
import {createSecret, digestOf, publicIdOf} from './key-form.ts';
import {periodOf, rfc3339} from './period.ts';
import * as recent from './recent-keys.ts';

/** A key that was found valid: what the path of a request needs to know of it. */
export interface ValidKey extends Spender {
  readonly id: string;
  readonly scopes: readonly Scope[];
  readonly burst: number;
}

type StoredKey = Pick<
  ApiKeyTable,
  | 'id'
  | 'account_id'
  | 'lineage_id'
  | 'secret_digest'
  | 'scopes'
  | 'burst'
  | 'expires_at'
  | 'retires_at'
  | 'revoked_at'
>;

const FIND = `SELECT id, account_id, lineage_id, secret_digest, scopes, burst, expires_at, retires_at,
  revoked_at FROM api_key WHERE id = ?`;

// Compared with when the id is unknown, so that both cases do the same work.
const NO_DIGEST = Buffer.alloc(32);

/** The valid key that `token` is, or null: mistyped, unknown, expired, retired and revoked alike. */
export function authenticate(driver: Driver, token: string, now: Date): ValidKey | null {
  const known = recent.find(driver, token, now);
  if (known) return known;
  const id = publicIdOf(token);
  if (id === null) return null;
  const row = statement<[string], StoredKey>(driver, FIND).get(id);
  const isSame = timingSafeEqual(row?.secret_digest ?? NO_DIGEST, digestOf(token));
  if (!row || !isSame || hasEnded(row, rfc3339(now))) return null;
  const key: ValidKey = {
    id: row.id,
    accountId: row.account_id,
    lineageId: row.lineage_id,
    sourceId: row.id,
    personId: null,
    scopes: JSON.parse(row.scopes) as Scope[],
    burst: row.burst,
  };
  recent.keep(driver, token, key, endOf(row), now);
  return key;
}

/** When a key that is valid now will not be any more [ms since 1970]. */
function endOf({expires_at, retires_at}: StoredKey): number {
  return Math.min(...[expires_at, retires_at].map(end => (end ? Date.parse(end) : Infinity)));
}

/** @param now in the form of the times in the row, or the texts do not compare */
function hasEnded(
  row: Pick<ApiKeyTable, 'expires_at' | 'retires_at' | 'revoked_at'>,
  now: string,
): boolean {
  return (
    row.revoked_at !== null ||
    (row.expires_at !== null && row.expires_at <= now) ||
    (row.retires_at !== null && row.retires_at <= now)
  );
}

const DEFAULT_LIFE_DAYS = 365;
const DEFAULT_BURST = 100;

export interface Maker {
  readonly accountId: string;
  readonly personId: string | null;
}

/**
 * Makes a key. Its secret is in the answer and nowhere else.
 *
 * @throws ServiceError out-of-range for an expiry that has passed
 */
export async function create(
  {db}: Database,
  maker: Maker,
  wanted: NewKey,
  now: Date,
): Promise<CreatedKey> {
  const {secret, ...made} = createSecret();
  const row: ApiKeyTable = {
    id: made.id,
    account_id: maker.accountId,
    lineage_id: made.id,
    predecessor_id: null,
    created_by: maker.personId,
    name: wanted.name,
    secret_digest: made.digest,
    last_four: made.lastFour,
    scopes: JSON.stringify(wanted.scopes),
    monthly_limit: wanted.monthlyLimit ?? null,
    burst: wanted.burst ?? DEFAULT_BURST,
    created_at: rfc3339(now),
    expires_at: expiry(wanted.expiresAt, now),
    retires_at: null,
    revoked_at: null,
  };
  await db.insertInto('api_key').values(row).execute();
  return {
    ...describe(
      {...row, successor_id: null, spent: 0, held: 0, last_at: null, last_operation: null},
      now,
    ),
    secret,
  };
}

function expiry(wanted: string | undefined, now: Date): string {
  if (wanted === undefined)
    return rfc3339(new Date(now.getTime() + DEFAULT_LIFE_DAYS * 86_400_000));
  const at = new Date(wanted);
  if (at <= now) {
    const detail = `The key would have ended at ${rfc3339(at)}; give a time to come.`;
    throw new ServiceError('out-of-range', `/expiresAt: ${detail}`, {
      errors: [{pointer: '/expiresAt', code: 'out-of-range', detail}],
    });
  }
  return rfc3339(at);
}

/**
 * Makes a successor of a key, which stays valid for the overlap; both spend from one limit.
 *
 * @throws ServiceError not-found, key-state
 */
export function rotate(
  {driver}: Database,
  maker: Maker,
  id: string,
  overlapHours: number,
  now: Date,
): CreatedKey {
  return driver
    .transaction(() => {
      const old = ownKey(driver, maker.accountId, id);
      const state = stateOf({...old, successor_id: successorOf(driver, id)}, rfc3339(now));
      if (state !== 'active') {
        throw new ServiceError(
          'key-state',
          `The key is ${state}; only an active key can be rotated.`,
        );
      }
      const {secret, ...made} = createSecret();
      const row: ApiKeyTable = {
        ...old,
        id: made.id,
        predecessor_id: old.id,
        created_by: maker.personId,
        secret_digest: made.digest,
        last_four: made.lastFour,
        created_at: rfc3339(now),
        expires_at: expiry(undefined, now),
      };
      const columns = Object.keys(row);
      statement<[ApiKeyTable], never>(
        driver,
        `INSERT INTO api_key (${columns.join()}) VALUES (${columns.map(name => `@${name}`).join()})`,
      ).run(row);
      recent.forget(driver);
      statement(driver, 'UPDATE api_key SET retires_at = ? WHERE id = ?').run(
        rfc3339(new Date(now.getTime() + overlapHours * 3_600_000)),
        old.id,
      );
      return {
        ...describe(
          {...row, successor_id: null, spent: 0, held: 0, last_at: null, last_operation: null},
          now,
        ),
        secret,
      };
    })
    .immediate();
}

/**
 * Ends a key at once and for good. Revoking it again changes nothing.
 *
 * @throws ServiceError not-found
 */
export function revoke({driver}: Database, accountId: string, id: string, now: Date): void {
  ownKey(driver, accountId, id);
  recent.forget(driver);
  statement(driver, 'UPDATE api_key SET revoked_at = coalesce(revoked_at, ?) WHERE id = ?').run(
    rfc3339(now),
    id,
  );
}

function ownKey(driver: Driver, accountId: string, id: string): ApiKeyTable {
  const row = statement<[string, string], ApiKeyTable>(
    driver,
    'SELECT * FROM api_key WHERE id = ? AND account_id = ?',
  ).get(id, accountId);
  if (!row) throw new ServiceError('not-found', 'There is no key with this id in your account.');
  return row;
}

function successorOf(driver: Driver, id: string): string | null {
  return (
    statement<[string], {id: string}>(
      driver,
      'SELECT id FROM api_key WHERE predecessor_id = ?',
    ).get(id)?.id ?? null
  );
}

interface ListedKey extends ApiKeyTable {
  readonly successor_id: string | null;
  readonly spent: number;
  readonly held: number;
  readonly last_at: string | null;
  readonly last_operation: Operation | null;
}

/** All keys of an account with what each spent this month, newest first. */
export async function list({db}: Database, accountId: string, now: Date): Promise<Key[]> {
  const {month} = periodOf(now);
  const rows = await db
    .selectFrom('api_key as k')
    .leftJoin('api_key as s', 's.predecessor_id', 'k.id')
    .where('k.account_id', '=', accountId)
    .selectAll('k')
    .select('s.id as successor_id')
    .select(({selectFrom}) => [
      selectFrom('usage_day as u')
        .whereRef('u.account_id', '=', 'k.account_id')
        .whereRef('u.source_id', '=', 'k.id')
        .where('u.day', '>=', `${month}-01`)
        .where('u.day', '<=', `${month}-31`)
        .select(({fn}) => fn.sum<number | null>('u.pairs').as('pairs'))
        .as('spent'),
      selectFrom('balance as b')
        .whereRef('b.account_id', '=', 'k.account_id')
        .whereRef('b.lineage_id', '=', 'k.lineage_id')
        .where('b.month', '=', month)
        .select('b.held')
        .as('held'),
    ])
    .orderBy('k.created_at', 'desc')
    .orderBy('k.id')
    .execute();
  const lastUses = await db
    .selectFrom('usage_day')
    .where('account_id', '=', accountId)
    .select(({fn}) => ['source_id', 'operation', fn.max('last_at').as('last_at')])
    .groupBy('source_id')
    .execute();
  const lastOf = new Map(lastUses.map(use => [use.source_id, use]));
  return rows.map(row => {
    const last = lastOf.get(row.id);
    return describe(
      {
        ...row,
        spent: row.spent ?? 0,
        held: row.held ?? 0,
        last_at: last?.last_at ?? null,
        last_operation: last?.operation ?? null,
      },
      now,
    );
  });
}

function describe(row: ListedKey, now: Date): Key {
  return {
    id: row.id,
    name: row.name,
    prefix: `fst_${row.id}`,
    lastFour: row.last_four,
    state: stateOf(row, rfc3339(now)),
    scopes: JSON.parse(row.scopes) as Scope[],
    monthlyLimit: row.monthly_limit,
    spent: row.spent,
    held: row.held,
    burst: row.burst,
    createdAt: row.created_at,
    expiresAt: row.expires_at,
    retiresAt: row.retires_at,
    revokedAt: row.revoked_at,
    lastUsed:
      row.last_at === null || row.last_operation === null
        ? null
        : {at: rfc3339(new Date(row.last_at)), operation: row.last_operation},
    predecessor: row.predecessor_id,
    successor: row.successor_id,
  };
}

function stateOf(row: ApiKeyTable & {successor_id: string | null}, now: string): Key['state'] {
  if (row.revoked_at !== null) return 'revoked';
  if (hasEnded(row, now)) return 'expired';
  return row.retires_at === null ? 'active' : 'retiring';
}
