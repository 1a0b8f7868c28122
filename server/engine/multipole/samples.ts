import type {FieldJob} from '../jobs.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import {seededSamples} from '../samples.ts';
import {positionsOfSamples} from '../targets.ts';
import type {Workplace} from '../workplace.ts';
import type {Arena} from './arena.ts';
import {SAMPLING, type Samples, type Totals, type Work} from './multipole-job.ts';
import {rootOfSquares} from './norms.ts';

/** Targets that are summed directly as well: to choose a level, and to see what was reached. */
const FIRST_SAMPLES = 32;
const CHECKED_SAMPLES = 216;
/** Of those that were drawn, how many should be different. */
const LEAST_SAMPLES = 200;
/** Evaluations of a piece of work: some 20 ms of them. */
const PAIRS_OF_WORK = 8e6;

/** Some targets, while nothing is known of any. */
export function chooseSamples(field: FieldJob, arena: Arena): Samples {
  const indices = arena.keep(seededSamples(field.count, FIRST_SAMPLES));
  const weights = arena.doubles(indices.length).fill(field.count / indices.length);
  return {indices, weights, sums: roomForSums(field, indices.length, arena)};
}

/**
 * Those to tell the error by. Of few targets all; of many, each with a chance of four parts: one the
 * same for all, and one each by its share in ‖V‖², in ‖E‖² and in ‖E‖² of the far part. Where a few
 * targets make most of a norm, as those of a large grid that lie in a small cloud of charges do, or
 * most of the error, as those next to a cluster that is just far enough do, they are among the
 * samples (M. H. Hansen and W. N. Hurwitz, Ann. Math. Stat. 14 (1943)).
 *
 * @param near what of E, or of V if there is no E, comes from near boxes
 */
export function chooseChecks(
  field: FieldJob,
  totals: Totals,
  near: readonly Float32Array[],
  arena: Arena,
): Samples {
  const {count} = field;
  if (count <= CHECKED_SAMPLES) {
    const indices = arena.keep(seededSamples(count, count));
    const weights = arena.doubles(count).fill(1);
    return {indices, weights, sums: roomForSums(field, count, arena)};
  }
  const chances = new Float64Array(count);
  addShares(chances, totals.slice(0, 1));
  addShares(chances, totals.slice(1));
  addFarShares(chances, totals.length > 1 ? totals.slice(1) : totals, near);
  let all = 0;
  for (let i = 0; i < count; i++) {
    chances[i] += 1 / count;
    all += chances[i];
  }
  // A target may be drawn twice, so some more draws are tried where too few were different.
  let draws = CHECKED_SAMPLES;
  let drawn = draw(chances, all, draws);
  for (let tries = 0; drawn.chosen.length < LEAST_SAMPLES && tries < 4; tries++) {
    draws = Math.ceil(1.25 * draws);
    drawn = draw(chances, all, draws);
  }
  const indices = arena.keep(drawn.chosen);
  const stored = arena.doubles(indices.length);
  stored.set(drawn.weights);
  return {indices, weights: stored, sums: roomForSums(field, indices.length, arena)};
}

/** Targets drawn by their chances, and what each stands for. */
function draw(
  chances: Float64Array,
  all: number,
  draws: number,
): {chosen: number[]; weights: number[]} {
  const places = seededSamples(PARTS, draws);
  const chosen: number[] = [];
  const weights: number[] = [];
  let passed = 0;
  for (let i = 0, n = 0; i < chances.length; i++) {
    passed += chances[i];
    const before = n;
    while (n < places.length && (places[n] / PARTS) * all < passed) n++;
    if (n === before) continue;
    chosen.push(i);
    // How often it was met, over how often that is to be expected.
    weights.push(((n - before) / places.length) * (all / chances[i]));
  }
  return {chosen, weights};
}

/** The sum of all chances, in as many parts as tell places apart. */
const PARTS = 2 ** 30;

/** Adds what part of ‖columns‖² every target has; masked ones have none. */
function addShares(chances: Float64Array, columns: Totals): void {
  const root = rootOfSquares(columns);
  if (!(root > 0 && root < Infinity)) return;
  for (let i = 0; i < chances.length; i++) {
    let share = 0;
    for (const column of columns) share += (column[i] / root) ** 2;
    if (share >= 0) chances[i] += share;
  }
}

/** The same for what is left of columns without their near part; if that can be squared. */
function addFarShares(chances: Float64Array, columns: Totals, near: readonly Float32Array[]): void {
  const squareAt = (i: number): number => {
    let square = 0;
    near.forEach((part, n) => (square += (columns[n][i] - part[i]) ** 2));
    return square;
  };
  let all = 0;
  for (let i = 0; i < chances.length; i++) {
    const square = squareAt(i);
    if (square >= 0) all += square;
  }
  if (!(all > 0 && all < Infinity)) return;
  for (let i = 0; i < chances.length; i++) {
    const share = squareAt(i) / all;
    if (share >= 0) chances[i] += share;
  }
}

function roomForSums({sum}: FieldJob, count: number, arena: Arena): Float64Array[] {
  return Array.from({length: sum === 'potential' ? 1 : 4}, () => arena.doubles(count));
}

export function samplingWork({charges}: FieldJob, {indices}: Samples): Work[] {
  const perWork = Math.max(1, Math.floor(PAIRS_OF_WORK / charges.count));
  const work: Work[] = [];
  for (let first = 0; first < indices.length; first += perWork) {
    work.push({part: SAMPLING, first, last: Math.min(first + perWork, indices.length)});
  }
  return work;
}

/** Sums some of the samples directly. */
export function sumSamples(
  field: FieldJob,
  samples: Samples,
  first: number,
  last: number,
  workplace: Workplace,
): void {
  const options = {
    kind: field.sum,
    bounds: 'none',
    coincidenceDistance: field.coincidenceDistance,
    isExcluding: field.onCoincidence === 'exclude',
    chargeRoundings: 0,
  } as const;
  const sum = new DirectSum(field.charges, options, last - first, workplace);
  for (let start = first; start < last; start += sum.capacity) {
    const count = Math.min(sum.capacity, last - start);
    positionsOfSamples(field.targets, samples.indices, start, count, sum.positions);
    sum.compute(0, count, [0, field.charges.count]);
    samples.sums.forEach((column, n) => {
      column.set(sum.result(n === 0 ? RESULT.v : RESULT.e + n - 1).subarray(0, count), start);
      for (const i of sum.withoutSum) column[start + i] = NaN;
    });
  }
}
