import {writeFileSync} from 'node:fs';
import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import type {FieldAnswer, Quota, UsageReport} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {startService, type TestService} from '../support/service.ts';

const HOUR = 3_600_000;
let clock = Date.parse('2026-12-10T12:00:00Z');
const now = (): Date => new Date(clock);
let service: TestService;
beforeAll(async () => {
  service = await startService({now});
});
afterAll(() => service.close());

const small = {
  bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1e-9]}}],
  targets: {points: {x: [1], y: [0], z: [0]}},
};
/** Computed by the threads, for about half a second, unless somebody stops it. */
const large = {
  ...small,
  bodies: [{charges: fill(2000)}],
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

function fill(count: number): object {
  const ones = new Array<number>(count).fill(1);
  return {x: ones.map((_one, index) => index), y: ones, z: ones, charge: ones};
}

const post = (key: string, body: object = small, more: RequestInit = {}): Promise<Response> =>
  fetch(`${service.baseUrl}/v1/potentials`, {
    method: 'POST',
    body: JSON.stringify(body),
    headers: {
      Authorization: `Bearer ${service.key.secret}`,
      'Content-Type': 'application/json',
      'Idempotency-Key': key,
    },
    ...more,
  });

async function read<Answer>(path: string): Promise<Answer> {
  const response = await fetch(service.baseUrl + path, {
    headers: {Authorization: `Bearer ${service.key.secret}`},
  });
  return (await response.json()) as Answer;
}
const calls = async (): Promise<number> => (await read<UsageReport>('/v1/usage')).calls;

/** What of an answer does not depend on the time it took. */
const lasting = ({columns, inputDigest, resultDigest}: FieldAnswer): object => ({
  columns,
  inputDigest,
  resultDigest,
});

describe('the same key with the same body', () => {
  test('is one charge, and the repetition says that it is one', async () => {
    const before = await calls();
    const first = await post('"one charge"');
    const again = await post('"one charge"');
    expect([first.status, again.status]).toEqual([200, 200]);
    expect(first.headers.get('fieldstead-replay')).toBeNull();
    expect(again.headers.get('fieldstead-replay')).toBe('true');
    expect(lasting((await again.json()) as FieldAnswer)).toEqual(
      lasting((await first.json()) as FieldAnswer),
    );
    expect(again.headers.get('ratelimit')).toMatch(/"month";.*;c=0;/);
    expect(await calls()).toBe(before + 1);
  });

  test('is the same key quoted and bare', async () => {
    await post('"quoted or bare"');
    expect((await post('quoted or bare')).headers.get('fieldstead-replay')).toBe('true');
    await post('"with \\"escapes\\" and \\\\"');
    const again = await post('with "escapes" and \\');
    expect(again.headers.get('fieldstead-replay')).toBe('true');
  });

  test('is one charge for fifty at a time', async () => {
    const before = await calls();
    const responses = await Promise.all(Array.from({length: 50}, () => post('fifty')));
    expect(responses.map(({status}) => status)).toEqual(new Array(50).fill(200));
    expect(await calls()).toBe(before + 1);
  });

  test('is one charge for fifty at a time of a call that the threads compute', async () => {
    const before = await calls();
    const responses = await Promise.all(Array.from({length: 50}, () => post('fifty large', large)));
    const statuses = responses.map(({status}) => status);
    expect(statuses.filter(status => status === 200).length).toBeGreaterThan(0);
    expect(statuses.filter(status => status !== 200 && status !== 409)).toEqual([]);
    expect(await calls()).toBe(before + 1);
  });

  test('is one charge across a restart of the service', async () => {
    expect((await post('restart')).status).toBe(200);
    const before = await calls();
    await service.stop();
    service = await startService({now, after: service});
    const again = await post('restart');
    expect(again.headers.get('fieldstead-replay')).toBe('true');
    expect(await calls()).toBe(before);
  });

  test('is another call after a day', async () => {
    await post('a day');
    clock += 24 * HOUR - 1000;
    expect((await post('a day')).headers.get('fieldstead-replay')).toBe('true');
    clock += 1000;
    const later = await post('a day');
    expect(later.status).toBe(200);
    expect(later.headers.get('fieldstead-replay')).toBeNull();
  });

  test('is another call for another operation and in another account', async () => {
    await post('shared words');
    const other = await service.post('fields', small, {'Idempotency-Key': 'shared words'});
    expect(other.status).toBe(200);
    expect(other.headers.get('fieldstead-replay')).toBeNull();
    const stranger = await startService();
    const response = await stranger.post('potentials', small, {'Idempotency-Key': 'shared words'});
    expect(response.headers.get('fieldstead-replay')).toBeNull();
    await stranger.close();
  });
});

test('the same key with another body is refused and costs nothing', async () => {
  await post('another body');
  const before = await calls();
  const other = {...small, targets: {points: {x: [2], y: [0], z: [0]}}};
  await expectProblem(service, await post('another body', other), 'idempotency-mismatch');
  expect(await calls()).toBe(before);
});

test('a key in flight is answered 409 with a time to come back', async () => {
  const first = post('in flight', large);
  await expect.poll(async () => (await read<Quota>('/v1/quota')).account.held).toBeGreaterThan(0);
  const second = await post('in flight', large);
  await expectProblem(service, second, 'call-in-flight');
  expect(Number(second.headers.get('retry-after'))).toBeGreaterThan(0);
  expect((await first).status).toBe(200);
  const third = await post('in flight', large);
  expect(third.headers.get('fieldstead-replay')).toBe('true');
});

test('a call that failed frees its key', async () => {
  const refused = {
    ...large,
    targets: {
      path: {
        vertices: [
          [0, 1, 1],
          [3000, 1, 1],
        ],
        samples: 30_001,
      },
    },
    onCoincidence: 'reject',
  };
  await expectProblem(service, await post('freed', refused), 'coincident-target');
  const response = await post('freed');
  expect(response.status).toBe(200);
  expect(response.headers.get('fieldstead-replay')).toBeNull();
});

test('a call whose caller left frees its key and what it held', async () => {
  const controller = new AbortController();
  const gone = post('caller left', large, {signal: controller.signal});
  await expect.poll(async () => (await read<Quota>('/v1/quota')).account.held).toBeGreaterThan(0);
  controller.abort();
  await expect(gone).rejects.toThrow();
  await expect.poll(async () => (await read<Quota>('/v1/quota')).account.held).toBe(0);
  const response = await post('caller left');
  expect(response.headers.get('fieldstead-replay')).toBeNull();
});

test('a call that a stop of the service cut off frees its key and what it held', async () => {
  const cut = post('cut off', large).catch(() => 'cut');
  await expect.poll(async () => (await read<Quota>('/v1/quota')).account.held).toBeGreaterThan(0);
  // As a crash leaves it: the reservation stays open in the file.
  const {driver} = service.deps.database;
  const file = driver.serialize();
  await service.stop();
  await cut;
  writeFileSync(driver.name, file);
  service = await startService({now, after: service});
  expect((await read<Quota>('/v1/quota')).account.held).toBe(0);
  expect((await post('cut off')).status).toBe(200);
});

test.each([
  ['longer than 255 characters', 'x'.repeat(256)],
  ['with letters beyond ASCII', 'sch\u00fcssel'],
  ['of nothing but quotes', '""'],
])('a key %s is refused', async (_what, key) => {
  await expectProblem(service, await post(key), 'invalid-header');
});
