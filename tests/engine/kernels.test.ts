import {Decimal} from 'decimal.js';
import {describe, expect, test} from 'vitest';

import {createHeap, Heap} from '../../server/engine/heap.ts';
import {compiledKernels} from '../../server/engine/kernels/compiled-kernels.ts';
import {
  BLOCK,
  BOUND_SUMS,
  BOUND_SUMS_AT,
  CARRIED,
  ERRORS,
  ERRORS_AT,
  MAGNITUDES,
  MAGNITUDES_AT,
  SUMS,
  SUMS_AT,
  TARGET_NEAREST,
  TARGET_RADIUS,
  TARGET_X,
  TARGET_Y,
  TARGET_Z,
  TARGET_Z_REMAINDER,
  TILE,
} from '../../server/engine/kernels/layout.ts';
import {instantiate, loadKernels} from '../../server/engine/kernels/load.ts';
import {plainKernels} from '../../server/engine/kernels/plain-kernels.ts';
import {targetBatch, type TargetBatch} from '../../server/engine/kernels/target-batch.ts';
import {ownMemory, type Memory} from '../../server/engine/memory.ts';
import {chargeColumns, type ChargeColumns} from '../../server/engine/sources/charge-columns.ts';
import {randomNumbers} from './random.ts';

const heap = new Heap(createHeap(2 ** 26));
const module = loadKernels();
const exported = module && instantiate(module, heap.memory);
if (!exported) throw new Error('no kernels; build them: npx tsx server/cli/build-kernels.ts');
const compiled = compiledKernels(exported);
const TAG = 1;
const NAMES = ['potential', 'field', 'fieldGradient', 'fieldErrors', 'magnitudes'] as const;

/** What to make charges and targets of; lengths are multiplied by `scale`, charges by `charge`. */
interface Shape {
  readonly name: string;
  readonly scale?: number;
  readonly charge?: number;
  /** How far positions are off [m], at most. */
  readonly off?: number;
  readonly isOnLattice?: boolean;
}

const shapes: readonly Shape[] = [
  {name: 'in a cube'},
  {name: 'in a cube, with remainders and radii', off: 1e-16},
  {name: 'hardly further apart than they may be off', off: 3e-3},
  {name: 'on a lattice, many on top of each other', isOnLattice: true},
  {name: 'of huge lengths and charges', scale: 1e24, charge: 1e24},
  {name: 'of tiny lengths and charges', scale: 1e-35, charge: 1e-290},
];

interface Set {
  readonly charges: ChargeColumns;
  readonly batch: TargetBatch;
}

function setOf(shape: Shape, count: number, targets: number, seed: number, memory: Memory): Set {
  const {scale = 1, charge = 1, off = 0, isOnLattice = false} = shape;
  const random = randomNumbers(seed);
  const place = (): number => scale * (isOnLattice ? Math.floor(5 * random()) - 2 : random() - 0.5);
  const charges = chargeColumns(count, memory);
  for (let j = 0; j < count; j++) {
    charges.x[j] = place();
    charges.y[j] = place();
    charges.z[j] = place();
    charges.q[j] = random() < 0.1 ? 0 : charge * (random() - 0.5);
    charges.radius[j] = off * random();
    charges.xRemainder[j] = off * (random() - 0.5);
    charges.yRemainder[j] = off * (random() - 0.5);
    charges.zRemainder[j] = off * (random() - 0.5);
    charges.qRemainder[j] = 1e-16 * charges.q[j] * (random() - 0.5);
  }
  const batch = targetBatch(targets, memory);
  const {values} = batch;
  for (let i = 0; i < targets; i++) {
    for (let n = TARGET_X; n <= TARGET_Z; n++) values[n * targets + i] = place();
    for (let n = TARGET_Z + 1; n <= TARGET_Z_REMAINDER; n++) {
      values[n * targets + i] = off * (random() - 0.5);
    }
    values[TARGET_RADIUS * targets + i] = off * random();
    values[TARGET_NEAREST * targets + i] = Infinity;
  }
  return {charges, batch};
}

/** Parts of a batch: where each begins, in units of the capacity, and the length of its rows. */
const PARTS = [
  ...Array.from({length: SUMS_AT}, (_, n) => [n, 1]),
  [SUMS_AT, SUMS],
  [BOUND_SUMS_AT, BOUND_SUMS],
  [ERRORS_AT, ERRORS],
  [MAGNITUDES_AT, MAGNITUDES],
] as const;

/** The bits of all that belongs to one target. */
function bitsAt({values, capacity}: TargetBatch, i: number): bigint[] {
  const numbers = PARTS.flatMap(([at, row]) => {
    const start = at * capacity + row * i;
    return [...values.subarray(start, start + row)];
  });
  return [...new BigUint64Array(Float64Array.from(numbers).buffer)];
}

/** Whether a charge lies on a target: then its sums mean nothing, and it is summed again without. */
function isOnCharge({charges, batch: {values, capacity}}: Set, i: number): boolean {
  const [x, y, z] = [TARGET_X, TARGET_Y, TARGET_Z].map(axis => values[axis * capacity + i]);
  return charges.x.some((sx, j) => sx === x && charges.y[j] === y && charges.z[j] === z);
}

function expectSameBits(found: Set, expected: Set, place: string): number {
  let compared = 0;
  for (let i = 0; i < expected.batch.capacity; i++) {
    const nearest = TARGET_NEAREST * expected.batch.capacity + i;
    expect(found.batch.values[nearest]).toBe(expected.batch.values[nearest]);
    if (isOnCharge(expected, i)) continue;
    expect(bitsAt(found.batch, i), `target ${i} of ${place}`).toEqual(bitsAt(expected.batch, i));
    compared++;
  }
  return compared;
}

describe.each(shapes)('charges $name', shape => {
  test.each(NAMES)('have the same bits by both kernels: %s', name => {
    const edges = [1, 2, 3, 4, 5, 7, BLOCK - 1, BLOCK, BLOCK + 1, 2 * BLOCK + 3, 517];
    let compared = 0;
    const large = [TILE - 1, TILE, TILE + 1, 2 * TILE + BLOCK + 5];
    [...edges, ...large].forEach((count, n) => {
      heap.release(TAG);
      const targets = n % 3 === 0 ? 1 : 7;
      const plain = setOf(shape, count, targets, n, ownMemory);
      const onHeap = setOf(shape, count, targets, n, heap.memoryOf(TAG));
      const random = randomNumbers(1000 + n);
      // Ranges that begin and end anywhere, one after the other, as bodies do.
      const cuts = Array.from({length: 3}, () => Math.floor(count * random()));
      const ends = [0, ...cuts.sort((a, b) => a - b), count];
      const first = targets > 2 ? 1 : 0;
      for (let r = 0; r + 1 < ends.length; r++) {
        plainKernels[name](plain.charges, ends[r], ends[r + 1], plain.batch, first, targets);
        compiled[name](onHeap.charges, ends[r], ends[r + 1], onHeap.batch, first, targets);
      }
      compared += expectSameBits(onHeap, plain, `${count} charges, cut at ${ends.join()}`);
    });
    expect(compared).toBeGreaterThan(10);
    heap.release(TAG);
  });
});

test('what a target gets does not depend on the other targets of its batch', () => {
  for (const kernels of [plainKernels, compiled]) {
    const many = setOf(shapes[0], 3000, 100, 5, heap.memoryOf(TAG));
    kernels.fieldGradient(many.charges, 7, 2993, many.batch, 0, 100);
    const one = targetBatch(1, heap.memoryOf(TAG));
    for (const i of [0, 50, 99]) {
      one.values.fill(0);
      for (let n = TARGET_X; n <= TARGET_RADIUS; n++) {
        one.values[n] = many.batch.values[100 * n + i];
      }
      kernels.fieldGradient(many.charges, 7, 2993, one, 0, 1);
      const start = 100 * SUMS_AT + SUMS * i;
      const row = many.batch.values.subarray(start, start + SUMS);
      expect([...one.values.subarray(SUMS_AT, SUMS_AT + SUMS)]).toEqual([...row]);
      expect(row[0]).not.toBe(0);
    }
    heap.release(TAG);
  }
});

// The reference has 40 digits (decimal.js). Seen here: V 2.1e-16, E 2.7e-16 of the sum of absolute
// terms, for single charges; with more of them errors cancel.
test('sums are near to exact ones, measured by the sum of absolute terms', () => {
  Decimal.set({precision: 40});
  let vMost = 0;
  let eMost = 0;
  for (const [n, count] of [1, 3, 30, BLOCK, 1000, 10_000].entries()) {
    const {charges, batch} = setOf(shapes[0], count, 3, 20 + n, heap.memoryOf(TAG));
    compiled.field(charges, 0, count, batch, 0, 3);
    for (let i = 0; i < 3; i++) {
      const target = [TARGET_X, TARGET_Y, TARGET_Z].map(axis => batch.values[3 * axis + i]);
      const exact = exactSums(charges, target);
      const found = [0, 1, 2, 3].map(k => {
        const at = 3 * SUMS_AT + SUMS * i + k;
        return batch.values[at] + batch.values[at + CARRIED];
      });
      const off = exact.sums.map((sum, k) => sum.minus(found[k]).abs());
      vMost = Math.max(vMost, off[0].div(exact.vTerms).toNumber());
      const eOff = Decimal.hypot(off[1], off[2], off[3]);
      eMost = Math.max(eMost, eOff.div(exact.eTerms).toNumber());
    }
    heap.release(TAG);
  }
  console.log(`largest error, of the sum of absolute terms: V ${vMost}, E ${eMost}`);
  expect(vMost).toBeLessThanOrEqual(1e-15);
  expect(eMost).toBeLessThanOrEqual(1e-14);
  // A reference that agreed with everything would be no check.
  expect(vMost).toBeGreaterThan(0);
});

function exactSums(charges: ChargeColumns, target: readonly number[]) {
  const sums = [0, 0, 0, 0].map(() => new Decimal(0));
  let vTerms = new Decimal(0);
  let eTerms = new Decimal(0);
  for (let j = 0; j < charges.count; j++) {
    const d = [charges.x[j], charges.y[j], charges.z[j]].map((s, k) =>
      new Decimal(target[k]).minus(s),
    );
    const square = d.reduce((sum, c) => sum.plus(c.times(c)), new Decimal(0));
    const v = new Decimal(charges.q[j]).div(square.sqrt());
    const strength = v.div(square);
    sums[0] = sums[0].plus(v);
    d.forEach((c, k) => (sums[k + 1] = sums[k + 1].plus(strength.times(c))));
    vTerms = vTerms.plus(v.abs());
    eTerms = eTerms.plus(strength.abs().times(square.sqrt()));
  }
  return {sums, vTerms, eTerms};
}

test('where there is no file of kernels there are no kernels, and no error', () => {
  expect(loadKernels(['./nowhere.wasm'])).toBeUndefined();
});
