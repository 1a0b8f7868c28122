import {afterEach, beforeEach, describe, expect, test} from 'vitest';

import {expectProblem} from '../support/problem.ts';
import {PASSWORD, emailOf, startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeEach(async () => {
  service = await startService();
});
afterEach(() => service.close());

const body = {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]};

describe('a fault of our own', () => {
  test('of the database is answered with no word of it, and logged whole', async () => {
    service.deps.database.driver.exec('DROP TABLE balance');
    const response = await service.post('moments', body);
    const problem = await expectProblem(service, response, 'internal');
    expect(problem.detail).toBe('Nothing was charged.');
    await expect.poll(() => service.logLines.join('')).toContain('no such table');
    const line = service.logLines.find(one => one.includes('no such table')) ?? '';
    expect(JSON.parse(line)).toMatchObject({level: 50, requestId: problem.instance});
    expect(line).toContain('entries.ts');
  });

  test.each([
    ['an error', new Error('at /srv/secret.ts:1 SELECT 1')],
    ['something that is no error', 'at /srv/secret.ts:1 SELECT 1'],
    ['nothing', undefined],
    ['an error with a status', Object.assign(new Error('teapot'), {status: 418, expose: true})],
  ])('that throws %s is answered all the same', async (_what, thrown) => {
    Object.assign(service.deps.engine, {
      prepare: () => {
        // Whatever a broken part may throw.
        // eslint-disable-next-line @typescript-eslint/only-throw-error
        throw thrown;
      },
    });
    await expectProblem(service, await service.post('moments', body), 'internal');
    expect((await fetch(`${service.baseUrl}/livez`)).status).toBe(200);
  });

  test('while the session is looked up is a problem too', async () => {
    const visitor = await service.signIn('owner');
    service.deps.database.driver.exec('DROP TABLE session');
    await expectProblem(service, await visitor.fetch('/console/keys'), 'internal');
  });
});

test('ten planted secrets are in no line of the log', async () => {
  const secret = service.key.secret;
  const canary = (n: number): string => `canary-${n}-${secret.slice(17)}`;
  const get = (path: string, headers: Record<string, string> = {}): Promise<Response> =>
    fetch(service.baseUrl + path, {headers});
  // A header, an address, a cookie, a body, a name in a body, an id, an error, a password, a token
  // of the console and a key itself.
  await get('/v1/quota', {Authorization: `Bearer ${canary(1)}`});
  await get(`/v1/usage?since=${canary(2)}`);
  await get('/console/keys', {Cookie: `__Host-fieldstead=${canary(3)}`});
  await service.post('moments', {bodies: [{id: canary(4), charges: 1}]});
  await service.post('moments', {[canary(5)]: 1});
  await get('/livez', {'X-Request-Id': secret, 'User-Agent': canary(6), Referer: canary(6)});
  await fetch(`${service.baseUrl}/console/session`, {
    method: 'POST',
    headers: {'Content-Type': 'application/json'},
    body: JSON.stringify({email: emailOf('owner'), password: canary(7)}),
  });
  await get(`/console/keys/${canary(8)}`, {'X-CSRF-Token': canary(8)});
  await get(`/v1/quota?access_token=${secret}`);
  Object.assign(service.deps.engine, {
    prepare: () => {
      throw new Error(`could not use ${secret}`);
    },
  });
  await expectProblem(service, await service.post('moments', body), 'internal');
  const visitor = await service.signIn('owner');

  await expect.poll(() => service.logLines.length).toBeGreaterThan(11);
  const log = service.logLines.join('');
  expect(log).toContain('could not use');
  for (const planted of [
    'canary',
    secret.slice(17),
    secret.slice(17, -6),
    PASSWORD,
    emailOf('owner'),
    visitor.session.csrfToken,
  ]) {
    expect(log).not.toContain(planted);
  }
});

test('a line of the log says who, what and how it ended, and nothing else', async () => {
  await service.post('moments', body);
  await service.post('moments', '{');
  await expect.poll(() => service.logLines.length).toBe(2);
  const lines = service.logLines.map(line => JSON.parse(line) as Record<string, unknown>);
  const known = ['level', 'time', 'requestId', 'traceId', 'method', 'operation', 'status'];
  expect(Object.keys(lines[0])).toEqual([...known, 'key', 'pairs', 'milliseconds']);
  expect(lines[0]).toMatchObject({
    level: 30,
    method: 'POST',
    operation: 'createMoments',
    status: 200,
    key: service.key.id,
    pairs: 1000,
  });
  expect(Object.keys(lines[1])).toEqual([...known, 'problem', 'key', 'milliseconds']);
  expect(lines[1]).toMatchObject({status: 400, problem: 'malformed-json'});
});
