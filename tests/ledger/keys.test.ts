import {describe, expect, test} from 'vitest';

import * as apiKeys from '../../server/ledger/api-keys.ts';
import * as entries from '../../server/ledger/entries.ts';
import {createSecret, KEY_PATTERN, publicIdOf} from '../../server/ledger/key-form.ts';
import {eachLedger, NOW} from './ledger.ts';

const ledger = eachLedger();
const HOUR = 3_600_000;
const after = (milliseconds: number): Date => new Date(NOW.getTime() + milliseconds);

const isValid = (secret: string, at: Date): boolean =>
  apiKeys.authenticate(ledger().database.driver, secret, at) !== null;
const maker = (): apiKeys.Maker => ({accountId: ledger().accountId, personId: null});

describe('the form of a key', () => {
  test('is public id, secret and checksum, in letters and digits a double click selects', () => {
    const {secret, id, lastFour} = createSecret();
    expect(secret).toMatch(/^fst_[0-9A-Za-z]{12}_[0-9A-Za-z]{38}$/);
    expect(KEY_PATTERN.exec(secret)?.[1]).toBe(id);
    expect(publicIdOf(secret)).toBe(id);
    expect(secret.endsWith(lastFour)).toBe(true);
  });

  test('shows a slip of any one character, or of two neighbours', () => {
    const {secret} = createSecret();
    for (let i = 0; i < secret.length; i++) {
      const wrong = secret[i] === 'x' ? 'y' : 'x';
      expect(publicIdOf(secret.slice(0, i) + wrong + secret.slice(i + 1))).toBeNull();
      const swapped =
        secret.slice(0, i) +
        secret
          .slice(i, i + 2)
          .split('')
          .reverse()
          .join('') +
        secret.slice(i + 2);
      if (swapped !== secret) expect(publicIdOf(swapped)).toBeNull();
    }
  });

  test('never comes twice', () => {
    const secrets = Array.from({length: 1000}, () => createSecret().secret);
    expect(new Set(secrets).size).toBe(1000);
  });
});

describe('a rotation', () => {
  test('makes a successor with the same scopes and limits, and spends from one limit', async () => {
    const {database, makeKey, spenderOf} = ledger();
    const {driver} = database;
    const old = await makeKey({
      monthlyLimit: 3000,
      burst: 7,
      scopes: ['usage:read', 'compute:run'],
    });
    entries.charge(driver, spenderOf(old), 'moments', 1000, NOW);
    const successor = apiKeys.rotate(database, maker(), old.id, 24, NOW);
    expect(successor).toMatchObject({
      monthlyLimit: 3000,
      burst: 7,
      scopes: ['usage:read', 'compute:run'],
      predecessor: old.id,
      state: 'active',
    });
    expect(successor.secret).not.toBe(old.secret);
    entries.charge(driver, spenderOf(successor), 'moments', 1000, NOW);
    entries.charge(driver, spenderOf(old), 'moments', 1000, NOW);
    for (const key of [old, successor]) {
      expect(() => entries.charge(driver, spenderOf(key), 'moments', 1000, NOW)).toThrow(
        /0 are left/,
      );
    }
  });

  test('leaves the predecessor valid for the overlap, and not a moment longer', async () => {
    const {database, makeKey} = ledger();
    const old = await makeKey();
    const {secret} = apiKeys.rotate(database, maker(), old.id, 24, NOW);
    expect(isValid(old.secret, after(24 * HOUR - 1))).toBe(true);
    expect(isValid(old.secret, after(24 * HOUR))).toBe(false);
    expect(isValid(secret, after(25 * HOUR))).toBe(true);
  });

  test('without an overlap ends the predecessor at once', async () => {
    const {database, makeKey} = ledger();
    const old = await makeKey();
    apiKeys.rotate(database, maker(), old.id, 0, NOW);
    expect(isValid(old.secret, NOW)).toBe(false);
  });

  test('shows both keys, and which of them follows which', async () => {
    const {database, makeKey, accountId} = ledger();
    const old = await makeKey();
    const {id} = apiKeys.rotate(database, maker(), old.id, 24, NOW);
    const states = async (at: Date): Promise<unknown> =>
      Object.fromEntries(
        (await apiKeys.list(database, accountId, at)).map(key => [
          key.id,
          [key.state, key.successor],
        ]),
      );
    expect(await states(NOW)).toEqual({[old.id]: ['retiring', id], [id]: ['active', null]});
    expect(await states(after(24 * HOUR))).toMatchObject({[old.id]: ['expired', id]});
  });

  test('is refused for a key that has a successor, was revoked or has expired', async () => {
    const {database, makeKey, accountId} = ledger();
    const [twice, revoked] = [await makeKey(), await makeKey()];
    const expired = await makeKey({expiresAt: after(HOUR).toISOString()});
    apiKeys.rotate(database, maker(), twice.id, 24, NOW);
    apiKeys.revoke(database, accountId, revoked.id, NOW);
    for (const {id} of [twice, revoked, expired]) {
      expect(() => apiKeys.rotate(database, maker(), id, 24, after(2 * HOUR))).toThrow(
        expect.objectContaining({code: 'key-state'}),
      );
    }
  });
});

test('a revocation is immediate, irreversible, and no other key feels it', async () => {
  const {database, makeKey, accountId} = ledger();
  const [key, other] = [await makeKey(), await makeKey()];
  expect(isValid(key.secret, NOW)).toBe(true);
  apiKeys.revoke(database, accountId, key.id, NOW);
  expect(isValid(key.secret, NOW)).toBe(false);
  expect(isValid(key.secret, after(-HOUR))).toBe(false);
  apiKeys.revoke(database, accountId, key.id, after(HOUR));
  const listed = (await apiKeys.list(database, accountId, NOW)).find(({id}) => id === key.id);
  expect(listed).toMatchObject({state: 'revoked', revokedAt: '2026-12-10T12:00:00Z'});
  expect(isValid(other.secret, NOW)).toBe(true);
});

test('a key ends when it says, a year from now if it says nothing', async () => {
  const {makeKey} = ledger();
  const short = await makeKey({expiresAt: '2026-12-10T13:00:00Z'});
  expect(isValid(short.secret, after(HOUR - 1))).toBe(true);
  expect(isValid(short.secret, after(HOUR))).toBe(false);
  expect((await makeKey()).expiresAt).toBe('2027-12-10T12:00:00Z');
  await expect(makeKey({expiresAt: '2026-12-10T11:59:59Z'})).rejects.toMatchObject({
    code: 'out-of-range',
    errors: [{pointer: '/expiresAt'}],
  });
});

test('the list says what each key spent this month and when it was last used', async () => {
  const {database, makeKey, spenderOf, accountId} = ledger();
  const {driver} = database;
  const [used, unused] = [await makeKey(), await makeKey()];
  entries.charge(driver, spenderOf(used), 'moments', 1000, after(-30 * 24 * HOUR));
  entries.charge(driver, spenderOf(used), 'fields', 2000, NOW);
  entries.reserve(driver, spenderOf(used), 'fields', 4000, after(1000));
  const listed = new Map((await apiKeys.list(database, accountId, NOW)).map(key => [key.id, key]));
  expect(listed.get(used.id)).toMatchObject({
    spent: 2000,
    held: 4000,
    lastUsed: {at: '2026-12-10T12:00:00Z', operation: 'fields'},
  });
  expect(listed.get(unused.id)).toMatchObject({spent: 0, held: 0, lastUsed: null});
});
