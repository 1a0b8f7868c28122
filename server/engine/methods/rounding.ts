import type {FieldJob} from '../jobs.ts';
import {seededSamples} from '../samples.ts';
import {rootOfSquares} from '../multipole/norms.ts';
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
  const [v, ex, ey, ez, vBound, eBound] = Array.from(
    {length: 6},
    () => new Float64Array(indices.length),
  );
  for (let start = 0; start < indices.length; start += sum.capacity) {
    const count = Math.min(sum.capacity, indices.length - start);
    positionsOfSamples(job.targets, indices, start, count, sum.positions);
    sum.compute(0, count, [0, job.charges.count]);
    const keep = (place: number, out: Float64Array): void => {
      out.set(sum.result(place).subarray(0, count), start);
    };
    keep(RESULT.v, v);
    keep(RESULT.vBound, vBound);
    if (job.sum === 'potential') continue;
    [ex, ey, ez].forEach((out, axis) => {
      keep(RESULT.e + axis, out);
    });
    keep(RESULT.eBound, eBound);
  }
  return Math.max(ratio([vBound], [v]), ratio([eBound], [ex, ey, ez]));
}

/** Where terms cancel wholly all may be lost, but no more than that. */
function ratio(bounds: readonly Float64Array[], values: readonly Float64Array[]): number {
  const bound = rootOfSquares(bounds);
  const value = rootOfSquares(values);
  if (bound === 0) return 0;
  return value === 0 ? 1 : Math.min(bound / value, Number.MAX_VALUE);
}
