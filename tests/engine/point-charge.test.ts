import {expect, test} from 'vitest';

import {ownMemory} from '../../server/engine/memory.ts';
import {DirectSum, RESULT, type SumKind} from '../../server/engine/methods/direct-sum.ts';
import {position, storePosition} from '../../server/engine/positions.ts';
import {chargeColumns, type ChargeColumns} from '../../server/engine/sources/charge-columns.ts';
import {ownWorkplace} from '../../server/engine/workplace.ts';
import {record, recordsLike, toleranceOf} from '../reference/records.ts';
import {randomNumbers} from './random.ts';

interface Charge {
  readonly q: number;
  readonly pos: readonly [number, number, number];
}

function pack(given: readonly Charge[]): ChargeColumns {
  const charges = chargeColumns(given.length, ownMemory);
  given.forEach(({q, pos: [x, y, z]}, i) => {
    charges.x[i] = x;
    charges.y[i] = y;
    charges.z[i] = z;
    charges.q[i] = q;
  });
  return charges;
}

function sumsAt(charges: ChargeColumns, kind: SumKind, [x, y, z]: readonly number[]): Float64Array {
  const options = {
    kind,
    bounds: 'none',
    coincidenceDistance: 0,
    isExcluding: false,
    chargeRoundings: 0,
  } as const;
  const sum = new DirectSum(charges, options, 1, ownWorkplace);
  storePosition(sum.positions, 0, {...position(), x, y, z});
  sum.compute(0, 1, [0, charges.count]);
  expect(sum.withoutSum).toEqual([]);
  return Float64Array.from({length: RESULT.length}, (_, place) => sum.result(place)[0]);
}

// Physical dipoles and linear quadrupoles: records.json names their sources; values are in k_e.
for (const of of recordsLike(/^(physical dipole|linear quadrupole): potential/)) {
  test(`${of.id}: ${of.quantity}, by every kernel`, () => {
    const {charges = [], point = [0, 0, 0]} = of.inputs;
    for (const kind of ['potential', 'field', 'fieldGradient'] as const) {
      const v = sumsAt(pack(charges), kind, point)[RESULT.v];
      expect(Math.abs(v - of.value)).toBeLessThanOrEqual(toleranceOf(of) * Math.abs(of.value));
    }
  });
}

test('the field of a physical dipole, by both kernels that have one', () => {
  const of = record('CLF-078');
  const {charges = [], point = [0, 0, 0]} = of.inputs;
  for (const kind of ['field', 'fieldGradient'] as const) {
    const result = sumsAt(pack(charges), kind, point);
    const length = Math.hypot(result[RESULT.e], result[RESULT.e + 1], result[RESULT.e + 2]);
    expect(Math.abs(length - of.value)).toBeLessThanOrEqual(toleranceOf(of) * of.value);
  }
});

test('the gradient of a point charge is 2q/r³ along and −q/r³ across', () => {
  // E = q/r² outwards (CLF-001 and its source), so ∂E/∂r = −2q/r³ and across it is E/r = q/r³.
  const result = sumsAt(pack([{q: 8, pos: [0, 0, 0]}]), 'fieldGradient', [0, 0, 2]);
  const [xx, xy, xz, yy, yz, zz] = result.subarray(RESULT.g, RESULT.g + 6);
  expect([xx, yy, zz]).toEqual([1, 1, -2]);
  expect([xy, xz, yz].map(v => v + 0)).toEqual([0, 0, 0]);
});

test('the gradient is what the field changes by', () => {
  const random = randomNumbers(9);
  const given = Array.from({length: 30}, () => ({
    q: random() - 0.5,
    pos: [random() - 0.5, random() - 0.5, random() - 0.5] as const,
  }));
  const charges = pack(given);
  const at = [0.9, 0.8, -0.7];
  const gradient = sumsAt(charges, 'fieldGradient', at).slice(RESULT.g, RESULT.g + 6);
  const order = [
    [0, 1, 2],
    [1, 3, 4],
    [2, 4, 5],
  ];
  const h = 1e-5;
  const size = Math.hypot(...gradient);
  for (let axis = 0; axis < 3; axis++) {
    const moved = (step: number): Float64Array => {
      const point = [...at];
      point[axis] += step;
      return sumsAt(charges, 'field', point).slice(RESULT.e, RESULT.e + 3);
    };
    const [after, before] = [moved(h), moved(-h)];
    for (let i = 0; i < 3; i++) {
      const slope = (after[i] - before[i]) / (2 * h);
      // A central difference is off by h² of the third derivative and by rounding over h.
      expect(Math.abs(slope - gradient[order[i][axis]])).toBeLessThan(1e-8 * size);
    }
  }
});

test('all kernels give the same bits of potential and field', () => {
  const random = randomNumbers(10);
  const charges = pack(
    Array.from({length: 1000}, () => ({
      q: random() - 0.5,
      pos: [random(), random(), random()] as const,
    })),
  );
  for (let n = 0; n < 20; n++) {
    const at = [random(), random(), random()];
    const gradient = sumsAt(charges, 'fieldGradient', at).slice();
    const field = sumsAt(charges, 'field', at).slice();
    expect(sumsAt(charges, 'potential', at)[RESULT.v]).toBe(field[RESULT.v]);
    expect(gradient.slice(0, 4)).toEqual(field.slice(0, 4));
  }
});
