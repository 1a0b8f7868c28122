import {describe, expect, test} from 'vitest';

import type {Body, FieldRequest, Grid, Path, Operation, ProblemCode} from '../../shared/api.ts';
import {ServiceError} from '../../server/errors.ts';
import type {ComputeRequest} from '../../server/engine/filled-request.ts';
import {defaultLimits} from '../../server/engine/limits.ts';
import {plan} from '../../server/engine/plan.ts';

const column = (length: number): number[] => Array.from({length}, (_, i) => i);
const body = (length: number): Body => ({
  charges: {x: column(length), y: column(length), z: column(length), charge: column(length)},
});
const fields = (
  sources: number,
  targets: number,
  more: Partial<FieldRequest> = {},
): FieldRequest => ({
  bodies: [body(sources)],
  targets: {points: {x: column(targets), y: column(targets), z: column(targets)}},
  ...more,
});

function refusal(operation: Operation, request: ComputeRequest): ServiceError {
  try {
    plan(operation, request);
  } catch (error) {
    // The refusal that is expected.
    if (error instanceof ServiceError) return error;
    throw error;
  }
  throw new Error('expected a refusal');
}

function expectRefusal(
  code: ProblemCode,
  pointers: readonly string[],
  request: ComputeRequest,
  operation: Operation = 'fields',
): void {
  const {code: found, errors, errorCount, message} = refusal(operation, request);
  expect(found).toBe(code);
  expect(errors.map(({pointer}) => pointer)).toEqual(pointers);
  expect(errorCount).toBe(pointers.length);
  expect(message.length).toBeGreaterThan(20);
}

test('a pair is a charge at a target; a call costs 1,000 at least', () => {
  expect(plan('potentials', fields(10, 1) as ComputeRequest).pairs).toBe(1000);
  expect(plan('potentials', fields(100, 30) as ComputeRequest).pairs).toBe(3000);
  expect(plan('fields', fields(100, 30)).pairs).toBe(3000);
});

test('the gradient doubles the price and bounds are free', () => {
  const gradient = fields(100, 30, {quantities: ['fieldGradient']});
  expect(plan('fields', gradient).pairs).toBe(6000);
  const bounded = fields(100, 30, {accuracy: {bounds: true}});
  expect(plan('fields', bounded).pairs).toBe(3000);
});

test('grids and paths count their points', () => {
  const grid: Grid = {
    origin: [0, 0, 0],
    steps: [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    counts: [20, 30, 2],
  };
  expect(plan('fields', fields(10, 1, {targets: {grid}})).pairs).toBe(12_000);
  const path: Path = {
    vertices: [
      [0, 0, 0],
      [1, 0, 0],
    ],
    samples: 500,
  };
  expect(plan('fields', fields(10, 1, {targets: {path}})).pairs).toBe(5000);
});

test('forces cost every charge at every charge of another body, internals and probes on request', () => {
  const bodies = [body(60), body(40)];
  // 100² − 60² − 40², then + 60² + 40² − 100, then + 100 · 7.
  expect(plan('forces', {bodies}).pairs).toBe(4800);
  expect(plan('forces', {bodies, include: ['internalEnergy']}).pairs).toBe(9900);
  expect(plan('forces', {bodies, probes: body(7).charges}).pairs).toBe(5500);
});

test('moments cost a pair a charge', () => {
  expect(plan('moments', {bodies: [body(3000)]}).pairs).toBe(3000);
});

test('small calls go inline: up to 5e4 pairs, 500 rows and 64 KiB', () => {
  expect(plan('fields', fields(100, 500), 64 * 1024).route).toBe('inline');
  expect(plan('fields', fields(101, 500), 64 * 1024).route).toBe('worker');
  expect(plan('fields', fields(1, 501), 64 * 1024).route).toBe('worker');
  expect(plan('fields', fields(1, 1), 64 * 1024 + 1).route).toBe('worker');
  // Bounds are free, but take eight times as long.
  const bounded = {accuracy: {bounds: true}};
  expect(plan('fields', fields(25, 250, bounded)).route).toBe('inline');
  expect(plan('fields', fields(26, 250, bounded)).route).toBe('worker');
});

test('a call larger than a synchronous one may be is refused, one just as large is not', () => {
  const limits = {...defaultLimits, synchronousPairs: 1e4, answerRows: 150, requestRows: 250};
  expect(plan('fields', fields(100, 100), 0, limits).pairs).toBe(1e4);
  const code = (sources: number, targets: number): string => {
    try {
      return plan('fields', fields(sources, targets), 0, limits).route;
    } catch (error) {
      // The refusal that is expected.
      return (error as ServiceError).code;
    }
  };
  expect(code(101, 100)).toBe('too-large-for-synchronous');
  expect(code(1, 150)).toBe('inline');
  expect(code(1, 151)).toBe('too-large-for-synchronous');
  expect(code(125, 126)).toBe('too-many-rows');
});

test('columns of unequal length are named, each of them', () => {
  const charges = {x: [1, 2], y: [1], z: [1, 2], charge: [1, 2, 3]};
  expectRefusal(
    'unequal-columns',
    ['/bodies/0/charges/y', '/bodies/0/charges/charge'],
    fields(1, 1, {bodies: [{charges}]}),
  );
  expectRefusal(
    'unequal-columns',
    ['/targets/points/z'],
    fields(1, 1, {targets: {points: {x: [1, 2], y: [1, 2], z: [1]}}}),
  );
  const probes = {x: [1], y: [1, 2], z: [1], charge: [1]};
  expectRefusal('unequal-columns', ['/probes/y'], {bodies: [body(1)], probes}, 'forces');
});

test('two bodies of one id are refused, given or filled in', () => {
  const twice = [
    {id: 'tip', ...body(1)},
    {id: 'tip', ...body(1)},
  ];
  expectRefusal('duplicate-id', ['/bodies/1/id'], fields(1, 1, {bodies: twice}));
  const clash = [body(1), {id: 'body-0', ...body(1)}];
  expectRefusal('duplicate-id', ['/bodies/1/id'], fields(1, 1, {bodies: clash}));
});

const placed = (placement: Body['placement']): FieldRequest =>
  fields(1, 1, {bodies: [{...body(1), placement}]});

test('an axis needs a length', () => {
  expectRefusal(
    'zero-length-axis',
    ['/bodies/0/placement/rotate/axis'],
    placed({rotate: {axis: [0, 0, 0], degrees: 30}}),
  );
});

test('shear, scale and reflection are no rotations, and a placement is of one kind', () => {
  const at = ['/bodies/0/placement/matrix'];
  expectRefusal(
    'not-a-rotation',
    at,
    placed({matrix: [1, 0.1, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1]}),
  );
  expectRefusal(
    'not-a-rotation',
    at,
    placed({matrix: [2, 0, 0, 0, 0, 2, 0, 0, 0, 0, 2, 0, 0, 0, 0, 1]}),
  );
  expectRefusal(
    'not-a-rotation',
    at,
    placed({matrix: [-1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1]}),
  );
  // Column-major, as some CAD systems store it: the shift lands in the last row.
  expectRefusal(
    'not-a-rotation',
    at,
    placed({matrix: [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 5, 6, 7, 1]}),
  );
  expectRefusal(
    'conflicting-members',
    ['/bodies/0/placement'],
    placed({
      matrix: [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1],
      translate: [1, 0, 0],
    }),
  );
});

test('steps and paths need a length', () => {
  const grid: Grid = {
    origin: [0, 0, 0],
    steps: [
      [1, 0, 0],
      [0, 0, 0],
      [0, 0, 0],
    ],
    counts: [2, 2, 1],
  };
  expectRefusal('zero-length-step', ['/targets/grid/steps/1'], fields(1, 1, {targets: {grid}}));
  const path: Path = {
    vertices: [
      [1, 1, 1],
      [1, 1, 1],
    ],
    samples: 5,
  };
  expectRefusal('zero-length-step', ['/targets/path/vertices'], fields(1, 1, {targets: {path}}));
});

test('20 faults are listed and all are counted', () => {
  const bodies = Array.from({length: 30}, () => ({id: 'same', ...body(1)}));
  const {errors, errorCount} = refusal('fields', fields(1, 1, {bodies}));
  expect(errors.length).toBe(20);
  expect(errorCount).toBe(29);
});

describe('the method', () => {
  const tolerance = 1e-5;
  const methodOf = (more: Partial<FieldRequest>, limits = defaultLimits): string =>
    plan('fields', fields(5000, 10_000, more), 0, limits).method;

  test('is direct without a tolerance, with bounds and with the gradient', () => {
    expect(methodOf({accuracy: {tolerance}})).toBe('multipole');
    expect(methodOf({})).toBe('direct');
    expect(methodOf({accuracy: {}})).toBe('direct');
    expect(methodOf({accuracy: {tolerance, bounds: true}})).toBe('direct');
    expect(methodOf({accuracy: {tolerance}, quantities: ['fieldGradient']})).toBe('direct');
    expect(methodOf({accuracy: {tolerance}}, {...defaultLimits, hasMultipole: false})).toBe(
      'direct',
    );
  });

  test('is direct for few charges or few targets, and costs by the point where it is not', () => {
    const accuracy = {tolerance};
    expect(plan('fields', fields(100, 1000, {accuracy})).method).toBe('direct');
    expect(plan('fields', fields(40_000, 10, {accuracy})).method).toBe('direct');
    const planned = plan('fields', fields(5000, 10_000, {accuracy}));
    expect(planned).toMatchObject({method: 'multipole', route: 'worker', pairs: 15_000_000});
    expect(plan('fields', fields(5000, 10_000)).pairs).toBe(50_000_000);
  });

  test('is the same for the same shape, whatever the values', () => {
    const request = fields(5000, 10_000, {accuracy: {tolerance}});
    const zeros = new Array<number>(5000).fill(0);
    const charges = {x: zeros, y: zeros, z: zeros, charge: zeros};
    const {method, pairs} = plan('fields', {...request, bodies: [{charges}]});
    expect({method, pairs}).toEqual({method: 'multipole', pairs: 15_000_000});
  });

  test('is multipole wherever a direct sum would be too large, and too large is said with a hint', () => {
    // Too tight for it to be quicker, if there were the choice.
    const accuracy = {tolerance: 1e-9};
    const limits = {...defaultLimits, synchronousPairs: 4e6};
    expect(plan('fields', fields(2000, 1900, {accuracy}), 0, limits).method).toBe('direct');
    const huge = {...defaultLimits, synchronousPairs: 1e7};
    expect(plan('fields', fields(4000, 2600, {accuracy}), 0, huge).method).toBe('multipole');
    const refused = (request: FieldRequest): string => {
      try {
        return plan('fields', request, 0, huge).route;
      } catch (error) {
        // The refusal that is expected.
        return (error as ServiceError).message;
      }
    };
    expect(refused(fields(4000, 2600))).toContain('accuracy.tolerance');
    expect(refused(fields(4000, 6100, {accuracy}))).not.toContain('accuracy.tolerance');
    expect(refused(fields(4000, 6100, {accuracy}))).toContain('10100000 pairs');
  });
});
