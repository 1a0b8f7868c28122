import {afterEach, beforeEach} from 'vitest';

import * as people from '../../server/accounts/people.ts';
import {migrate} from '../../server/db/migrate.ts';
import {openDatabase, type Database} from '../../server/db/open.ts';
import * as apiKeys from '../../server/ledger/api-keys.ts';
import type {Spender} from '../../server/ledger/entries.ts';
import type {CreatedKey, NewKey} from '../../shared/api.ts';

export const NOW = new Date('2026-12-10T12:00:00Z');

/** A database in memory with one account. */
export interface Ledger {
  readonly database: Database;
  readonly accountId: string;
  makeKey(wanted?: Partial<NewKey>): Promise<CreatedKey>;
  spenderOf(key: CreatedKey): Spender;
}

export async function openLedger(allowance = 1e9): Promise<Ledger> {
  const database = openDatabase(':memory:');
  await migrate(database);
  const accountId = await people.openAccount(database, {name: 'Account', allowance}, NOW);
  return {
    database,
    accountId,
    makeKey: (wanted = {}) =>
      apiKeys.create(
        database,
        {accountId, personId: null},
        {name: 'Key', scopes: ['compute:run'], ...wanted},
        NOW,
      ),
    spenderOf: ({secret}) => {
      const key = apiKeys.authenticate(database.driver, secret, NOW);
      if (!key) throw new RangeError('the key is not valid');
      return key;
    },
  };
}

/** A ledger for each test of a file. */
export function eachLedger(): () => Ledger {
  let ledger: Ledger | undefined;
  beforeEach(async () => {
    ledger = await openLedger();
  });
  afterEach(() => ledger?.database.close());
  return () => {
    if (!ledger) throw new RangeError('only within a test');
    return ledger;
  };
}

/** What the balances are, and what they would be if added up from the entries. */
export function balancesOf({driver}: Database): {kept: unknown[]; summed: unknown[]} {
  const kept = driver
    .prepare('SELECT month, account_id, lineage_id, settled, held FROM balance ORDER BY 1, 2, 3')
    .all();
  const summed = driver
    .prepare(
      `SELECT substr(e.day, 1, 7) AS month, e.account_id, part.lineage_id,
         sum(CASE WHEN kind IN ('charge', 'settle') THEN pairs ELSE 0 END) AS settled,
         sum(CASE kind WHEN 'reserve' THEN pairs WHEN 'charge' THEN 0 ELSE -pairs END) AS held
       FROM ledger_entry e,
         (SELECT DISTINCT lineage_id FROM ledger_entry UNION SELECT '') AS part
       WHERE part.lineage_id IN ('', e.lineage_id)
       GROUP BY 1, 2, 3 ORDER BY 1, 2, 3`,
    )
    .all();
  return {kept, summed};
}
