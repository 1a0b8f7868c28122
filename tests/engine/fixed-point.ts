/**
 * Fixed-point arithmetic on BigInt: an outside source for checks of the engine's rounding. Values
 * are multiples of 2^−BITS, about 77 digits after the point; every operation is off by at most one
 * such unit, which leaves well over 30 digits of everything the tests compute.
 */
export const BITS = 256n;
export const ONE = 1n << BITS;

const view = new DataView(new ArrayBuffer(8));

/** The exact value of a double, cut off below 2^−BITS. */
export function fixed(value: number): bigint {
  if (value === 0) return 0n;
  if (!Number.isFinite(value)) throw new RangeError(`expected a finite number; got ${value}`);
  view.setFloat64(0, value);
  const bits = view.getBigUint64(0);
  const exponent = Number((bits >> 52n) & 0x7ffn);
  const fraction = bits & 0xfffffffffffffn;
  const mantissa = exponent === 0 ? fraction : fraction | (1n << 52n);
  const shift = BigInt(Math.max(exponent, 1) - 1075) + BITS;
  const size = shift >= 0n ? mantissa << shift : mantissa >> -shift;
  return value < 0 ? -size : size;
}

export const times = (a: bigint, b: bigint): bigint => (a * b) >> BITS;
export const over = (a: bigint, b: bigint): bigint => (a << BITS) / b;
export const size = (a: bigint): bigint => (a < 0n ? -a : a);

/** The nearest double, but for the last places. */
export function toNumber(a: bigint): number {
  const digits = size(a).toString(2).length;
  const shift = Math.max(0, digits - 60);
  const top = Number(a >> BigInt(shift));
  return top * 2 ** (shift - 128) * 2 ** -(Number(BITS) - 128);
}

/** √a by Newton's iteration, from the double root on. */
export function root(a: bigint): bigint {
  if (a < 0n) throw new RangeError('expected no negative number');
  if (a === 0n) return 0n;
  const square = a << BITS;
  let x = fixed(Math.sqrt(toNumber(a)));
  if (x === 0n) x = 1n;
  for (;;) {
    const next = (x + square / x) >> 1n;
    if (size(next - x) <= 1n) return next;
    x = next;
  }
}

/** A decimal such as '3.14e-2', exactly but for the last unit. */
export function decimal(text: string): bigint {
  const [digits, exponent = '0'] = text.split('e');
  const [whole, fraction = ''] = digits.split('.');
  const power = Number(exponent) - fraction.length;
  const integer = BigInt(whole + fraction);
  return power >= 0
    ? (integer * 10n ** BigInt(power)) << BITS
    : (integer << BITS) / 10n ** BigInt(-power);
}

/** π; digits as in OEIS A000796. */
export const PI = decimal(
  '3.14159265358979323846264338327950288419716939937510582097494459230781640628620899862803482534',
);

/** cos and sin of an angle in degrees, by their Taylor series. */
export function cosineAndSine(degrees: number): [bigint, bigint] {
  const angle = times(fixed(degrees % 360), PI) / 180n;
  let term = ONE;
  let cosine = 0n;
  let sine = 0n;
  for (let n = 1n; size(term) > 0n; n++) {
    const sign = (n - 1n) % 4n < 2n ? 1n : -1n;
    if (n % 2n === 1n) cosine += sign * term;
    else sine += sign * term;
    term = times(term, angle) / n;
  }
  return [cosine, sine];
}
