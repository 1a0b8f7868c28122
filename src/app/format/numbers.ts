/** A number as it is written: digits with the sign, and a power of ten where one is needed. */
export interface WrittenNumber {
  /** Sign, digits and point; the minus is U+2212. */
  readonly digits: string;
  readonly exponent: number | null;
}

const MINUS = '−';

const signed = (text: string): string => text.replace('-', MINUS);

/** Whether every digit of a written number is zero: zero never carries a sign. */
const isZero = (text: string): boolean => !/[1-9]/.test(text);

const withoutSignOfZero = (text: string): string => (isZero(text) ? text.replace('-', '') : text);

/** `value` with a fixed number of decimals, for columns whose points line up. */
export function fixed(value: number, decimals: number): WrittenNumber {
  return {digits: signed(withoutSignOfZero(value.toFixed(decimals))), exponent: null};
}

/** `value` with `count` significant digits; scientific below 10⁻³ and from 10⁷ on. */
export function significant(value: number, count = 4): WrittenNumber {
  if (!Number.isFinite(value)) return {digits: '–', exponent: null};
  if (value === 0) return {digits: '0', exponent: null};
  const [mantissa, power] = value.toExponential(count - 1).split('e');
  const exponent = Number(power);
  if (exponent < -3 || exponent >= 7) return {digits: signed(mantissa), exponent};
  return {digits: signed(value.toFixed(Math.max(0, count - 1 - exponent))), exponent: null};
}

/** One line of plain text, for canvas, titles and files that people read. */
export function plain({digits, exponent}: WrittenNumber): string {
  return exponent === null ? digits : `${digits} × 10^${signed(String(exponent))}`;
}

/** The digits in groups of three on both sides of the point, from four digits on. */
export function groups(digits: string): string[] {
  const [, sign, whole, fraction] = /^(\D?)(\d*)(?:\.(\d+))?$/.exec(digits) ?? [];
  if (whole === undefined) return [digits];
  const left = whole.length < 4 ? [whole] : whole.split(/(?=(?:\d{3})+$)/);
  const right =
    fraction === undefined
      ? []
      : fraction.length < 4
        ? [fraction]
        : (fraction.match(/\d{1,3}/g) ?? []);
  left[0] = sign + left[0];
  if (right.length > 0) left[left.length - 1] += `.${right[0]}`;
  return [...left, ...right.slice(1)];
}

/**
 * Pairs are exact up to nine digits; above, giga or tera with the decimals that keep four digits, cut and
 * not rounded, so that no more is shown than there is.
 */
export function pairs(count: number): {written: WrittenNumber; unit: string} {
  if (Math.abs(count) < 1e9) return {written: fixed(count, 0), unit: 'pairs'};
  const [scale, unit] = Math.abs(count) < 1e12 ? [1e9, 'Gpairs'] : [1e12, 'Tpairs'];
  const scaled = count / scale;
  const decimals = Number.isInteger(scaled) ? 0 : Math.abs(scaled) < 10 ? 3 : 1;
  const part = 10 ** decimals;
  return {written: fixed(Math.trunc(scaled * part) / part, decimals), unit};
}

/** One line for pairs, grouped with narrow spaces, for labels that are text only. */
export function pairsText(count: number): string {
  const {written, unit} = pairs(count);
  return `${groups(written.digits).join('\u202f')} ${unit}`;
}

/**
 * A way to write the numbers of one column: the same decimals for all, so that their points line up, and
 * about `digits` of them significant in the largest; scientific where that would take too many.
 */
export function columnWriter(
  values: Iterable<number>,
  digits = 5,
): (value: number) => WrittenNumber {
  let largest = 0;
  for (const value of values) largest = Math.max(largest, Math.abs(value));
  if (largest === 0 || !Number.isFinite(largest)) return value => significant(value, 4);
  const exponent = Math.floor(Math.log10(largest));
  if (exponent < -3 || exponent >= 7) return value => significant(value, 4);
  const decimals = Math.min(6, Math.max(0, digits - 1 - exponent));
  return value => fixed(value, decimals);
}
