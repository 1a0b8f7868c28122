import {afterAll, describe, expect, test} from 'vitest';

import type {Body, FieldAnswer, FieldRequest, OnCoincidence} from '../../shared/api.ts';
import {ServiceError} from '../../server/errors.ts';
import {createEngine} from '../../server/engine/pool.ts';
import {randomNumbers} from './random.ts';

const engine = createEngine({threads: 2});
afterAll(() => engine.close());

async function answerOf(body: FieldRequest): Promise<FieldAnswer> {
  const prepared = await engine.prepare('fields', Buffer.from(JSON.stringify(body), 'utf8'));
  const {bytes} = await engine.run(prepared, {signal: new AbortController().signal});
  return JSON.parse(Buffer.from(bytes).toString('utf8')) as FieldAnswer;
}

async function refusalOf(body: FieldRequest): Promise<ServiceError> {
  try {
    await answerOf(body);
  } catch (error) {
    // The refusal that is expected.
    if (error instanceof ServiceError) return error;
    throw error;
  }
  throw new Error('expected a refusal');
}

const random = randomNumbers(11);
/** Large enough for a tree of its own in its own frame. */
const SIDE = 16;
const TARGETS = 21;
/** A lattice of step 1, of which every seventh charge is zero. */
const lattice = Array.from({length: SIDE ** 3}, (_, n) => [
  n % SIDE,
  Math.floor(n / SIDE) % SIDE,
  Math.floor(n / SIDE ** 2),
  n % 7 === 0 ? 0 : 1e-9 * (random() - 0.5),
]);

const chargesOf = (rows: readonly (readonly number[])[]): Body['charges'] => {
  const [x, y, z, charge] = [0, 1, 2, 3].map(column => rows.map(row => row[column]));
  return {x, y, z, charge};
};

/** 200 charges at one place, which cancel, and 200 at another, which do not. */
const stacks = Array.from({length: 400}, (_, n) =>
  n < 200 ? [2.5, 3, 4, n % 2 ? 1e-9 : -1e-9] : [5.5, 6, 7, 1e-10],
);

const bodies: Body[] = [
  {id: 'lattice', charges: chargesOf(lattice.slice(0, 2000))},
  {
    id: 'turned',
    charges: chargesOf(lattice),
    // A quarter turn about z, and half a step: between the charges of the first.
    placement: {translate: [SIDE - 1, 0, 0.5], rotate: {axis: [0, 0, 1], degrees: 90}},
  },
  {id: 'stacks', charges: chargesOf(stacks)},
];

const request = (more: Partial<FieldRequest>): FieldRequest => ({
  bodies,
  targets: {
    grid: {
      origin: [0, 0, 0],
      steps: [
        [0.5, 0, 0],
        [0, 0.5, 0],
        [0, 0, 0.5],
      ],
      counts: [TARGETS, TARGETS, TARGETS],
    },
  },
  quantities: ['potential', 'field'],
  ...more,
});
const TOLERANCE = 1e-5;
const accuracy = {tolerance: TOLERANCE};

function expectSame(found: FieldAnswer, direct: FieldAnswer): void {
  expect(found.accuracy.method).toBe('multipole');
  expect(direct.accuracy.method).toBe('direct');
  expect(found.coincidentCount).toBe(direct.coincidentCount);
  expect(found.coincident).toEqual(direct.coincident);
  expect(found.accuracy.coincidenceDistance).toBe(direct.accuracy.coincidenceDistance);
  let error = 0;
  let norm = 0;
  let masked = 0;
  const names = ['potential', 'fieldX', 'fieldY', 'fieldZ'] as const;
  for (const name of names) {
    const expected = direct.columns[name] ?? [];
    (found.columns[name] ?? []).forEach((value, n) => {
      const exact = expected[n];
      if ((value === null) !== (exact === null)) throw new Error(`${name} of target ${n}`);
      if (value === null || exact === null) masked++;
      else if (name === 'potential') {
        error += (value - exact) ** 2;
        norm += exact ** 2;
      }
    });
  }
  expect(Math.sqrt(error / norm)).toBeLessThanOrEqual(TOLERANCE);
  expect(masked % names.length).toBe(0);
}

describe('the multipole method finds the coincidences of the direct sum', () => {
  const cells = (['mask', 'exclude'] as const).flatMap(onCoincidence =>
    [0, 0.2].map(coincidenceDistance => ({onCoincidence, coincidenceDistance})),
  );
  test.each(cells)('$onCoincidence, up to $coincidenceDistance m', async cell => {
    const direct = await answerOf(request(cell));
    const found = await answerOf(request({...cell, accuracy}));
    expect(direct.coincidentCount).toBeGreaterThan(2000);
    expect(direct.coincident.length).toBe(1000);
    expectSame(found, direct);
    expect(found.columns.potential?.includes(null)).toBe(cell.onCoincidence === 'mask');
  });

  test('reject: the same faults, and as many', async () => {
    const onCoincidence: OnCoincidence = 'reject';
    const direct = await refusalOf(request({onCoincidence}));
    const found = await refusalOf(request({onCoincidence, accuracy}));
    expect(found.code).toBe('coincident-target');
    expect(found.errors).toEqual(direct.errors);
    expect(found.errorCount).toBe(direct.errorCount);
    expect(found.message).toBe(direct.message);
  });

  test('where neighbours coincide as well', async () => {
    const cell = {coincidenceDistance: 0.6};
    const direct = await answerOf(request(cell));
    const found = await answerOf(request({...cell, accuracy}));
    expect(direct.coincidentCount).toBeGreaterThan(15_000);
    expect(found.coincidentCount).toBe(direct.coincidentCount);
    expect(found.coincident).toEqual(direct.coincident);
  });
});

test('of very many coincidences at one place the first are listed, whatever the tree does', async () => {
  const count = 10_000;
  const cube = (n: number): number[] => [random(), random(), random(), n % 2 ? 1e-9 : -1e-9];
  // The stack is the last in the order of the request, but not in that of a tree.
  const stack = Array.from({length: 600}, (_, n) => [0.1, 0.1, 0.1, n % 2 ? 1e-9 : 2e-9]);
  const first = Array.from({length: count}, (_, n) => cube(n));
  const targets = Array.from({length: count}, (_, n) => (n < 5 ? first[9 - n] : cube(n)));
  const rows = [...targets, ...stack];
  const [x, y, z] = [0, 1, 2].map(column => rows.map(row => row[column]));
  const body = {
    bodies: [{id: 'all', charges: chargesOf([...first, ...stack])}],
    targets: {points: {x, y, z}},
    quantities: ['potential', 'field'],
  } as const;
  const direct = await answerOf(body);
  const found = await answerOf({...body, accuracy});
  expect(direct.coincidentCount).toBe(600 * 600 + 5);
  expectSame(found, direct);
});
