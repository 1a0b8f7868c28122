import {expect, test} from 'vitest';

import type {FieldRequest, OnCoincidence} from '../../shared/api.ts';
import {ServiceError} from '../../server/errors.ts';
import {compute, numbers} from './compute.ts';

// The rules are those of the contract: design page, "Fixed details".

const request = (more: Partial<FieldRequest> = {}): FieldRequest => ({
  units: {length: 'mm', charge: 'nC'},
  bodies: [
    {id: 'tip', charges: {x: [0, 0], y: [0, 0], z: [0, 12], charge: [4, 1.5]}},
    {id: 'plate', charges: {x: [-5, 5], y: [0, 0], z: [0, 0], charge: [-2, 0]}},
  ],
  targets: {points: {x: [0, 10, 5], y: [0, 0, 0], z: [12, -20, 0]}},
  quantities: ['potential', 'field', 'magnitude', 'fieldGradient'],
  accuracy: {bounds: true},
  ...more,
});

test('a target on a charge is masked in every column and listed', () => {
  const {answer} = compute('fields', request());
  expect(answer.coincident).toEqual([{target: 0, body: 'tip', charge: 1}]);
  expect(answer.coincidentCount).toBe(1);
  for (const column of Object.values(answer.columns)) {
    expect(column[0]).toBeNull();
    expect(column[1]).toBeTypeOf('number');
  }
});

test('a charge of zero is never coincident', () => {
  const {answer} = compute('fields', request());
  expect(answer.columns.potential?.[2]).toBeTypeOf('number');
  expect(answer.columns.fieldGradientZZ?.[2]).toBeTypeOf('number');
});

test('exclude leaves the coincident charge out of its target and of no other', () => {
  const {answer} = compute('fields', request({onCoincidence: 'exclude'}));
  expect(answer.coincidentCount).toBe(1);
  const without = request();
  const [, plate] = without.bodies;
  const rest = compute('fields', {
    ...without,
    bodies: [{charges: {x: [0], y: [0], z: [0], charge: [4]}}, plate],
    targets: {points: {x: [0], y: [0], z: [12]}},
  });
  for (const [name, column] of Object.entries(rest.answer.columns)) {
    expect((answer.columns as Record<string, readonly unknown[]>)[name][0]).toBe(column[0]);
  }
  const masked = compute('fields', request());
  expect(answer.columns.potential?.[1]).toBe(masked.answer.columns.potential?.[1]);
});

test('reject refuses the request and points at the target', () => {
  const refused = (): unknown => compute('fields', request({onCoincidence: 'reject'}));
  expect(refused).toThrow(ServiceError);
  try {
    refused();
  } catch (error) {
    // The refusal that is expected.
    const {code, errors, errorCount} = error as ServiceError;
    expect(code).toBe('coincident-target');
    expect(errors).toEqual([
      expect.objectContaining({pointer: '/targets/points/x/0', code: 'coincident-target'}),
    ]);
    expect(errorCount).toBe(1);
  }
});

test('the coincidence distance is that of the request, in its unit, and is echoed', () => {
  const near = (coincidenceDistance: number) =>
    compute('fields', request({coincidenceDistance})).answer;
  // Target 1 is 10 mm beside and 20 mm below the first charge: √500 = 22.36 mm.
  expect(near(22.3).columns.potential?.[1]).toBeTypeOf('number');
  expect(near(22.4).columns.potential?.[1]).toBeNull();
  expect(near(22.4).accuracy.coincidenceDistance).toBe(22.4);
});

test('positions that differ by rounding alone are coincident', () => {
  const [x, y, z] = [123.456, -78.9, 1000.001];
  const {answer} = compute('potentials', {
    units: {length: 'mm'},
    bodies: [
      {
        charges: {x: [x], y: [y], z: [z], charge: [1e-9]},
        placement: {rotate: {axis: [1, 2, 3], degrees: 360 / 7}},
      },
      {
        charges: {x: [1], y: [2], z: [3], charge: [1e-9]},
      },
    ],
    // The same turn, done by the caller in double precision.
    targets: {points: turned([x, y, z])},
  });
  expect(answer.coincidentCount).toBe(1);
  // A few units in the last place of 1 m, in mm.
  expect(answer.accuracy.coincidenceDistance).toBeGreaterThan(0);
  expect(answer.accuracy.coincidenceDistance).toBeLessThan(1e-11);
});

function turned([x, y, z]: readonly number[]): {x: number[]; y: number[]; z: number[]} {
  const angle = (2 * Math.PI) / 7;
  const [c, s] = [Math.cos(angle), Math.sin(angle)];
  const k = [1, 2, 3].map(v => v / Math.sqrt(14));
  const dot = k[0] * x + k[1] * y + k[2] * z;
  const cross = [k[1] * z - k[2] * y, k[2] * x - k[0] * z, k[0] * y - k[1] * x];
  const [a, b, d] = [x, y, z].map((v, n) => v * c + cross[n] * s + k[n] * dot * (1 - c));
  return {x: [a], y: [b], z: [d]};
}

test('positions given in metres are only coincident if they are equal', () => {
  const at = (gap: number, onCoincidence: OnCoincidence) =>
    compute('potentials', {
      bodies: [{charges: {x: [1], y: [0], z: [0], charge: [1e-9]}}],
      targets: {points: {x: [1 + gap], y: [0], z: [0]}},
      onCoincidence,
    }).answer;
  expect(at(0, 'mask').coincidentCount).toBe(1);
  expect(at(2 ** -52, 'mask').coincidentCount).toBe(0);
  expect(at(0, 'mask').accuracy.coincidenceDistance).toBe(0);
  // V = k q / r, r = 2⁻⁵² m exactly.
  const [v] = numbers(at(2 ** -52, 'mask').columns.potential);
  expect(v).toBe(8987551786.1708 * 1e-9 * 2 ** 52);
});

test('at most 1,000 coincidences are listed and all are counted', () => {
  const column = (length: number, value: number): number[] => Array<number>(length).fill(value);
  const {answer} = compute('potentials', {
    bodies: [
      {charges: {x: column(30, 1), y: column(30, 0), z: column(30, 0), charge: column(30, 1e-9)}},
    ],
    targets: {points: {x: column(50, 1), y: column(50, 0), z: column(50, 0)}},
  });
  expect(answer.coincidentCount).toBe(1500);
  expect(answer.coincident.length).toBe(1000);
  expect(answer.coincident[31]).toEqual({target: 1, body: 'body-0', charge: 1});
});
