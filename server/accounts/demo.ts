import type {Key, Operation, Role} from '../../shared/api.ts';
import type {Database} from '../db/open.ts';
import * as apiKeys from '../ledger/api-keys.ts';
import * as entries from '../ledger/entries.ts';
import {rfc3339} from '../ledger/period.ts';
import {hashPassword} from './passwords.ts';
import * as people from './people.ts';

/** The sign-ins and the key of the demo, as they are written beside the database. */
export interface DemoCredentials {
  readonly apiKey: string;
  readonly people: readonly {
    readonly email: string;
    readonly password: string;
    readonly role: Role;
    readonly account: string;
  }[];
}

interface DemoAccount {
  readonly name: string;
  readonly allowance: number;
  readonly people: readonly (readonly [name: string, email: string, role: Role])[];
}

// An invented scenario: a maker of rotary-bell coating booths, a maker of dust precipitators, and
// the operator of the service.
const accounts: readonly DemoAccount[] = [
  {
    name: 'Aldervane Coating',
    allowance: 1e13,
    people: [
      ['Ines Halloran', 'ines.halloran@aldervane.example', 'owner'],
      ['Jonas Ekdahl', 'jonas.ekdahl@aldervane.example', 'developer'],
      ['Mirela Castan', 'mirela.castan@aldervane.example', 'reader'],
    ],
  },
  {
    name: 'Corvane Filters',
    allowance: 2e12,
    people: [
      ['Tomas Brandvik', 'tomas.brandvik@corvane.example', 'owner'],
      ['Leila Osei', 'leila.osei@corvane.example', 'developer'],
    ],
  },
  {
    name: 'Fieldstead operations',
    allowance: 1e12,
    people: [['Rune Albrecht', 'rune.albrecht@fieldstead.example', 'admin']],
  },
];

/** The burst and the allowance of the demo key let a load test run. */
const DEMO_BURST = 20_000;
const DAY = 86_400_000;

/** Fills an empty database with the demo scenario. */
export async function seedDemo(database: Database, now: Date): Promise<DemoCredentials> {
  const signIns: DemoCredentials['people'][number][] = [];
  const made: {accountId: string; personId: string}[] = [];
  for (const account of accounts) {
    const accountId = await people.openAccount(database, account, now);
    for (const [name, email, role] of account.people) {
      const password = people.randomPassword();
      const passwordHash = await hashPassword(password);
      const personId = await people.addPerson(
        database,
        {accountId, email, name, role, passwordHash},
        now,
      );
      signIns.push({email, password, role, account: account.name});
      made.push({accountId, personId});
    }
  }
  const [owner] = made;
  const apiKey = await seedKeys(database, owner, now);
  return {apiKey, people: signIns};
}

async function seedKeys(database: Database, owner: apiKeys.Maker, now: Date): Promise<string> {
  const before = (days: number): Date => new Date(now.getTime() - days * DAY);
  const make = (name: string, at: Date, more: Partial<Parameters<typeof apiKeys.create>[2]> = {}) =>
    apiKeys.create(database, owner, {name, scopes: ['compute:run'], ...more}, at);

  const demo = await make('Bell studio plug-in', before(50), {
    scopes: ['compute:run', 'usage:read'],
    burst: DEMO_BURST,
  });
  const sweep = await make('Nightly sweep', before(60), {monthlyLimit: 7e11, burst: 40});
  const twin = await make('Booth twin (C++)', before(70), {monthlyLimit: 3e11});
  const fair = await make('Trade-fair demo', before(90), {
    monthlyLimit: 2e10,
    expiresAt: rfc3339(before(30)),
  });
  const old = await make('Old batch host', before(80), {monthlyLimit: 4e11});
  const revokedAt = before(40);
  apiKeys.revoke(database, owner.accountId, old.id, revokedAt);
  apiKeys.rotate(database, owner, twin.id, 24, now);
  const ended = {...old, revokedAt: rfc3339(revokedAt)};
  seedHistory(database, owner, [sweep, twin, fair, ended], now);
  return demo.secret;
}

/**
 * Usage of the two months before this one, so that charts have something to show, while the present
 * month holds nothing but what was really called.
 */
function seedHistory(database: Database, owner: apiKeys.Maker, keys: Key[], now: Date): void {
  const random = generator(20261201);
  const operations: readonly Operation[] = ['fields', 'potentials', 'forces', 'moments'];
  const first = Date.UTC(now.getUTCFullYear(), now.getUTCMonth() - 2, 1);
  const end = Date.UTC(now.getUTCFullYear(), now.getUTCMonth(), 1);
  const enter = database.driver.transaction(() => {
    for (let day = first; day < end; day += DAY) {
      const isWeekend = new Date(day).getUTCDay() % 6 === 0;
      for (const key of keys) {
        if (day < Date.parse(key.createdAt) || random() < (isWeekend ? 0.7 : 0.1)) continue;
        // A day earlier than the end, so that no call of the last day falls behind it.
        if (day + DAY > Date.parse(key.revokedAt ?? key.expiresAt ?? rfc3339(now))) continue;
        const spender = {
          accountId: owner.accountId,
          lineageId: key.id,
          sourceId: key.id,
          personId: null,
        };
        const calls = 1 + Math.floor(random() * 12);
        for (let call = 0; call < calls; call++) {
          const at = new Date(day + (7 + 11 * random()) * 3_600_000);
          const pairs = Math.round(10 ** (6 + 2.7 * random()));
          entries.charge(
            database.driver,
            spender,
            operations[Math.floor(4 * random() ** 2)],
            pairs,
            at,
          );
        }
      }
    }
  });
  enter.immediate();
}

/** Numbers in [0, 1) that are the same at every start (Park and Miller, Comm. ACM 31, 1988). */
function generator(seed: number): () => number {
  let state = seed % 2_147_483_647;
  return () => {
    state = (state * 48_271) % 2_147_483_647;
    return (state - 1) / 2_147_483_646;
  };
}
