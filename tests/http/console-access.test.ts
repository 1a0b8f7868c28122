import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import {operations, type ContractOperation} from '../../server/contract/document.ts';
import type {CreatedKey, Role, Session} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {
  emailOf,
  PASSWORD,
  startService,
  type TestService,
  type Visitor,
} from '../support/service.ts';

const ROLES: readonly Role[] = ['reader', 'developer', 'owner', 'admin'];
let clock = Date.parse('2026-12-10T12:00:00Z');
let service: TestService;
const visitors = new Map<Role, Visitor>();
beforeAll(async () => {
  service = await startService({now: () => new Date(clock)});
  for (const role of ROLES) visitors.set(role, await service.signIn(role));
});
afterAll(() => service.close());

const visitor = (role: Role): Visitor => {
  const found = visitors.get(role);
  if (!found) throw new RangeError(role);
  return found;
};

/** A request that would succeed if the caller may send it. */
async function requestFor({
  id,
  method,
  path,
  object,
}: ContractOperation): Promise<[string, RequestInit]> {
  const example = object.requestBody?.content['application/json'].example;
  const body = example === undefined ? {} : {body: JSON.stringify(example)};
  const key = path.includes('{id}') ? (await service.makeKey()).id : '';
  const address = path.replace('{id}', key).replace('{operation}', 'moments');
  if (id === 'deleteSession') return ['/console/session', {method: 'DELETE'}];
  return [address, {method: method.toUpperCase(), ...body}];
}

const ofPeople = operations.filter(({callers}) => callers === 'session');
const ofKeys = operations.filter(({callers}) => callers === 'apiKey');

describe.each(ofPeople.map(operation => ({id: operation.id, operation})))('$id', ({operation}) => {
  test.each(ROLES)('is answered to the role %s as the contract says', async role => {
    const [address, init] = await requestFor(operation);
    // Signing out ends the session that others of these tests go on with.
    const caller = operation.id === 'deleteSession' ? await service.signIn(role) : visitor(role);
    const response = await caller.fetch(address, init);
    if (operation.roles.length === 0 || operation.roles.includes(role)) {
      expect([200, 201, 204]).toContain(response.status);
    } else {
      await expectProblem(service, response, 'insufficient-role');
    }
  });

  test('is not answered without a session, nor to a key', async () => {
    const [address, init] = await requestFor(operation);
    for (const key of ['', `Bearer ${service.key.secret}`]) {
      const response = await fetch(service.baseUrl + address, {
        ...init,
        headers: {Authorization: key, 'Content-Type': 'application/json'},
      });
      await expectProblem(service, response, 'sign-in-required');
    }
  });

  test('is not answered to a session that was idle for half an hour', async () => {
    const [address, init] = await requestFor(operation);
    const idle = await service.signIn('owner');
    clock += 30 * 60_000;
    await expectProblem(service, await idle.fetch(address, init), 'sign-in-required');
    clock -= 30 * 60_000;
  });

  if (operation.method === 'get') return;
  test('needs the CSRF token of its own session', async () => {
    const [address, init] = await requestFor(operation);
    const other = visitor('developer').session.csrfToken;
    for (const token of ['', 'x', other]) {
      const response = await visitor('owner').fetch(address, {
        ...init,
        headers: {'X-CSRF-Token': token},
      });
      await expectProblem(service, response, 'cross-site-request');
    }
  });

  test.each([
    [{'Sec-Fetch-Site': 'cross-site'}],
    [{'Sec-Fetch-Site': 'same-site'}],
    [{Origin: 'https://elsewhere.example'}],
    [{Origin: 'null'}],
  ])('is refused if the browser says %s', async headers => {
    const [address, init] = await requestFor(operation);
    const response = await visitor('owner').fetch(address, {...init, headers});
    await expectProblem(service, response, 'cross-site-request');
  });
});

describe.each(ofKeys.map(operation => ({id: operation.id, operation})))('$id', ({operation}) => {
  test('is not answered to a session', async () => {
    const [address, init] = await requestFor(operation);
    await expectProblem(service, await visitor('owner').fetch(address, init), 'key-required');
  });
});

test('a key of another account is not found, as one that does not exist', async () => {
  const other = await startService();
  const theirs = other.key.id;
  const details: unknown[] = [];
  // Two accounts in one database.
  service.deps.database.driver.exec(
    `INSERT INTO account SELECT 'other', 'Other', 1, NULL, created_at FROM account LIMIT 1;
     INSERT INTO api_key SELECT 'otherAccount', 'other', 'otherAccount', NULL, NULL, name,
       secret_digest, last_four, scopes, monthly_limit, burst, created_at, expires_at, NULL, NULL
       FROM api_key LIMIT 1;`,
  );
  for (const id of ['otherAccount', theirs, 'x'.repeat(12)]) {
    for (const [path, method] of [
      [`/console/keys/${id}`, 'DELETE'],
      [`/console/keys/${id}/rotations`, 'POST'],
    ]) {
      const response = await visitor('owner').fetch(path, {method});
      const {detail} = await expectProblem(service, response, 'not-found');
      details.push(detail);
    }
  }
  expect(new Set(details).size).toBe(1);
  const list = (await (await visitor('owner').fetch('/console/keys')).json()) as {
    keys: CreatedKey[];
  };
  expect(list.keys.map(({id}) => id)).not.toContain('otherAccount');
  await other.close();
});

test('a created key is shown once: its secret is in no later answer', async () => {
  const owner = visitor('owner');
  const response = await owner.fetch('/console/keys', {
    method: 'POST',
    body: JSON.stringify({name: 'Once', scopes: ['compute:run']}),
  });
  expect(response.status).toBe(201);
  expect(response.headers.get('cache-control')).toBe('no-store');
  expect(response.headers.get('content-encoding')).toBeNull();
  const {secret, id} = (await response.json()) as CreatedKey;
  const list = await (await owner.fetch('/console/keys')).text();
  expect(list).toContain(id);
  expect(list).not.toContain(secret.slice(17));
  expect(list).not.toContain('digest');
});

test.each([
  ['accountId', {accountId: 'x'}],
  ['createdAt', {createdAt: '2026-01-01T00:00:00Z'}],
  ['id', {id: 'x'}],
])('a new key that brings its own %s is refused', async (_name, more) => {
  const response = await visitor('owner').fetch('/console/keys', {
    method: 'POST',
    body: JSON.stringify({name: 'n', scopes: ['compute:run'], ...more}),
  });
  await expectProblem(service, response, 'unknown-member');
});

test('a request run in the console is charged to the console, and the entry names the person', async () => {
  const {session, fetch: send} = visitor('developer');
  const response = await send('/console/requests/moments', {
    method: 'POST',
    body: JSON.stringify({bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]}),
  });
  expect(response.status).toBe(200);
  const entry = service.deps.database.driver
    .prepare('SELECT source_id, person_id, pairs FROM ledger_entry ORDER BY id DESC')
    .get();
  expect(entry).toEqual({source_id: 'console', person_id: session.person.id, pairs: 1000});
});

test('signing out ends the session on the server', async () => {
  const leaving = await service.signIn('reader');
  const response = await leaving.fetch('/console/session', {method: 'DELETE'});
  expect(response.status).toBe(204);
  expect(response.headers.get('set-cookie')).toMatch(/^__Host-fieldstead=;.*Max-Age=0/);
  expect(response.headers.get('clear-site-data')).toContain('"cookies"');
  await expectProblem(service, await leaving.fetch('/console/session'), 'sign-in-required');
});

test('a session ends after twelve hours, however busy it was', async () => {
  const start = clock;
  const busy = await service.signIn('reader');
  for (let minutes = 20; minutes < 12 * 60; minutes += 20) {
    clock = start + minutes * 60_000;
    expect((await busy.fetch('/console/session')).status).toBe(200);
  }
  clock = start + 12 * 3_600_000;
  await expectProblem(service, await busy.fetch('/console/session'), 'sign-in-required');
  clock = start;
});

test('a session reads back who is signed in', async () => {
  const response = await visitor('reader').fetch('/console/session');
  const {person, csrfToken} = (await response.json()) as Session;
  expect(person).toMatchObject({email: emailOf('reader'), role: 'reader'});
  expect(csrfToken).toBe(visitor('reader').session.csrfToken);
  expect(JSON.stringify(person)).not.toContain(PASSWORD);
});
