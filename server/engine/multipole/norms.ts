import type {Totals} from './multipole-job.ts';

/**
 * √Σ w |v|² of a vector over all targets that are not masked, for values of any size.
 *
 * @param weights w; 1 if not given
 */
export function rootOfSquares(columns: Totals, weights?: Float64Array): number {
  const scale = scaleOf(columns);
  const count = columns.length === 0 ? 0 : columns[0].length;
  let sum = 0;
  for (let i = 0; i < count; i++) {
    let square = 0;
    for (const column of columns) square += (column[i] * scale) ** 2;
    if (square >= 0) sum += weights ? weights[i] * square : square;
  }
  return Math.sqrt(sum) / scale;
}

/** A power of two that brings the largest value near 1, so that squares neither vanish nor overflow. */
function scaleOf(columns: Totals): number {
  let largest = 0;
  for (const column of columns) {
    for (const value of column) {
      if (Math.abs(value) > largest) largest = Math.abs(value);
    }
  }
  if (largest === 0 || largest === Infinity) return 1;
  return 2 ** -Math.min(1000, Math.max(-1000, Math.floor(Math.log2(largest))));
}

/** How many targets are not masked. */
export function countUnmasked(columns: Totals): number {
  let count = 0;
  for (let i = 0; i < columns[0].length; i++) {
    if (!columns.some(column => Number.isNaN(column[i]))) count++;
  }
  return count;
}
