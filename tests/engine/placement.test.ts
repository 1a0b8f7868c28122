import {expect, test} from 'vitest';

import {unitOf} from '../../shared/units.ts';
import {packPlacement} from '../../server/engine/placement.ts';
import {convert, place, position} from '../../server/engine/positions.ts';
import {
  cosineAndSine,
  departure,
  orthonormalised,
  rotationAbout,
} from '../../server/engine/rotation.ts';
import {compute, numbers} from './compute.ts';
import * as fixedPoint from './fixed-point.ts';
import {randomNumbers} from './random.ts';

const metre = unitOf('length', 'm');

type Vector = [number, number, number];

function placed(placement: Parameters<typeof packPlacement>[0], [x, y, z]: Vector): Vector {
  const {rotation, shift} = packPlacement(placement, metre);
  const at = position();
  convert(metre, x, y, z, at);
  place(rotation, shift, 0, at);
  return [at.x, at.y, at.z];
}

test('the published vector: 90° about z takes (1, 2, 3) to (−2, 1, 3), and then comes the shift', () => {
  // The right-hand rule with thumb along +z turns +x into +y; the test vector is that of the contract.
  expect(placed({rotate: {axis: [0, 0, 1], degrees: 90}}, [1, 2, 3])).toEqual([-2, 1, 3]);
  expect(
    placed({translate: [10, 20, 30], rotate: {axis: [0, 0, 1], degrees: 90}}, [1, 2, 3]),
  ).toEqual([8, 21, 33]);
  const matrix: Parameters<typeof packPlacement>[0] = {
    matrix: [0, -1, 0, 10, 1, 0, 0, 20, 0, 0, 1, 30, 0, 0, 0, 1],
  };
  expect(placed(matrix, [1, 2, 3])).toEqual([8, 21, 33]);
});

test('120° about the diagonal exchanges the axes in turn', () => {
  const [x, y, z] = placed({rotate: {axis: [1, 1, 1], degrees: 120}}, [1, 2, 3]);
  // x → y → z → x, so (1, 2, 3) → (3, 1, 2); rounding of three products and sums.
  expect(Math.abs(x - 3)).toBeLessThan(4e-15);
  expect(Math.abs(y - 1)).toBeLessThan(4e-15);
  expect(Math.abs(z - 2)).toBeLessThan(4e-15);
});

test('quarter turns are exact, however many', () => {
  for (const [degrees, expected] of [
    [0, [1, 2, 3]],
    [90, [-2, 1, 3]],
    [180, [-1, -2, 3]],
    [-90, [2, -1, 3]],
    [270, [2, -1, 3]],
    [360, [1, 2, 3]],
    [36_000 + 90, [-2, 1, 3]],
    [-36_000 - 180, [-1, -2, 3]],
  ] as const) {
    const {isExact} = rotationAbout([0, 0, 5], degrees);
    expect(isExact).toBe(true);
    const found = placed({rotate: {axis: [0, 0, 5], degrees}}, [1, 2, 3]).map(v => v + 0);
    expect(found).toEqual(expected);
  }
});

test('cosine and sine are right to 30 digits', () => {
  const random = randomNumbers(3);
  const angles = [30, 45, 60, 1e-9, 89.999_999, 359.5, 12_345.678, -77.7];
  for (let n = 0; n < 50; n++) angles.push(720_000 * (random() - 0.5));
  for (const degrees of angles) {
    const {cosine, sine} = cosineAndSine(degrees);
    const [c, s] = fixedPoint.cosineAndSine(degrees);
    const off = (a: {upper: number; lower: number}, b: bigint): number =>
      Math.abs(fixedPoint.toNumber(fixedPoint.fixed(a.upper) + fixedPoint.fixed(a.lower) - b));
    // Two doubles hold 106 bits; the series loses a few.
    expect(off(cosine, c), `cos ${degrees}°`).toBeLessThan(1e-30);
    expect(off(sine, s), `sin ${degrees}°`).toBeLessThan(1e-30);
  }
});

test('a rotation of single precision is made orthonormal and echoed, and taken as it is when sent back', () => {
  const {matrix: precise} = rotationAbout([1, -2, 0.5], 77);
  const rounded = precise.map(Math.fround);
  expect(departure(rounded).orthogonality).toBeGreaterThan(1e-9);
  const used = orthonormalised(rounded);
  expect(departure(used).orthogonality).toBeLessThan(1e-15);
  used.forEach((value, n) => expect(Math.abs(value - precise[n])).toBeLessThan(1e-7));
  expect(orthonormalised(used)).toEqual(used);

  const [a, b, c, d, e, f, g, h, i] = rounded;
  const {answer} = compute('potentials', {
    units: {length: 'mm'},
    bodies: [
      {
        id: 'turned',
        charges: {x: [1], y: [2], z: [3], charge: [1e-9]},
        placement: {matrix: [a, b, c, 4, d, e, f, 5, g, h, i, 6, 0, 0, 0, 1]},
      },
    ],
    targets: {points: {x: [0], y: [0], z: [0]}},
  });
  const [ra, rb, rc, rd, re, rf, rg, rh, ri] = used;
  expect(answer.placements).toEqual([
    {body: 'turned', matrix: [ra, rb, rc, 4, rd, re, rf, 5, rg, rh, ri, 6, 0, 0, 0, 1]},
  ]);
});

test('turning and moving everything turns the field and leaves the potential', () => {
  const random = randomNumbers(11);
  const column = (n: number): number[] => Array.from({length: n}, () => random() - 0.5);
  const charges = {x: column(20), y: column(20), z: column(20), charge: column(20)};
  const point: Vector = [0.9, -0.7, 1.1];
  const placement = {
    translate: [0.3, 0.2, -0.1] as Vector,
    rotate: {axis: [1, 2, -1] as Vector, degrees: 71},
  };
  const fields = (turn: boolean, [x, y, z]: Vector) =>
    compute('fields', {
      bodies: [{charges, ...(turn && {placement})}],
      targets: {points: {x: [x], y: [y], z: [z]}},
    }).answer.columns;
  const still = fields(false, point);
  const turned = fields(true, placed(placement, point));
  const [v] = numbers(still.potential);
  expect(Math.abs(numbers(turned.potential)[0] - v)).toBeLessThan(1e-12 * Math.abs(v));
  const vector = ({fieldX, fieldY, fieldZ}: typeof still): Vector => [
    numbers(fieldX)[0],
    numbers(fieldY)[0],
    numbers(fieldZ)[0],
  ];
  const expected = placed({rotate: placement.rotate}, vector(still));
  const length = Math.hypot(...expected);
  // Row I3 of the requirements: 1e-12, relative.
  vector(turned).forEach((value, n) => {
    expect(Math.abs(value - expected[n])).toBeLessThan(1e-12 * length);
  });
});
