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

/** What is known of the error. */
export interface Finding {
  readonly estimated: EstimatedError;
  /** The larger of the errors of V and E, three standard deviations of the estimate further up. */
  readonly upper: number;
}

/** What the answer differs by from direct sums at the samples, in the sense of the tolerance. */
export function findError(totals: Totals, samples: Samples): Finding {
  const potential = relativeErrors(totals.slice(0, 1), samples, 0);
  const shared = {
    potential: potential.relative,
    largestPotential: potential.largest,
    samples: countUnmasked(samples.sums),
  };
  if (totals.length === 1) return {estimated: shared, upper: potential.upper};
  const field = relativeErrors(totals.slice(1), samples, 1);
  return {
    estimated: {...shared, field: field.relative, largestField: field.largest},
    upper: Math.max(potential.upper, field.upper),
  };
}

interface RelativeErrors {
  readonly relative: number;
  readonly upper: number;
  readonly largest: number;
}

function relativeErrors(
  columns: Totals,
  {indices, weights, sums}: Samples,
  firstSum: number,
): RelativeErrors {
  const errors = columns.map((column, axis) =>
    Float64Array.from(indices, (target, n) => column[target] - sums[firstSum + axis][n]),
  );
  const error = rootOfSquares(errors, weights);
  if (error === 0) return {relative: 0, upper: 0, largest: 0};
  const sizes = Float64Array.from(indices, (_, n) =>
    rootOfSquares(errors.map(column => column.subarray(n, n + 1))),
  );
  const all = rootOfSquares(columns);
  const mean = all / Math.sqrt(Math.max(1, countUnmasked(columns)));
  const isSampled = indices.length < columns[0].length;
  const margin = isSampled ? DEVIATIONS * deviation(sizes, weights, error) : 0;
  return {
    relative: error / all,
    upper: (error * Math.sqrt(1 + margin)) / all,
    largest: Math.max(...sizes) / mean,
  };
}

const DEVIATIONS = 3;

/** Standard deviation of Σ w |Δ|², relative to it. */
function deviation(sizes: Float64Array, weights: Float64Array, error: number): number {
  const count = sizes.length;
  let sum = 0;
  for (let n = 0; n < count; n++) sum += (weights[n] * (sizes[n] / error) ** 2 - 1 / count) ** 2;
  return Math.sqrt((count * sum) / Math.max(1, count - 1));
}
