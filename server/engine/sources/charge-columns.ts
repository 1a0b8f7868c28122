import {
  CHARGE_COLUMNS,
  CHARGE_Q,
  CHARGE_Q_REMAINDER,
  CHARGE_RADIUS,
  CHARGE_X,
  CHARGE_X_REMAINDER,
  CHARGE_Y,
  CHARGE_Y_REMAINDER,
  CHARGE_Z,
  CHARGE_Z_REMAINDER,
} from '../kernels/layout.ts';
import type {Memory} from '../memory.ts';

/**
 * Point charges, packed: SI columns of one length, bodies one after the other.
 *
 * A remainder is what rounding took away on the way in (exact value minus double); a radius is how
 * far the exact position may be off, doubled, so that two positions further apart than the sum of
 * their radii cannot be the same one.
 */
export interface ChargeColumns {
  readonly count: number;
  /** Numbers from the beginning of one column to that of the next, in the order of layout.ts. */
  readonly stride: number;
  /** [bytes] where `x` begins in the heap; undefined elsewhere */
  readonly address: number | undefined;
  /** [m] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
  /** [C] */
  readonly q: Float64Array;
  /** [m], 0 where nothing was rounded */
  readonly radius: Float64Array;
  /** [m, m, m, C]; what `x`, `y`, `z` and `q` lack */
  readonly xRemainder: Float64Array;
  readonly yRemainder: Float64Array;
  readonly zRemainder: Float64Array;
  readonly qRemainder: Float64Array;
  /** [m], the largest of `radius` */
  readonly largestRadius: number;
  /** Whether a charge is so small that its products may underflow. */
  readonly hasTiny: boolean;
}

/** [C] Products of smaller charges may lose digits to underflow. */
export const TINY_CHARGE = 1e-200;

/** Columns begin at full cache lines. */
const LINE = 8;

/** A copy in other memory. */
export function copyColumns(charges: ChargeColumns, memory: Memory): ChargeColumns {
  const copy = chargeColumns(charges.count, memory);
  for (const name of NAMES) copy[name].set(charges[name]);
  const {largestRadius, hasTiny} = charges;
  return {...copy, largestRadius, hasTiny};
}

const NAMES = [
  'x',
  'y',
  'z',
  'q',
  'radius',
  'xRemainder',
  'yRemainder',
  'zRemainder',
  'qRemainder',
] as const;

/** Columns of zeros. */
export function chargeColumns(count: number, memory: Memory): ChargeColumns {
  const stride = LINE * Math.ceil(count / LINE);
  const all = memory(CHARGE_COLUMNS * stride);
  const column = (index: number): Float64Array =>
    all.subarray(index * stride, index * stride + count);
  return {
    count,
    stride,
    address: memory.addressOf(all),
    x: column(CHARGE_X),
    y: column(CHARGE_Y),
    z: column(CHARGE_Z),
    q: column(CHARGE_Q),
    radius: column(CHARGE_RADIUS),
    xRemainder: column(CHARGE_X_REMAINDER),
    yRemainder: column(CHARGE_Y_REMAINDER),
    zRemainder: column(CHARGE_Z_REMAINDER),
    qRemainder: column(CHARGE_Q_REMAINDER),
    largestRadius: 0,
    hasTiny: false,
  };
}
