import {gzipSync, brotliCompressSync, deflateSync} from 'node:zlib';
import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import type {Quota} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {startService, type TestService} from '../support/service.ts';
import {meaningless, text, tooMuch, unreadable, withCharges} from './bad-bodies.ts';

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

async function settledAndHeld(): Promise<[number, number]> {
  const response = await fetch(`${service.baseUrl}/v1/quota`, {
    headers: {Authorization: `Bearer ${service.key.secret}`},
  });
  const {account} = (await response.json()) as Quota;
  return [account.settled, account.held];
}

async function expectStillWell(): Promise<void> {
  expect((await fetch(`${service.baseUrl}/readyz`)).status).toBe(200);
}

describe.each([...unreadable, ...meaningless, ...tooMuch])(
  'a body of $what',
  ({body, code, pointer, operation = 'potentials'}) => {
    test(`is refused as ${code}, costs nothing and does no harm`, async () => {
      const before = await settledAndHeld();
      const problem = await expectProblem(service, await service.post(operation, body), code);
      if (pointer === undefined) {
        expect(problem.errors).toBeUndefined();
      } else {
        expect(problem.errors?.[0]).toMatchObject({pointer, code});
        expect(problem.errorCount).toBe(problem.errors?.length);
      }
      expect(await settledAndHeld()).toEqual(before);
      await expectStillWell();
    });
  },
);

test('invalid UTF-8 is refused, wherever it stands', async () => {
  const bytes = Buffer.from(text.replace('{', '{"units":{"length":"?"},'), 'latin1');
  bytes[bytes.indexOf('?')] = 0xff;
  await expectProblem(service, await postBytes(bytes), 'invalid-utf8');
  // A surrogate half, written as if it were a character.
  const half = Buffer.concat([
    Buffer.from('{"'),
    Buffer.from([0xed, 0xa0, 0x80]),
    Buffer.from('"'),
  ]);
  await expectProblem(service, await postBytes(half), 'invalid-utf8');
});

test('of many faults the first twenty are named and all are counted', async () => {
  const wrong = new Array<string>(500).fill('?');
  const response = await service.post('potentials', withCharges({x: wrong}));
  const problem = await expectProblem(service, response, 'wrong-type');
  expect(problem.errorCount).toBe(500);
  expect(problem.errors?.map(({pointer}) => pointer)).toEqual(
    Array.from({length: 20}, (_none, index) => `/bodies/0/charges/x/${index}`),
  );
});

// A figure of the service, measured on a machine that others use too: it may be tried again.
test('a million brackets cost neither memory nor time of others', {retry: 3}, async () => {
  const brackets = '['.repeat(2e6);
  await service.post('potentials', brackets);
  const before = process.memoryUsage().rss;
  for (let i = 0; i < 5; i++) await service.post('potentials', brackets);
  // The five bodies themselves are 10 MB, once in the client and once in the service.
  expect(process.memoryUsage().rss - before).toBeLessThan(40e6);
  const start = performance.now();
  await service.post('potentials', brackets);
  expect(performance.now() - start).toBeLessThan(500);
});

test.each([
  ['gzip', gzipSync],
  ['deflate', deflateSync],
  ['br', brotliCompressSync],
] as const)('a body in %s is read', async (encoding, compress) => {
  const response = await postBytes(compress(text), {'Content-Encoding': encoding});
  expect(response.status).toBe(200);
});

// A figure of the service, measured on a machine that others use too: it may be tried again.
test(
  'a compressed body over the limit is refused, however small it was sent',
  {retry: 3},
  async () => {
    const bomb = gzipSync(text + ' '.repeat(64 * 1024 * 1024));
    expect(bomb.length).toBeLessThan(100_000);
    const before = process.memoryUsage().rss;
    const response = await postBytes(bomb, {'Content-Encoding': 'gzip'});
    await expectProblem(service, response, 'body-too-large');
    expect(process.memoryUsage().rss - before).toBeLessThan(40e6);
  },
);

test('a body that is not in the encoding that it claims is refused', async () => {
  const response = await postBytes(Buffer.from(text), {'Content-Encoding': 'gzip'});
  await expectProblem(service, response, 'bad-request');
  const cut = gzipSync(text).subarray(0, 40);
  await expectProblem(service, await postBytes(cut, {'Content-Encoding': 'gzip'}), 'bad-request');
});

function postBytes(body: Uint8Array, headers: Record<string, string> = {}): Promise<Response> {
  return fetch(`${service.baseUrl}/v1/potentials`, {
    method: 'POST',
    body: new Uint8Array(body),
    headers: {
      Authorization: `Bearer ${service.key.secret}`,
      'Content-Type': 'application/json',
      ...headers,
    },
  });
}
