import fc from 'fast-check';
import {describe, expect, test} from 'vitest';

import * as entries from '../../server/ledger/entries.ts';
import {balancesOf, eachLedger, NOW, openLedger} from './ledger.ts';

const ledger = eachLedger();

/** Runs it and says whether it was refused. */
function isRefused(run: () => unknown): boolean {
  try {
    run();
    return false;
  } catch (error) {
    if (!(error instanceof Error)) throw error;
    return true;
  }
}

const operations = ['potentials', 'fields', 'forces', 'moments'] as const;
const step = fc.record({
  what: fc.constantFrom('charge', 'reserve', 'reserve', 'settle', 'release', 'restart'),
  which: fc.nat(1000),
  operation: fc.constantFrom(...operations),
  pairs: fc.oneof(fc.integer({min: 1, max: 4000}), fc.constant(Number.MAX_SAFE_INTEGER)),
  hours: fc.integer({min: 0, max: 24 * 70}),
});

test('balances are the sums of the entries, and within the limits, whatever happens in what order', async () => {
  const seed = 42;
  await fc.assert(
    fc.asyncProperty(fc.array(step, {minLength: 10, maxLength: 80}), async steps => {
      const {database, makeKey, spenderOf} = await openLedger(20_000);
      const {driver} = database;
      const limits = [undefined, 9000, 5000];
      const keys = await Promise.all(limits.map(monthlyLimit => makeKey({monthlyLimit})));
      const spenders = keys.map(spenderOf);
      const reserved: number[] = [];
      for (const {what, which, operation, pairs, hours} of steps) {
        const spender = spenders[which % spenders.length];
        const at = new Date(NOW.getTime() + hours * 3_600_000);
        const entry = reserved[which % reserved.length];
        isRefused(() => {
          if (what === 'charge') entries.charge(driver, spender, operation, pairs, at);
          if (what === 'reserve') {
            reserved.push(entries.reserve(driver, spender, operation, pairs, at));
          }
          if (what === 'settle' && entry) entries.settle(driver, entry, at);
          if (what === 'release' && entry) entries.release(driver, entry, at);
          if (what === 'restart') entries.releaseAbandoned(driver, at);
        });
        const {kept, summed} = balancesOf(database);
        expect(kept).toEqual(summed);
      }
      const over = driver
        .prepare(
          `SELECT b.* FROM balance b JOIN account a ON a.id = b.account_id
           LEFT JOIN api_key k ON k.lineage_id = b.lineage_id
           WHERE settled + held > min(a.allowance, coalesce(k.monthly_limit, a.allowance))`,
        )
        .all();
      expect(over).toEqual([]);
      const used = driver.prepare('SELECT sum(calls) c, sum(pairs) p FROM usage_day').get();
      const charged = driver
        .prepare(
          "SELECT count(*) c, sum(pairs) p FROM ledger_entry WHERE kind IN ('charge', 'settle')",
        )
        .get() as {c: number; p: number | null};
      expect(used).toEqual({c: charged.c || null, p: charged.p});
      await database.close();
    }),
    {seed, numRuns: 60},
  );
});

describe('an entry', () => {
  test('is never changed and never deleted', async () => {
    const {database, makeKey, spenderOf} = ledger();
    const {driver} = database;
    entries.charge(driver, spenderOf(await makeKey()), 'moments', 1000, NOW);
    for (const statement of [
      'UPDATE ledger_entry SET pairs = 1',
      'UPDATE ledger_entry SET at = at',
      'DELETE FROM ledger_entry',
      'REPLACE INTO ledger_entry SELECT * FROM ledger_entry',
    ]) {
      expect(() => driver.exec(statement), statement).toThrow();
    }
    expect(driver.prepare('SELECT count(*) n, sum(pairs) p FROM ledger_entry').get()).toEqual({
      n: 1,
      p: 1000,
    });
  });

  test.each([0, -1, 1.5, NaN, Infinity, 2 ** 53])('of %d pairs is refused', async pairs => {
    const {database, makeKey, spenderOf} = ledger();
    const spender = spenderOf(await makeKey());
    database.driver.exec(`UPDATE account SET allowance = ${Number.MAX_SAFE_INTEGER}`);
    expect(() => entries.charge(database.driver, spender, 'moments', pairs, NOW)).toThrow();
    expect(balancesOf(database).kept).toEqual([]);
  });
});

describe('a reservation', () => {
  const closings = [
    ['settled', 'settled', entries.settle, entries.settle],
    ['settled', 'released', entries.settle, entries.release],
    ['released', 'settled', entries.release, entries.settle],
    ['released', 'released', entries.release, entries.release],
  ] as const;

  test.each(closings)(
    'that is %s can not be %s after it',
    async (_first, _second, close, again) => {
      const {database, makeKey, spenderOf} = ledger();
      const {driver} = database;
      const id = entries.reserve(driver, spenderOf(await makeKey()), 'fields', 5000, NOW);
      close(driver, id, NOW);
      const before = balancesOf(database);
      expect(() => again(driver, id, NOW)).toThrow();
      expect(balancesOf(database)).toEqual(before);
    },
  );

  test('is the only thing that can be settled or released', async () => {
    const {database, makeKey, spenderOf} = ledger();
    const {driver} = database;
    const charge = entries.charge(driver, spenderOf(await makeKey()), 'fields', 5000, NOW);
    for (const close of [entries.settle, entries.release]) {
      expect(() => close(driver, charge, NOW)).toThrow(RangeError);
      expect(() => close(driver, 999, NOW)).toThrow(RangeError);
    }
  });

  test('holds what others could spend, and gives it back when it is released', async () => {
    const {database, makeKey, spenderOf} = ledger();
    const {driver} = database;
    const spender = spenderOf(await makeKey({monthlyLimit: 10_000}));
    const id = entries.reserve(driver, spender, 'fields', 9000, NOW);
    expect(entries.left(driver, spender, NOW)).toEqual({allowance: 10_000, left: 1000});
    expect(() => entries.charge(driver, spender, 'fields', 1001, NOW)).toThrow(/1000 are left/);
    entries.release(driver, id, NOW);
    expect(entries.left(driver, spender, NOW).left).toBe(10_000);
  });

  test('made in the last second of a month belongs to that month, whenever it is settled', async () => {
    const {database, makeKey, spenderOf} = ledger();
    const {driver} = database;
    const spender = spenderOf(await makeKey());
    const late = new Date('2026-12-31T23:59:59.999Z');
    const id = entries.reserve(driver, spender, 'fields', 5000, late);
    entries.settle(driver, id, new Date('2027-01-01T00:00:03Z'));
    expect(driver.prepare('SELECT DISTINCT day FROM ledger_entry').all()).toEqual([
      {day: '2026-12-31'},
    ]);
    expect(driver.prepare('SELECT DISTINCT month FROM balance').all()).toEqual([
      {month: '2026-12'},
    ]);
    const month = new Date('2027-01-01T00:00:00Z');
    expect(entries.left(driver, spender, month).left).toBe(1e9);
  });
});

test('what an earlier process left held is released once, and nothing else is', async () => {
  const {database, makeKey, spenderOf} = ledger();
  const {driver} = database;
  const spender = spenderOf(await makeKey());
  const settled = entries.reserve(driver, spender, 'fields', 1000, NOW);
  entries.settle(driver, settled, NOW);
  entries.release(driver, entries.reserve(driver, spender, 'fields', 2000, NOW), NOW);
  entries.reserve(driver, spender, 'fields', 4000, NOW);
  entries.reserve(driver, spender, 'fields', 8000, NOW);
  expect(entries.releaseAbandoned(driver, NOW)).toBe(2);
  expect(entries.releaseAbandoned(driver, NOW)).toBe(0);
  expect(balancesOf(database).kept).toMatchObject([
    {settled: 1000, held: 0},
    {settled: 1000, held: 0},
  ]);
});
