import {CHARGE_COLUMNS, CHARGE_Q, CHARGE_Q_REMAINDER} from '../layout';

/** Constants in memory, twice each: V8 makes those of the code again in every turn of a loop. */
export const ONES: usize = memory.data<f64>([1, 1]);
export const HALVES: usize = memory.data<f64>([0.5, 0.5]);
export const THREES: usize = memory.data<f64>([3, 3]);
/** 3 √6 */
export const ROOT_SIX: usize = memory.data<f64>([7.348469228349534, 7.348469228349534]);
const SPLITTERS: usize = memory.data<f64>([134217729, 134217729]);

/** (a₀ + a₁, b₀ + b₁): the two partial sums of each of two sums. */
// @ts-ignore: decorator
@inline
export function fold(a: v128, b: v128): v128 {
  return f64x2.add(
    v128.shuffle<f64>(a, b, 0, 2),
    v128.shuffle<f64>(a, b, 1, 3),
  );
}

/** a + b − sum, exactly, for sum = fl(a + b); as in exact.ts. */
// @ts-ignore: decorator
@inline
export function sumError(a: v128, b: v128, sum: v128): v128 {
  const second = f64x2.sub(sum, a);
  return f64x2.add(f64x2.sub(a, f64x2.sub(sum, second)), f64x2.sub(b, second));
}

/** The upper 26 bits, as in exact.ts. */
// @ts-ignore: decorator
@inline
export function upperHalf(a: v128): v128 {
  const scaled = f64x2.mul(v128.load(SPLITTERS), a);
  return f64x2.sub(scaled, f64x2.sub(scaled, a));
}

/** Adds two terms to the two sums at `sum`, and what that rounds to those at `carried`. */
// @ts-ignore: decorator
@inline
export function carry(sum: usize, carried: usize, term: v128): void {
  const before = v128.load(sum);
  const after = f64x2.add(before, term);
  v128.store(sum, after);
  v128.store(carried, f64x2.add(v128.load(carried), sumError(before, term, after)));
}

/**
 * Puts the last charge of an odd block into both lanes at `to`, columns 16 bytes apart, the second
 * time with a charge of zero: what that adds to a sum leaves its bits alone.
 */
export function pairWithNothing(at: usize, step: usize, to: usize): void {
  for (let column = 0; column < CHARGE_COLUMNS; column++) {
    const value = load<f64>(at + <usize>column * step);
    const isCharge = column == CHARGE_Q || column == CHARGE_Q_REMAINDER;
    store<f64>(to, value);
    store<f64>(to, isCharge ? 0 : value, 8);
    to += 16;
  }
}
