import type {FarShare} from './effort.ts';
import type {Samples, Totals} from './multipole-job.ts';
import {countUnmasked, rootOfSquares} from './norms.ts';

/**
 * How much of V and of E comes from far boxes, from the near part at all targets and the whole at
 * the samples. Where targets come near charges, a few of them are most of the norm of E, and the
 * samples miss them; the near part does not.
 */
export function farShare(near: Totals, samples: Samples): FarShare {
  const share = (from: number, to: number): number => {
    const columns = near.slice(from, to);
    const sums = samples.sums.slice(from, to);
    const far: Float64Array[] = columns.map((column, axis) =>
      Float64Array.from(samples.indices, (target, n) => sums[axis][n] - column[target]),
    );
    const farSize = rootMeanSquare(far);
    const whole = rootMeanSquare(sums);
    const all = Math.max(whole, rootMeanSquare(columns) - farSize);
    return all === 0 ? 0 : farSize / all;
  };
  return {potential: share(0, 1), field: near.length > 1 ? share(1, 4) : 0};
}

function rootMeanSquare(columns: Totals): number {
  return rootOfSquares(columns) / Math.sqrt(Math.max(1, countUnmasked(columns)));
}
