import fc from 'fast-check';
import {afterAll, beforeAll, expect, test} from 'vitest';

import type {Estimate, FieldAnswer, Operation} from '../../shared/api.ts';
import {startService, type TestService} from '../support/service.ts';

const REQUESTS = 500;
const SEED = 7_041;

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

const coordinate = fc.noBias(fc.integer({min: -1e6, max: 1e6})).map(value => value / 1e6);

/** Columns of numbers in [-1, 1); of fast-check is only their seed, which is much quicker. */
const columns = (
  names: readonly string[],
  max: number,
): fc.Arbitrary<Record<string, readonly number[]>> =>
  fc.record({count: fc.integer({min: 1, max}), seed: fc.noBias(fc.nat(2 ** 31 - 3))}).map(given => {
    let state = given.seed + 1;
    const next = (): number => {
      // Park and Miller, Comm. ACM 31, 1988.
      state = (state * 48_271) % 2_147_483_647;
      return state / 2 ** 30 - 1;
    };
    return Object.fromEntries(names.map(name => [name, Array.from({length: given.count}, next)]));
  });
const chargeColumns = columns(['x', 'y', 'z', 'charge'], 50);
const vector = fc.tuple(coordinate, coordinate, coordinate);
const bodies = fc.array(
  fc.record(
    {charges: chargeColumns, placement: fc.record({translate: vector})},
    {requiredKeys: ['charges']},
  ),
  {minLength: 1, maxLength: 6},
);
const count = fc.integer({min: 1, max: 12});
const targets = fc.oneof(
  columns(['x', 'y', 'z'], 80).map(points => ({points})),
  fc.record({origin: vector, counts: fc.tuple(count, count, count)}).map(grid => ({
    grid: {
      ...grid,
      steps: [
        [0.1, 0, 0],
        [0, 0.1, 0],
        [0, 0, 0.1],
      ],
    },
  })),
  fc.integer({min: 2, max: 900}).map(samples => ({
    path: {
      vertices: [
        [2, 0, 0],
        [3, 0, 0],
      ],
      samples,
    },
  })),
);
const some = <T>(values: readonly T[]): fc.Arbitrary<T[]> =>
  fc.subarray([...values], {minLength: 1});
const accuracy = fc.record({bounds: fc.boolean()});

const requests: Record<Operation, fc.Arbitrary<object>> = {
  potentials: fc.record({bodies, targets, accuracy}, {requiredKeys: ['bodies', 'targets']}),
  fields: fc.record(
    {
      bodies,
      targets,
      accuracy,
      quantities: some(['potential', 'field', 'magnitude', 'fieldGradient']),
    },
    {requiredKeys: ['bodies', 'targets']},
  ),
  forces: fc.record(
    {bodies, probes: chargeColumns, include: some(['charges', 'internalEnergy', 'interactions'])},
    {requiredKeys: ['bodies']},
  ),
  moments: fc.record({bodies}),
};
test.each(Object.keys(requests) as Operation[])(
  `of ${REQUESTS} random requests of %s the estimate, the answer and the ledger name one cost`,
  async operation => {
    const {driver} = service.deps.database;
    const last = driver.prepare(
      'SELECT kind, operation, pairs FROM ledger_entry ORDER BY id DESC LIMIT 1',
    );
    const routes = new Set<string>();
    let least = 0;
    await fc.assert(
      fc.asyncProperty(requests[operation], async request => {
        const {pairs, route} = await service.call<Estimate>('estimates', {operation, request});
        const {cost} = await service.call<FieldAnswer>(operation, request);
        expect(cost.pairs).toBe(pairs);
        expect(last.get()).toEqual({
          kind: route === 'inline' ? 'charge' : 'settle',
          operation,
          pairs,
        });
        routes.add(route);
        if (pairs === 1000) least++;
      }),
      {seed: SEED, numRuns: REQUESTS, endOnFailure: true},
    );
    // Moments cost as many pairs as there are charges, which is always less than the least cost here.
    if (operation === 'moments') return;
    expect(routes.size).toBe(2);
    expect(least).toBeLessThan(0.9 * REQUESTS);
  },
);
