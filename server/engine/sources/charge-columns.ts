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

const COLUMNS = 9;

/** Columns of zeros. */
export function chargeColumns(count: number, memory: Memory): ChargeColumns {
  const all = memory(COLUMNS * count);
  const column = (index: number): Float64Array => all.subarray(index * count, (index + 1) * count);
  return {
    count,
    x: column(0),
    y: column(1),
    z: column(2),
    q: column(3),
    radius: column(4),
    xRemainder: column(5),
    yRemainder: column(6),
    zRemainder: column(7),
    qRemainder: column(8),
    largestRadius: 0,
    hasTiny: false,
  };
}
