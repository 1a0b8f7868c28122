import type {FieldJob} from '../jobs.ts';
import type {Arena} from './arena.ts';
import type {EstimatedError, Part, Samples} from './multipole-job.ts';

/** Sums over all parts [C/m, C/m²] at the targets of the request: V, Eₓ, E_y, E_z; NaN if masked. */
export type Totals = readonly Float64Array[];

/** Adds up what the parts have at their sorted targets, turned into the common frame. */
export function addUp(field: FieldJob, parts: readonly Part[], arena: Arena): Totals {
  const columns = field.sum === 'potential' ? 1 : 4;
  const totals = Array.from({length: columns}, () => arena.doubles(field.count));
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

const IDENTITY = [1, 0, 0, 0, 1, 0, 0, 0, 1];

/** What the answer differs by from direct sums at the samples, in the sense of the tolerance. */
export function estimateError(totals: Totals, samples: Samples): EstimatedError {
  const potential = relativeErrors(totals.slice(0, 1), samples.indices, samples.sums.slice(0, 1));
  const shared = {
    potential: potential.relative,
    largestPotential: potential.largest,
    samples: potential.count,
  };
  if (totals.length === 1) return shared;
  const field = relativeErrors(totals.slice(1), samples.indices, samples.sums.slice(1));
  return {...shared, field: field.relative, largestField: field.largest};
}

/** Mean squares of a vector over all targets that are not masked. */
export function meanSquare(columns: Totals): number {
  let sum = 0;
  let count = 0;
  const [first] = columns;
  for (let i = 0; i < first.length; i++) {
    let square = 0;
    for (const column of columns) square += column[i] * column[i];
    if (!(square >= 0)) continue;
    sum += square;
    count++;
  }
  return count === 0 ? 0 : sum / count;
}

function relativeErrors(
  columns: Totals,
  indices: Int32Array,
  sums: readonly Float64Array[],
): {relative: number; largest: number; count: number} {
  let total = 0;
  let largest = 0;
  let count = 0;
  indices.forEach((target, n) => {
    let square = 0;
    columns.forEach((column, axis) => (square += (column[target] - sums[axis][n]) ** 2));
    if (!(square >= 0)) return;
    total += square;
    largest = Math.max(largest, square);
    count++;
  });
  const all = meanSquare(columns);
  const over = (square: number): number => (square === 0 ? 0 : Math.sqrt(square / all));
  return {relative: over(count === 0 ? 0 : total / count), largest: over(largest), count};
}

/** Whether what was measured is well within what was asked. */
export function isReached({potential, field = 0}: EstimatedError, tolerance: number): boolean {
  return Math.max(potential, field) <= CERTAINTY * tolerance;
}

/** The samples are few, so not all of the tolerance is used. */
const CERTAINTY = 0.85;
