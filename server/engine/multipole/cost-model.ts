import {efforts, effortFor, type Effort} from './effort.ts';

/**
 * How long the two methods take, for charges and targets spread evenly over a cube. The constants
 * are those of one machine (bench/multipole.ts measures them) and fixed for an engine version: they
 * choose the method, and the same request must be computed by the same method everywhere.
 */

/** [ms] a pair of a direct sum, and of the sums over near boxes in both precisions. */
const DIRECT = {potential: 2.0e-6, field: 2.25e-6};
const NEAR = {single: 2.0e-6, double: 2.4e-6};
/** [ms] a charge and a target, apart from what depends on the level: sorting, lists, copies. */
const CHARGE = 3.8e-4;
const TARGET = 5e-4;
/** [ms] a pair of charge or target and a number of an expansion. */
const HARMONIC = 4.5e-7;
/** [ms] a number of a matrix of far boxes, for one box. */
const FAR = 1.1e-7;
/** [ms] a box, apart from that: lists and translations up and down. */
const BOX = 8e-3;
/** [ms] a call: phases, samples of few targets, memory. */
const CALL = 3;
const SAMPLES = 240;

/** Numbers of the matrices that one box is multiplied by, by level. */
const FAR_NUMBERS: Readonly<Record<string, number>> = {
  a: 3.1e4,
  b: 6e4,
  c: 1.1e5,
  d: 1.6e5,
  e: 2.6e5,
  f: 4.2e5,
  g: 5.8e5,
  h: 9.5e5,
  i: 1.4e6,
  j: 2e6,
};

/** [ms] on one thread */
export function directMilliseconds(charges: number, targets: number, isField: boolean): number {
  return charges * targets * (isField ? DIRECT.field : DIRECT.potential);
}

/** [ms] on one thread */
export function multipoleMilliseconds(
  charges: number,
  targets: number,
  tolerance: number,
  isField: boolean,
): number {
  const effort = efforts[effortFor(tolerance, isField)];
  const {level} = effort;
  const depth = depthFor(charges, targets, effort);
  const points =
    charges * CHARGE +
    targets * TARGET +
    HARMONIC * (level.degree + 1) ** 2 * (charges + (isField ? 2.5 : 1) * targets);
  // Boxes of all levels that are far from anything.
  const boxes = depth < 2 ? 0 : Math.min((8 ** (depth + 1) - 64) / 7, depth * targets);
  const far = boxes * (BOX + FAR * FAR_NUMBERS[level.name]);
  const pairs = charges * targets * nearShare(depth, level.separation);
  const near = pairs * NEAR[level.precision] * (isField ? 1 : 0.8);
  const sampling = directMilliseconds(charges, Math.min(SAMPLES, targets), isField);
  return CALL + points + far + near + sampling;
}

/** How many times boxes are split until a pair of near ones is little work. */
function depthFor(charges: number, targets: number, {pairs, capacity}: Effort): number {
  let depth = 0;
  while (
    charges / 8 ** depth > capacity &&
    (charges / 8 ** depth) * (targets / 8 ** depth) > pairs
  ) {
    depth++;
  }
  return depth;
}

/** The share of all pairs of boxes that are near: along each axis, boxes no further than that. */
function nearShare(depth: number, separation: number): number {
  const side = 2 ** depth;
  const reach = Math.min(separation, side - 1);
  const near = side * (2 * reach + 1) - reach * (reach + 1);
  return (near / side ** 2) ** 3;
}
