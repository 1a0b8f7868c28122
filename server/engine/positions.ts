import type {Unit} from '../../shared/units.ts';
import {productError, quotientError, sumError, UNIT_ROUNDOFF} from './exact.ts';
import {
  TARGET_RADIUS,
  TARGET_X,
  TARGET_X_REMAINDER,
  TARGET_Y,
  TARGET_Y_REMAINDER,
  TARGET_Z,
  TARGET_Z_REMAINDER,
} from './kernels/layout.ts';
import type {Rotation} from './rotation.ts';

/** A position [m]: doubles, what they lack to the exact one, and the radius that covers it twice. */
export interface Position {
  x: number;
  y: number;
  z: number;
  xRemainder: number;
  yRemainder: number;
  zRemainder: number;
  radius: number;
}

export const position = (): Position => ({
  x: 0,
  y: 0,
  z: 0,
  xRemainder: 0,
  yRemainder: 0,
  zRemainder: 0,
  radius: 0,
});

/** Positions as columns, the members of Position in their order. */
export interface PositionColumns {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
  readonly xRemainder: Float64Array;
  readonly yRemainder: Float64Array;
  readonly zRemainder: Float64Array;
  readonly radius: Float64Array;
}

/** The first columns of `values`, each `stride` long, as in a batch of targets. */
export function positionColumns(values: Float64Array, stride: number): PositionColumns {
  const column = (n: number): Float64Array => values.subarray(n * stride, (n + 1) * stride);
  return {
    x: column(TARGET_X),
    y: column(TARGET_Y),
    z: column(TARGET_Z),
    xRemainder: column(TARGET_X_REMAINDER),
    yRemainder: column(TARGET_Y_REMAINDER),
    zRemainder: column(TARGET_Z_REMAINDER),
    radius: column(TARGET_RADIUS),
  };
}

export function storePosition(columns: PositionColumns, index: number, p: Position): void {
  columns.x[index] = p.x;
  columns.y[index] = p.y;
  columns.z[index] = p.z;
  columns.xRemainder[index] = p.xRemainder;
  columns.yRemainder[index] = p.yRemainder;
  columns.zRemainder[index] = p.zRemainder;
  columns.radius[index] = p.radius;
}

/** What `toSI` rounded away: the exact rule's value minus unit.toSI(value). */
export function conversionRemainder(unit: Unit, value: number): number {
  if (unit.roundings === 0 || value === 0) return 0;
  const converted = unit.toSI(value);
  const {scale} = unit;
  const scaled = value * unit.factor;
  const lost = unit.factor === 1 ? 0 : productError(value, unit.factor, scaled);
  return unit.power >= 0
    ? quotientError(scaled, scale, converted) + lost / scale
    : productError(scaled, scale, converted) + lost * scale;
}

const isExact = (p: Position): boolean =>
  p.xRemainder === 0 && p.yRemainder === 0 && p.zRemainder === 0;

/** Converts a position to metres. */
export function convert(unit: Unit, x: number, y: number, z: number, out: Position): void {
  out.x = unit.toSI(x);
  out.y = unit.toSI(y);
  out.z = unit.toSI(z);
  out.xRemainder = conversionRemainder(unit, x);
  out.yRemainder = conversionRemainder(unit, y);
  out.zRemainder = conversionRemainder(unit, z);
  out.radius = isExact(out) ? 0 : 2 * unit.roundings * UNIT_ROUNDOFF * norm(out.x, out.y, out.z);
}

export const norm = (x: number, y: number, z: number): number => Math.sqrt(x * x + y * y + z * z);

/** Row · p + t, with the exact remainder in `remainderOfRow`. */
let remainderOfRow = 0;

function row(
  rotation: Rotation,
  start: number,
  p: Position,
  shift: number,
  shiftRemainder: number,
): number {
  const {matrix, remainder} = rotation;
  const a = matrix[start] * p.x;
  const b = matrix[start + 1] * p.y;
  const c = matrix[start + 2] * p.z;
  const ab = a + b;
  const abc = ab + c;
  const sum = abc + shift;
  remainderOfRow =
    productError(matrix[start], p.x, a) +
    productError(matrix[start + 1], p.y, b) +
    productError(matrix[start + 2], p.z, c) +
    (sumError(a, b, ab) + sumError(ab, c, abc) + sumError(abc, shift, sum)) +
    (matrix[start] * p.xRemainder +
      matrix[start + 1] * p.yRemainder +
      matrix[start + 2] * p.zRemainder) +
    (remainder[start] * p.x + remainder[start + 1] * p.y + remainder[start + 2] * p.z) +
    shiftRemainder;
  return sum;
}

/**
 * Places a position of a body: p ← R p + t.
 *
 * Rounds at most u · ((n + 8.7) |p| + (n + 1.8) |t|), n roundings having been made in converting:
 * √3 times, for the three rows, the roundings of R, of three products and of three sums.
 */
export function place(rotation: Rotation, shift: Position, roundings: number, p: Position): void {
  const reach =
    (roundings + 9) * norm(p.x, p.y, p.z) + (roundings + 2) * norm(shift.x, shift.y, shift.z);
  const x = row(rotation, 0, p, shift.x, shift.xRemainder);
  const xRemainder = remainderOfRow;
  const y = row(rotation, 3, p, shift.y, shift.yRemainder);
  const yRemainder = remainderOfRow;
  p.z = row(rotation, 6, p, shift.z, shift.zRemainder);
  p.zRemainder = remainderOfRow;
  p.x = x;
  p.xRemainder = xRemainder;
  p.y = y;
  p.yRemainder = yRemainder;
  p.radius = isExact(p) ? 0 : 2 * UNIT_ROUNDOFF * reach;
}
