import {afterAll, beforeAll, describe, expect, test, vi} from 'vitest';

import * as apiKeys from '../../server/ledger/api-keys.ts';
import {createSecret} from '../../server/ledger/key-form.ts';
import type {ProblemCode} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {sendRaw} from '../support/raw-http.ts';
import {startService, type TestService} from '../support/service.ts';

const HOUR = 3_600_000;
let clock = Date.parse('2026-12-10T12:00:00Z');
let service: TestService;
beforeAll(async () => {
  service = await startService({now: () => new Date(clock)});
});
afterAll(() => service.close());

const ask = (headers: Record<string, string>, path = '/v1/quota'): Promise<Response> =>
  fetch(service.baseUrl + path, {headers});
const askWith = (token: string): Promise<Response> => ask({Authorization: `Bearer ${token}`});

/** The key with one character of its secret changed, so that its checksum is wrong. */
const mistyped = (secret: string): string =>
  secret.slice(0, 20) + (secret[20] === 'A' ? 'B' : 'A') + secret.slice(21);

test('no credentials are answered with a challenge that names no error', async () => {
  const response = await ask({});
  await expectProblem(service, response, 'key-required');
  expect(response.headers.get('www-authenticate')).toBe('Bearer realm="fieldstead"');
});

test('another scheme is answered as no credentials at all', async () => {
  const response = await ask({Authorization: 'Basic dXNlcjpwYXNz'});
  await expectProblem(service, response, 'key-required');
});

describe('a token that is not a valid key', () => {
  test('gets the same answer whatever is the matter with it', async () => {
    const unknown = createSecret().secret;
    const expired = await service.makeKey({expiresAt: new Date(clock + HOUR).toISOString()});
    const revoked = await service.makeKey();
    apiKeys.revoke(service.deps.database, service.accountId, revoked.id, new Date(clock));
    const retired = await service.makeKey();
    const maker = {accountId: service.accountId, personId: null};
    apiKeys.rotate(service.deps.database, maker, retired.id, 1, new Date(clock));
    expect((await askWith(expired.secret)).status).toBe(200);
    expect((await askWith(retired.secret)).status).toBe(200);
    clock += HOUR;

    const tokens = {
      unknown,
      expired: expired.secret,
      revoked: revoked.secret,
      retired: retired.secret,
      mistyped: mistyped(service.key.secret),
      foreign: 'eyJhbGciOiJIUzI1NiJ9.e30.c2lnbmF0dXJl',
    };
    const answers = new Set<string>();
    for (const token of Object.values(tokens)) {
      const response = await askWith(token);
      const challenge = response.headers.get('www-authenticate') ?? '';
      const {title, detail} = await expectProblem(service, response, 'invalid-key');
      expect(detail).not.toContain(token);
      answers.add(JSON.stringify([title, detail, challenge]));
    }
    expect([...answers]).toEqual([
      JSON.stringify([
        'The key is not valid',
        'The bearer token is not a key that is valid now.',
        'Bearer realm="fieldstead", error="invalid_token"',
      ]),
    ]);
  });

  test('is told from its checksum with no look at the database', async () => {
    const fresh = await startService();
    const prepare = vi.spyOn(fresh.deps.database.driver, 'prepare');
    const send = (token: string): Promise<Response> =>
      fetch(`${fresh.baseUrl}/v1/quota`, {headers: {Authorization: `Bearer ${token}`}});
    await expectProblem(fresh, await send(mistyped(fresh.key.secret)), 'invalid-key');
    expect(prepare).not.toHaveBeenCalled();
    // An unknown key with a right checksum is looked up, which shows that a look would be seen.
    await expectProblem(fresh, await send(createSecret().secret), 'invalid-key');
    expect(prepare).toHaveBeenCalledOnce();
    await fresh.close();
  });

  test('costs as much time as a known key with a wrong secret', {retry: 3}, async () => {
    const {driver} = service.deps.database;
    const known = await service.makeKey();
    apiKeys.revoke(service.deps.database, service.accountId, known.id, new Date(clock));
    const unknown = createSecret().secret;
    const spent: Record<string, number[]> = {};
    for (let i = 0; i < 10_000; i++) {
      for (const token of i % 2 ? [known.secret, unknown] : [unknown, known.secret]) {
        const start = performance.now();
        apiKeys.authenticate(driver, token, new Date(clock));
        (spent[token] ??= []).push(performance.now() - start);
      }
    }
    // The middle one of 10,000, so that a pause of the machine does not count. Seen from outside,
    // a request around it takes 200 µs and more, of which the difference must not be 5 %.
    const [ofUnknown, ofKnown] = [unknown, known.secret].map(token => median(spent[token]));
    expect(Math.abs(ofKnown - ofUnknown)).toBeLessThan(0.01);
  });
});

const median = (values: number[]): number => values.sort((a, b) => a - b)[values.length >> 1];

describe('the Authorization header', () => {
  const withLines = (...lines: string[]): Promise<Response> =>
    sendRaw(service.baseUrl, ['GET /v1/quota HTTP/1.1', 'Host: a', ...lines, '', ''].join('\r\n'));
  const cases: readonly (readonly [
    what: string,
    lines: (key: string) => string[],
    code: ProblemCode | 200,
  ])[] = [
    ['with the scheme in lower case is taken', key => [`Authorization: bearer ${key}`], 200],
    [
      'with two spaces is taken, as its grammar allows',
      key => [`Authorization: Bearer  ${key}`],
      200,
    ],
    ['without a token is malformed', () => ['Authorization: Bearer'], 'malformed-authorization'],
    [
      'with two tokens is malformed',
      key => [`Authorization: Bearer ${key} ${key}`],
      'malformed-authorization',
    ],
    [
      'with a comma is malformed',
      key => [`Authorization: Bearer ${key},`],
      'malformed-authorization',
    ],
    [
      'with quotes is malformed',
      key => [`Authorization: Bearer "${key}"`],
      'malformed-authorization',
    ],
    [
      'given twice is malformed',
      key => [`Authorization: Bearer ${key}`, `Authorization: Bearer ${key}`],
      'malformed-authorization',
    ],
    [
      'given twice, first with another scheme, is malformed',
      key => ['Authorization: Basic YTpi', `Authorization: Bearer ${key}`],
      'malformed-authorization',
    ],
    [
      'with other letters is malformed',
      key => [`Authorization: Bearer ${key}\u00e4`],
      'malformed-authorization',
    ],
  ];

  test.each(cases)('%s', async (_what, lines, code) => {
    const response = await withLines(...lines(service.key.secret));
    if (code === 200) {
      expect(response.status).toBe(200);
      return;
    }
    await expectProblem(service, response, code);
    expect(response.headers.get('www-authenticate')).toBe(
      'Bearer realm="fieldstead", error="invalid_request"',
    );
  });
});

describe('a key in the wrong place', () => {
  const headers = (): Record<string, string> => ({Authorization: `Bearer ${service.key.secret}`});

  test.each([
    ['as access_token in the address', () => `?access_token=${service.key.secret}`],
    ['as access_token of another kind', () => '?access_token=abc'],
    ['under any name in the address', () => `?since=${service.key.secret}`],
    ['escaped in the address', () => `?since=%66st_${service.key.secret.slice(4)}`],
  ])('%s is refused, with or without one in the right place', async (_where, query) => {
    for (const more of [{}, headers()]) {
      const response = await ask(more, `/v1/usage${query()}`);
      const problem = await expectProblem(service, response, 'misplaced-credential');
      expect(JSON.stringify(problem)).not.toContain(service.key.secret);
      expect(response.headers.get('www-authenticate')).toMatch(/error="invalid_request"/);
    }
  });

  test.each([
    ['access_token', () => ({access_token: 'abc'})],
    ['a text', () => ({bodies: [{id: service.key.secret, charges: {}}]})],
    ['a name', () => ({[service.key.secret]: 1})],
  ])('as %s in the body is refused', async (_where, body) => {
    const response = await service.post('moments', body());
    await expectProblem(service, response, 'misplaced-credential');
  });

  test('in a form is refused as a form', async () => {
    const response = await service.post('moments', `access_token=${service.key.secret}`, {
      'Content-Type': 'application/x-www-form-urlencoded',
    });
    await expectProblem(service, response, 'unsupported-media-type');
  });

  test.each(['X-Api-Key', 'Cookie', 'Proxy-Authorization'])(
    'in %s is not looked at',
    async name => {
      await expectProblem(service, await ask({[name]: service.key.secret}), 'key-required');
    },
  );
});

test('a key is at rest nowhere in the files of the database', async () => {
  const {secret} = await service.makeKey();
  expect((await askWith(secret)).status).toBe(200);
  const dump = service.deps.database.driver.serialize().toString('latin1');
  expect(dump).toContain(secret.slice(4, 16));
  expect(dump).not.toContain(secret.slice(17));
  expect(dump).not.toContain(secret.slice(17, -6));
});

test('strangers are slowed down, and holders of keys are not', async () => {
  const strict = await startService({limits: {strangerCalls: 3}});
  const send = (token: string): Promise<Response> =>
    fetch(`${strict.baseUrl}/v1/quota`, {headers: {Authorization: `Bearer ${token}`}});
  for (let i = 0; i < 3; i++) {
    await expectProblem(strict, await send(createSecret().secret), 'invalid-key');
  }
  const response = await send(createSecret().secret);
  await expectProblem(strict, response, 'rate-limited');
  expect(Number(response.headers.get('retry-after'))).toBeGreaterThan(0);
  expect((await send(strict.key.secret)).status).toBe(200);
  await strict.close();
});
