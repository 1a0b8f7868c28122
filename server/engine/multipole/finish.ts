import type {FieldJob} from '../jobs.ts';
import type {Arena} from './arena.ts';
import type {EstimatedError, Part, Samples, Totals} from './multipole-job.ts';
import {countUnmasked, rootOfSquares} from './norms.ts';

/** Adds up what the parts have at their sorted targets, turned into the common frame. */
export function addUp(field: FieldJob, parts: readonly Part[], arena: Arena): Totals {
  const totals = roomForTotals(field, arena);
  for (const {charges, targets, values} of parts) {
    const {order} = targets;
    const {v, e} = values;
    const [tv, tx, ty, tz] = totals;
    for (let i = 0; i < order.length; i++) tv[order[i]] += v[i];
    if (e.length === 0) continue;
    const [ex, ey, ez] = e;
    const [a, b, c, d, f, g, h, k, l] = charges.placement?.rotation ?? IDENTITY;
    for (let i = 0; i < order.length; i++) {
      const target = order[i];
      tx[target] += a * ex[i] + b * ey[i] + c * ez[i];
      ty[target] += d * ex[i] + f * ey[i] + g * ez[i];
      tz[target] += h * ex[i] + k * ey[i] + l * ez[i];
    }
  }
  return totals;
}

/** In the columns of the answer where it has them, which are scaled later. */
function roomForTotals({sum, columns, count, out}: FieldJob, arena: Arena): Totals {
  const names = sum === 'potential' ? TOTALS.slice(0, 1) : TOTALS;
  return names.map(name => {
    const index = columns.indexOf(name);
    return index < 0
      ? arena.doubles(count)
      : out.subarray(index * count, (index + 1) * count).fill(0);
  });
}

const TOTALS = ['potential', 'fieldX', 'fieldY', 'fieldZ'] as const;

const IDENTITY = [1, 0, 0, 0, 1, 0, 0, 0, 1];

/** What the answer differs by from direct sums at the samples, in the sense of the tolerance. */
export function estimateError(totals: Totals, samples: Samples): EstimatedError {
  const potential = relativeErrors(totals.slice(0, 1), samples, 0);
  const shared = {
    potential: potential.relative,
    largestPotential: potential.largest,
    samples: countUnmasked(samples.sums),
  };
  if (totals.length === 1) return shared;
  const field = relativeErrors(totals.slice(1), samples, 1);
  return {...shared, field: field.relative, largestField: field.largest};
}

function relativeErrors(
  columns: Totals,
  {indices, weights, sums}: Samples,
  firstSum: number,
): {relative: number; largest: number} {
  const errors = columns.map((column, axis) =>
    Float64Array.from(indices, (target, n) => column[target] - sums[firstSum + axis][n]),
  );
  const error = rootOfSquares(errors, weights);
  let largest = 0;
  indices.forEach((_, n) => {
    const size = rootOfSquares(errors.map(column => column.subarray(n, n + 1)));
    largest = Math.max(largest, size);
  });
  const all = rootOfSquares(columns);
  const mean = all / Math.sqrt(Math.max(1, countUnmasked(columns)));
  return {
    relative: error === 0 ? 0 : error / all,
    largest: largest === 0 ? 0 : largest / mean,
  };
}

/** Whether what was measured is well within what was asked. */
export function isReached({potential, field = 0}: EstimatedError, tolerance: number): boolean {
  return Math.max(potential, field) <= CERTAINTY * tolerance;
}

/** The samples are few, so not all of the tolerance is used. */
const CERTAINTY = 0.85;
