import Sqlite from 'better-sqlite3';
import {afterEach, beforeEach, expect, test} from 'vitest';

import {expectProblem} from '../support/problem.ts';
import {startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeEach(async () => {
  service = await startService({limits: {queuedCalls: 1}});
});
afterEach(() => service.close());

const get = (path: string): Promise<Response> => fetch(service.baseUrl + path);

test('a service that is well says so to anybody, and no more', async () => {
  for (const path of ['/livez', '/readyz']) {
    const response = await get(path);
    expect(response.status).toBe(200);
    expect(await response.json()).toEqual({status: 'ok'});
  }
});

test(
  'a database that can not be written makes the service not ready, until it can again',
  {retry: 3},
  async () => {
    const {driver} = service.deps.database;
    const other = new Sqlite(driver.name);
    other.exec('BEGIN IMMEDIATE');
    const start = performance.now();
    const response = await get('/readyz');
    const {detail} = await expectProblem(service, response, 'not-ready');
    expect(performance.now() - start).toBeLessThan(2000);
    expect(detail).toBe('The service is not ready.');
    expect(response.headers.get('retry-after')).toBe('2');
    expect((await get('/livez')).status).toBe(200);
    other.exec('ROLLBACK');
    other.close();
    expect((await get('/readyz')).status).toBe(200);
    // The log has the cause, which the answer has not.
    expect(service.logLines.join('')).toContain('"fault":"database"');
  },
);

test('a database that is read-only makes the service not ready, until it is not', async () => {
  const {driver} = service.deps.database;
  driver.pragma('query_only = true');
  await expectProblem(service, await get('/readyz'), 'not-ready');
  driver.pragma('query_only = false');
  expect((await get('/readyz')).status).toBe(200);
});

test('a full queue makes the service not ready, until it has room', async () => {
  const charge = Array.from({length: 4000}, (_none, index) => index);
  const controller = new AbortController();
  const long = fetch(`${service.baseUrl}/v1/potentials`, {
    method: 'POST',
    signal: controller.signal,
    headers: {
      Authorization: `Bearer ${service.key.secret}`,
      'Content-Type': 'application/json',
    },
    body: JSON.stringify({
      bodies: [{charges: {x: charge, y: charge, z: charge, charge}}],
      targets: {
        path: {
          vertices: [
            [0, 0, 1],
            [1, 0, 1],
          ],
          samples: 100_000,
        },
      },
    }),
  });
  await expect.poll(() => service.deps.engine.load().queued).toBe(1);
  await expectProblem(service, await get('/readyz'), 'not-ready');
  controller.abort();
  await expect(long).rejects.toThrow();
  await expect.poll(async () => (await get('/readyz')).status, {timeout: 5000}).toBe(200);
});

test('looking whether it is ready leaves no trace in the database', async () => {
  const {driver} = service.deps.database;
  const before = driver.serialize();
  expect((await get('/readyz')).status).toBe(200);
  expect(driver.serialize().equals(before)).toBe(true);
});
