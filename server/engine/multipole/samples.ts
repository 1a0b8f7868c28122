import type {FieldJob} from '../jobs.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import type {PositionColumns} from '../positions.ts';
import {targetPositions} from '../targets.ts';
import type {Workplace} from '../workplace.ts';
import type {Arena} from './arena.ts';
import {SAMPLING, type Samples, type Work} from './multipole-job.ts';

/** Targets that are summed directly as well, to see what was reached. */
const SAMPLES = 256;
/** Evaluations of a piece of work: some 20 ms of them. */
const PAIRS_OF_WORK = 8e6;

/**
 * One target of each of SAMPLES parts of equal length, by a generator with a fixed seed: mulberry32,
 * a counter and a mixing function (after G. Marsaglia, Xorshift RNGs, J. Stat. Softw. 8 (2003)).
 */
export function chooseSamples(field: FieldJob, arena: Arena): Samples {
  const length = Math.min(SAMPLES, field.count);
  const indices = arena.integers(length);
  let state = 0x5eed;
  for (let n = 0; n < length; n++) {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    const share = ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
    indices[n] = Math.floor(((n + share) * field.count) / length);
  }
  const columns = field.sum === 'potential' ? 1 : 4;
  return {indices, sums: Array.from({length: columns}, () => arena.doubles(length))};
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
    for (let i = 0; i < count; i++) {
      targetPositions(field.targets, samples.indices[start + i], 1, rowOf(sum.positions, i));
    }
    sum.compute(0, count, [0, field.charges.count]);
    samples.sums.forEach((column, n) => {
      column.set(sum.result(n === 0 ? RESULT.v : RESULT.e + n - 1).subarray(0, count), start);
      for (const i of sum.withoutSum) column[start + i] = NaN;
    });
  }
}

/** One position of columns, as columns. */
function rowOf(columns: PositionColumns, i: number): PositionColumns {
  const one = (column: Float64Array): Float64Array => column.subarray(i, i + 1);
  return {
    x: one(columns.x),
    y: one(columns.y),
    z: one(columns.z),
    xRemainder: one(columns.xRemainder),
    yRemainder: one(columns.yRemainder),
    zRemainder: one(columns.zRemainder),
    radius: one(columns.radius),
  };
}
