import {TARGET_X, TARGET_Z} from '../server/engine/kernels/layout.ts';
import type {TargetBatch} from '../server/engine/kernels/target-batch.ts';
import type {Memory} from '../server/engine/memory.ts';
import {chargeColumns, type ChargeColumns} from '../server/engine/sources/charge-columns.ts';

export type Point = [number, number, number];

/** A way to scatter charges and targets. */
export interface Shape {
  readonly name: string;
  readonly point: () => Point;
}

/** The same numbers in every run: a linear congruential generator (Numerical Recipes, §7.1). */
let state = 1;
export const random = (): number => {
  state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
  return state / 2 ** 32;
};

const centres = Array.from({length: 20}, () => [random(), random(), random()]);

export const uniform: Shape = {name: 'uniform', point: () => [random(), random(), random()]};
export const clustered: Shape = {
  name: 'clustered',
  point: () => {
    const [x, y, z] = centres[Math.floor(random() * centres.length)];
    return [x + 1e-3 * random(), y + 1e-3 * random(), z + 1e-3 * random()];
  },
};
/** All on one line, many at the same place, targets among them. */
export const degenerate: Shape = {
  name: 'degenerate',
  point: () => [Math.floor(1000 * random()) / 1000, 0, 0],
};

export function randomCharges(count: number, {point}: Shape, memory: Memory): ChargeColumns {
  const charges = chargeColumns(count, memory);
  for (let j = 0; j < count; j++) {
    [charges.x[j], charges.y[j], charges.z[j]] = point();
    charges.q[j] = random() - 0.5;
  }
  return charges;
}

/** Gives all targets of a batch new places. */
export function scatter({values, capacity}: TargetBatch, {point}: Shape): void {
  for (let i = 0; i < capacity; i++) {
    const at = point();
    for (let axis = TARGET_X; axis <= TARGET_Z; axis++) values[axis * capacity + i] = at[axis];
  }
}
