import type {FieldJob} from '../jobs.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import {seededSamples} from '../samples.ts';
import {positionsOfSamples} from '../targets.ts';
import type {Workplace} from '../workplace.ts';
import type {Arena} from './arena.ts';
import {SAMPLING, type Samples, type Work} from './multipole-job.ts';

/** Targets that are summed directly as well, to see what was reached. */
const SAMPLES = 256;
/** Evaluations of a piece of work: some 20 ms of them. */
const PAIRS_OF_WORK = 8e6;

export function chooseSamples(field: FieldJob, arena: Arena): Samples {
  const indices = arena.keep(seededSamples(field.count, SAMPLES));
  const columns = field.sum === 'potential' ? 1 : 4;
  return {indices, sums: Array.from({length: columns}, () => arena.doubles(indices.length))};
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
