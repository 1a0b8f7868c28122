/**
 * Error-free transformations: the exact rounding error of one operation in double precision.
 *
 * T. J. Dekker, A floating-point technique for extending the available precision, Numer. Math. 18
 * (1971); D. E. Knuth, The Art of Computer Programming 2, §4.2.2. Exact while nothing overflows or
 * underflows, which the contract's bounds on inputs (1e24) and MIN_DISTANCE see to.
 */

/** Half a unit in the last place of 1: the largest relative error of one rounding. */
export const UNIT_ROUNDOFF = 2 ** -53;

const SPLITTER = 2 ** 27 + 1;

/** The upper 26 bits of `a`; `a` minus it is exact and has 26 bits as well. */
export function upperHalf(a: number): number {
  const scaled = SPLITTER * a;
  return scaled - (scaled - a);
}

/** a + b − sum, exactly, for sum = fl(a + b). */
export function sumError(a: number, b: number, sum: number): number {
  const second = sum - a;
  return a - (sum - second) + (b - second);
}

/** a · b − product, exactly, for product = fl(a · b). */
export function productError(a: number, b: number, product: number): number {
  const aUpper = upperHalf(a);
  const aLower = a - aUpper;
  const bUpper = upperHalf(b);
  const bLower = b - bUpper;
  return aUpper * bUpper - product + aUpper * bLower + aLower * bUpper + aLower * bLower;
}

/** a ÷ b − quotient, to about 2⁻⁵³ of itself, for quotient = fl(a ÷ b); 0 only if it is exact. */
export function quotientError(a: number, b: number, quotient: number): number {
  const product = quotient * b;
  return (a - product - productError(quotient, b, product)) / b;
}

/** A number as an unevaluated sum of two doubles: about 32 decimal digits. */
export interface Wide {
  readonly upper: number;
  readonly lower: number;
}

export const wide = (upper: number, lower = 0): Wide => ({upper, lower});

/** upper + lower, renormalised; |upper| ≥ |lower| or upper = 0. */
function normalised(upper: number, lower: number): Wide {
  const sum = upper + lower;
  return {upper: sum, lower: lower - (sum - upper)};
}

export function add(a: Wide, b: Wide): Wide {
  const sum = a.upper + b.upper;
  const lower = a.lower + b.lower;
  const lowerError = sumError(a.lower, b.lower, lower);
  const first = normalised(sum, sumError(a.upper, b.upper, sum) + lower);
  return normalised(first.upper, first.lower + lowerError);
}

export const negated = (a: Wide): Wide => ({upper: -a.upper, lower: -a.lower});

export const subtract = (a: Wide, b: Wide): Wide => add(a, negated(b));

export function multiply(a: Wide, b: Wide): Wide {
  const product = a.upper * b.upper;
  const error = productError(a.upper, b.upper, product);
  return normalised(product, error + (a.upper * b.lower + a.lower * b.upper));
}

export function divide(a: Wide, b: Wide): Wide {
  const first = a.upper / b.upper;
  const rest = subtract(a, multiply(b, wide(first)));
  const second = rest.upper / b.upper;
  const last = subtract(rest, multiply(b, wide(second)));
  return add(normalised(first, second), wide(last.upper / b.upper));
}

/** @param a ≥ 0 */
export function squareRoot(a: Wide): Wide {
  if (a.upper === 0) return wide(0);
  const root = Math.sqrt(a.upper);
  const rest = subtract(a, multiply(wide(root), wide(root)));
  return normalised(root, rest.upper / (2 * root));
}
