import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import type {Estimate, FieldAnswer, Operation, ProblemCode, Quota} from '../../shared/api.ts';
import {randomNumbers} from '../engine/random.ts';
import {expectProblem} from '../support/problem.ts';
import {startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

async function settled(): Promise<number> {
  const response = await fetch(`${service.baseUrl}/v1/quota`, {
    headers: {Authorization: `Bearer ${service.key.secret}`},
  });
  const {account} = (await response.json()) as Quota;
  expect(account.held).toBe(0);
  return account.settled;
}

const random = randomNumbers(31);
const column = (count: number, value: (n: number) => number): number[] =>
  Array.from({length: count}, (_, n) => value(n));
/** Of few digits, so that bodies are short. */
const short = (): number => Math.round(1e4 * random()) / 1e4;
const cloud = (count: number) => ({
  x: column(count, short),
  y: column(count, short),
  z: column(count, short),
  charge: column(count, n => (n % 2 ? 1e-9 : -2e-9)),
});
const grid = (nx: number, ny: number, nz: number) => ({
  grid: {
    origin: [0.003, 0.004, 0.005],
    steps: [
      [1 / nx, 0, 0],
      [0, 1 / ny, 0],
      [0, 0, 1 / nz],
    ],
    counts: [nx, ny, nz],
  },
});

const small = {bodies: [{charges: cloud(3)}], targets: {points: {x: [2], y: [0], z: [0]}}};
/** Large enough that the multipole method is quicker. */
const large = {bodies: [{charges: cloud(6000)}], targets: grid(24, 24, 24)};

interface Refusal {
  readonly what: string;
  readonly operation: Operation | 'estimates';
  readonly body: object;
  readonly code: ProblemCode;
  readonly pointer: string;
}

const at = '/accuracy/tolerance';
const withTolerance = (tolerance: unknown): object => ({...small, accuracy: {tolerance}});
const refusals: readonly Refusal[] = [
  ...[9.9e-10, 1.001e-3, 1e-2, 0, -1e-6, 1e300].flatMap(tolerance =>
    (['potentials', 'fields'] as const).map(operation => ({
      what: `a tolerance of ${tolerance}`,
      operation,
      body: withTolerance(tolerance),
      code: 'out-of-range' as const,
      pointer: at,
    })),
  ),
  ...['1e-6', null, true, [1e-6], {value: 1e-6}].map(tolerance => ({
    what: `a tolerance that is ${JSON.stringify(tolerance)}`,
    operation: 'fields' as const,
    body: withTolerance(tolerance),
    code: 'wrong-type' as const,
    pointer: at,
  })),
  {
    what: 'a tolerance',
    operation: 'forces',
    body: {bodies: small.bodies, accuracy: {tolerance: 1e-6}},
    code: 'unknown-member',
    pointer: at,
  },
  {
    what: 'an accuracy',
    operation: 'moments',
    body: {bodies: small.bodies, accuracy: {tolerance: 1e-6}},
    code: 'unknown-member',
    pointer: '/accuracy',
  },
  {
    what: 'a tolerance that is too small in the request of an estimate',
    operation: 'estimates',
    body: {operation: 'fields', request: withTolerance(1e-10)},
    code: 'out-of-range',
    pointer: `/request${at}`,
  },
  {
    what: 'a charge beyond 1e24',
    operation: 'fields',
    body: {
      ...withTolerance(1e-6),
      bodies: [{charges: {x: [0, 1.1e24], y: [0, 0], z: [0, 0], charge: [1, 1]}}],
    },
    code: 'out-of-range',
    pointer: '/bodies/0/charges/x/1',
  },
  {
    what: 'a target beyond 1e24',
    operation: 'potentials',
    body: {...withTolerance(1e-6), targets: {points: {x: [1], y: [-2e24], z: [0]}}},
    code: 'out-of-range',
    pointer: '/targets/points/y/0',
  },
];

describe('refused and not charged is', () => {
  test.each(refusals)('$what, in $operation', async ({operation, body, code, pointer}) => {
    const before = await settled();
    const problem = await expectProblem(service, await service.post(operation, body), code);
    expect(problem.errors?.map(error => error.pointer)).toEqual([pointer]);
    expect(await settled()).toBe(before);
  });

  test('an answer of more rows than there may be, whatever the tolerance', async () => {
    const before = await settled();
    const body = {...large, targets: grid(200_001, 1, 1), accuracy: {tolerance: 1e-3}};
    const response = await service.post('potentials', body);
    await expectProblem(service, response, 'too-large-for-synchronous');
    expect(await settled()).toBe(before);
  });

  test('a tolerance that no method reaches, where a direct sum would be too large', async () => {
    const modest = await startService({limits: {synchronousPairs: 3e7}});
    // Pairs so tight that the field of one is below what its charges round to.
    const pairs = cloud(3000);
    const twins = (values: readonly number[], gap: number): number[] =>
      values.flatMap(value => [value + 1, value + 1 + gap]);
    const charges = {
      x: twins(pairs.x, 2 ** -50),
      y: twins(pairs.y, 0),
      z: twins(pairs.z, 0),
      charge: column(6000, n => (n % 2 ? 1e-9 : -1e-9)),
    };
    const body = {
      bodies: [{charges}],
      targets: {
        points: {
          x: column(6000, () => 1 + random()),
          y: pairs.x.flatMap(v => [v, v + 1]),
          z: pairs.y.flatMap(v => [v, v + 1]),
        },
      },
      accuracy: {tolerance: 1e-9},
    };
    const response = await modest.post('potentials', body);
    const problem = await expectProblem(modest, response, 'tolerance-not-reached');
    expect(problem.errors?.[0].pointer).toBe(at);
    const quota = await fetch(`${modest.baseUrl}/v1/quota`, {
      headers: {Authorization: `Bearer ${modest.key.secret}`},
    });
    expect(((await quota.json()) as Quota).account).toMatchObject({settled: 0, held: 0});
    await modest.close();
  });
});

describe('the method', () => {
  const choices = [
    {what: 'few charges and targets', request: {...small}, method: 'direct'},
    {what: 'many', request: {...large}, method: 'multipole'},
    {what: 'many, with bounds', request: {...large, accuracy: {bounds: true}}, method: 'direct'},
    {
      what: 'many, with the gradient',
      request: {...large, quantities: ['fieldGradient']},
      method: 'direct',
    },
    {
      what: 'many, with field and magnitude',
      request: {...large, quantities: ['potential', 'field', 'magnitude']},
      method: 'multipole',
    },
    {what: 'many, without a tolerance', request: {...large, isWithout: true}, method: 'direct'},
  ] as const;

  test.each(choices)('for $what is $method, as estimated, at that price', async choice => {
    const {isWithout, accuracy, ...rest} = choice.request as Record<string, unknown> & {
      isWithout?: boolean;
      accuracy?: object;
    };
    const tolerance = 1e-5;
    const request = {...rest, ...(isWithout ? {} : {accuracy: {...accuracy, tolerance}})};
    const estimate = await service.call<Estimate>('estimates', {operation: 'fields', request});
    const before = await settled();
    const answer = await service.call<FieldAnswer>('fields', request);
    expect(answer.accuracy.method).toBe(choice.method);
    expect(estimate.method).toBe(choice.method);
    expect(answer.accuracy.tolerance).toBe(isWithout ? undefined : tolerance);
    expect(answer.cost.pairs).toBe(estimate.pairs);
    expect((await settled()) - before).toBe(estimate.pairs);
    if (choice.method === 'multipole') {
      expect(estimate.pairs).toBe(1000 * (6000 + 24 ** 3));
      expect(answer.accuracy.estimated?.potential).toBeLessThanOrEqual(tolerance);
    } else {
      expect(answer.accuracy).not.toHaveProperty('estimated');
    }
  });

  test('depends on the shape of a request and not on its values', async () => {
    const zeros = column(6000, () => 0);
    const atOnePlace = {x: zeros, y: zeros, z: zeros, charge: zeros};
    const request = {...large, bodies: [{charges: atOnePlace}], accuracy: {tolerance: 1e-5}};
    const estimate = await service.call<Estimate>('estimates', {operation: 'fields', request});
    expect(estimate.method).toBe('multipole');
    expect(estimate.pairs).toBe(1000 * (6000 + 24 ** 3));
  });
});

test('a call above what one may sum is refused with a hint, and answered with a tolerance', async () => {
  const before = await settled();
  const request = {bodies: [{charges: cloud(20_000)}], targets: grid(100, 100, 20)};
  const {detail} = await expectProblem(
    service,
    await service.post('potentials', request),
    'too-large-for-synchronous',
  );
  expect(detail).toContain('accuracy.tolerance');
  expect(await settled()).toBe(before);
  const answer = await service.call<FieldAnswer>('potentials', {
    ...request,
    accuracy: {tolerance: 1e-4},
  });
  expect(answer.count).toBe(200_000);
  expect(answer.accuracy.method).toBe('multipole');
  expect(await settled()).toBe(before + 1000 * 220_000);
});
