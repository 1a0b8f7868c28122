import {expect, test} from 'vitest';

import type {Quota, UsageReport} from '../../shared/api.ts';
import {startService, type TestService} from '../support/service.ts';
import {balancesOf} from './ledger.ts';

const small = {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]};
// Above 500 rows a call goes to the threads, so it reserves first and settles later.
const threaded = {
  bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}],
  targets: {
    path: {
      vertices: [
        [1, 0, 0],
        [2, 0, 0],
      ],
      samples: 1000,
    },
  },
};

async function read<Answer>(service: TestService, secret: string, path: string): Promise<Answer> {
  const response = await fetch(service.baseUrl + path, {
    headers: {Authorization: `Bearer ${secret}`},
  });
  return (await response.json()) as Answer;
}

test.each([
  ['answered at once', 'moments', small],
  ['computed by the threads', 'potentials', threaded],
] as const)(
  'of 200 calls at a time with a balance for exactly 10, 10 are admitted: calls that are %s',
  async (_how, operation, body) => {
    const service = await startService();
    const key = await service.makeKey({
      monthlyLimit: 10_000,
      burst: 1000,
      scopes: ['compute:run', 'usage:read'],
    });
    const headers = {Authorization: `Bearer ${key.secret}`};
    const responses = await Promise.all(
      Array.from({length: 200}, () => service.post(operation, body, headers)),
    );
    const statuses = responses.map(({status}) => status);
    expect(statuses.filter(status => status === 200)).toHaveLength(10);
    expect(statuses.filter(status => status === 429)).toHaveLength(190);
    const quota = await read<Quota>(service, key.secret, '/v1/quota');
    expect(quota.key).toEqual({limit: 10_000, settled: 10_000, held: 0, left: 0});
    const usage = await read<UsageReport>(service, key.secret, '/v1/usage');
    expect([usage.calls, usage.pairs]).toEqual([10, 10_000]);
    const {kept, summed} = balancesOf(service.deps.database);
    expect(kept).toEqual(summed);
    await service.close();
  },
);

test('two keys of an account can not spend the same last pairs of its allowance', async () => {
  const service = await startService({allowance: 10_000});
  const other = await service.makeKey();
  const responses = await Promise.all(
    Array.from({length: 60}, (_none, i) =>
      service.post('moments', small, i % 2 ? {} : {Authorization: `Bearer ${other.secret}`}),
    ),
  );
  expect(responses.filter(({status}) => status === 200)).toHaveLength(10);
  await service.close();
});

test('a call that came in the last second of a month is charged to that month', async () => {
  let clock = new Date('2026-12-31T23:59:59Z');
  const service = await startService({now: () => clock});
  const call = service.post('potentials', threaded);
  await expect
    .poll(() => service.deps.database.driver.prepare('SELECT 1 FROM ledger_entry').get())
    .toBeDefined();
  clock = new Date('2027-01-01T00:00:01Z');
  expect((await call).status).toBe(200);
  expect((await read<Quota>(service, service.key.secret, '/v1/quota')).account.settled).toBe(0);
  const report = await read<UsageReport>(
    service,
    service.key.secret,
    '/v1/usage?since=2026-12-01&until=2027-01-01',
  );
  expect(report.days.map(({day, pairs}) => [day, pairs])).toEqual([['2026-12-31', 1000]]);
  await service.close();
});
