import {afterEach, beforeEach, describe, expect, test} from 'vitest';

import type {ProblemCode, Quota} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {startService, type ServiceOptions, type TestService} from '../support/service.ts';
import {balancesOf} from './ledger.ts';

let service: TestService;
const restart = async (options: ServiceOptions): Promise<void> => {
  await service.close();
  service = await startService(options);
};
beforeEach(async () => {
  service = await startService();
});
afterEach(() => service.close());

const charges = {x: [0], y: [0], z: [0], charge: [1]};
const small = {bodies: [{charges}]};
/** About half a second of two threads. */
const large = {
  bodies: [{charges: columns(2000)}],
  targets: {
    path: {
      vertices: [
        [0, 0, 1],
        [1, 0, 1],
      ],
      samples: 50_000,
    },
  },
};

function columns(count: number): object {
  const ones = new Array<number>(count).fill(1);
  return {x: ones.map((_one, index) => index), y: ones, z: ones, charge: ones};
}

async function account(): Promise<Quota['account']> {
  const response = await fetch(`${service.baseUrl}/v1/quota`, {
    headers: {Authorization: `Bearer ${service.key.secret}`},
  });
  return ((await response.json()) as Quota).account;
}

/** Nothing was charged, nothing is held, and the books agree. */
async function expectFree(): Promise<void> {
  expect(await account()).toMatchObject({settled: 0, held: 0});
  const {kept, summed} = balancesOf(service.deps.database);
  expect(kept).toEqual(summed);
  expect(service.deps.database.driver.prepare('SELECT sum(calls) n FROM usage_day').get()).toEqual({
    n: null,
  });
}

const send = (body: object | string, signal?: AbortSignal): Promise<Response> =>
  fetch(`${service.baseUrl}/v1/potentials`, {
    method: 'POST',
    headers: {Authorization: `Bearer ${service.key.secret}`, 'Content-Type': 'application/json'},
    body: typeof body === 'string' ? body : JSON.stringify(body),
    ...(signal ? {signal} : {}),
  });

describe('not charged is', () => {
  const refusals: readonly (readonly [ProblemCode, object | string])[] = [
    ['malformed-json', '{'],
    ['missing-member', small],
    ['unknown-member', {...small, targets: {points: {x: [1], y: [0], z: [0]}}, more: 1}],
  ];
  test.each(refusals)('a refusal: %s', async (code, body) => {
    await expectProblem(service, await send(body), code);
    await expectFree();
  });

  test('a refusal that only the threads find', async () => {
    const targets = {
      path: {
        vertices: [
          [0, 1, 1],
          [3000, 1, 1],
        ],
        samples: 30_001,
      },
    };
    const response = await send({...large, targets, onCoincidence: 'reject'});
    await expectProblem(service, response, 'coincident-target');
    await expectFree();
  });

  test('a call over the limit', async () => {
    await restart({allowance: 999});
    await expectProblem(service, await service.post('moments', small), 'exceeds-limit');
    await expectFree();
  });

  test('a call that found the queue full', async () => {
    await restart({limits: {queuedCalls: 1}});
    const first = send(large);
    await expect.poll(async () => (await account()).held).toBe(1e8);
    const second = await send(large);
    await expectProblem(service, second, 'overloaded');
    expect(Number(second.headers.get('retry-after'))).toBeGreaterThan(0);
    expect((await first).status).toBe(200);
    expect(await account()).toMatchObject({settled: 1e8, held: 0});
  });

  test('a call that took too long', async () => {
    await restart({limits: {computeMilliseconds: 20}});
    await expectProblem(service, await send(large), 'time-out');
    await expectFree();
    // The threads are free again.
    await expect
      .poll(async () => (await fetch(`${service.baseUrl}/readyz`)).status, {timeout: 5000})
      .toBe(200);
  });

  test('a call whose caller left, within a quarter of a second', async () => {
    const controller = new AbortController();
    const gone = send(large, controller.signal);
    await expect.poll(async () => (await account()).held).toBe(1e8);
    controller.abort();
    await expect(gone).rejects.toThrow();
    await expect.poll(async () => (await account()).held, {timeout: 500, interval: 20}).toBe(0);
    await expectFree();
  });

  test('a call that failed by a fault of ours', async () => {
    const {engine} = service.deps;
    Object.assign(engine, {
      run: () => Promise.reject(new Error('a thread died')),
      runInline: () => {
        throw new Error('a bug');
      },
    });
    await expectProblem(service, await send(large), 'internal');
    await expectProblem(service, await service.post('moments', small), 'internal');
    await expectFree();
  });

  test('an estimate', async () => {
    const response = await service.post('estimates', {operation: 'moments', request: small});
    expect(response.status).toBe(200);
    await expectFree();
  });

  test('a repetition', async () => {
    const headers = {'Idempotency-Key': 'once'};
    for (let i = 0; i < 3; i++) await service.post('moments', small, headers);
    expect((await account()).settled).toBe(1000);
  });

  test('reading quota and usage', async () => {
    for (const path of ['quota', 'usage']) {
      const response = await fetch(`${service.baseUrl}/v1/${path}`, {
        headers: {Authorization: `Bearer ${service.key.secret}`},
      });
      expect(response.status).toBe(200);
    }
    await expectFree();
  });
});
