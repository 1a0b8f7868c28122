import type {FieldJob} from '../jobs.ts';
import {seededSamples} from '../samples.ts';
import {positionsOfSamples} from '../targets.ts';
import type {Workplace} from '../workplace.ts';
import {DirectSum, RESULT} from './direct-sum.ts';

/** Targets that are looked at: what rounding may do hardly differs from one to the next. */
const SAMPLES = 32;

/**
 * What rounding may change a direct sum by, relative to V and to E in least squares: worst cases at
 * seeded targets. Large only where terms cancel almost wholly.
 */
export function reachedByRounding(job: FieldJob, workplace: Workplace): number {
  const indices = seededSamples(job.count, SAMPLES);
  const options = {
    kind: job.sum,
    bounds: 'magnitudes',
    coincidenceDistance: job.coincidenceDistance,
    isExcluding: true,
    chargeRoundings: 0,
  } as const;
  const sum = new DirectSum(job.charges, options, indices.length, workplace);
  const squares = {v: 0, e: 0, vBound: 0, eBound: 0};
  for (let start = 0; start < indices.length; start += sum.capacity) {
    const count = Math.min(sum.capacity, indices.length - start);
    positionsOfSamples(job.targets, indices, start, count, sum.positions);
    sum.compute(0, count, [0, job.charges.count]);
    for (let i = 0; i < count; i++) {
      squares.v += sum.result(RESULT.v)[i] ** 2;
      squares.vBound += sum.result(RESULT.vBound)[i] ** 2;
      if (job.sum === 'potential') continue;
      for (let axis = 0; axis < 3; axis++) squares.e += sum.result(RESULT.e + axis)[i] ** 2;
      squares.eBound += sum.result(RESULT.eBound)[i] ** 2;
    }
  }
  const ratio = (bound: number, value: number): number =>
    value === 0 ? 0 : Math.sqrt(bound / value);
  return Math.max(ratio(squares.vBound, squares.v), ratio(squares.eBound, squares.e));
}
