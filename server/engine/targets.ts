import type {Targets} from '../../shared/api.ts';
import type {Unit} from '../../shared/units.ts';
import {gridNodes, packGrid, type PackedGrid} from './grid.ts';
import {
  POSITION_COLUMNS,
  TARGET_RADIUS,
  TARGET_X,
  TARGET_X_REMAINDER,
  TARGET_Y,
  TARGET_Y_REMAINDER,
  TARGET_Z,
  TARGET_Z_REMAINDER,
} from './kernels/layout.ts';
import type {Memory} from './memory.ts';
import {packPath, pathSample, type PackedPath} from './path.ts';
import {
  convert,
  position,
  positionColumns,
  storePosition,
  type PositionColumns,
} from './positions.ts';

/** Points [m]: columns in the order of PositionColumns, one after the other. */
export interface PackedPoints {
  readonly kind: 'points';
  readonly count: number;
  readonly values: Float64Array;
  /** [bytes] where `values` begins in the heap; undefined elsewhere */
  readonly address: number | undefined;
}

export type PackedTargets = PackedPoints | PackedGrid | PackedPath;

export function packTargets(targets: Targets, unit: Unit, memory: Memory): PackedTargets {
  if (targets.grid) return packGrid(targets.grid, unit);
  if (targets.path) return packPath(targets.path, unit);
  const points = targets.points;
  if (!points) throw new RangeError('expected points, a grid or a path');
  const count = points.x.length;
  const values = memory(POSITION_COLUMNS * count);
  const columns = positionColumns(values, count);
  const at = position();
  for (let i = 0; i < count; i++) {
    convert(unit, points.x[i], points.y[i], points.z[i], at);
    storePosition(columns, i, at);
  }
  return {kind: 'points', count, values, address: memory.addressOf(values)};
}

/** Writes the positions of `count` targets from `from` on to the beginning of `out`. */
export function targetPositions(
  targets: PackedTargets,
  from: number,
  count: number,
  out: PositionColumns,
): void {
  switch (targets.kind) {
    case 'points': {
      copyColumn(targets, TARGET_X, from, count, out.x);
      copyColumn(targets, TARGET_Y, from, count, out.y);
      copyColumn(targets, TARGET_Z, from, count, out.z);
      copyColumn(targets, TARGET_X_REMAINDER, from, count, out.xRemainder);
      copyColumn(targets, TARGET_Y_REMAINDER, from, count, out.yRemainder);
      copyColumn(targets, TARGET_Z_REMAINDER, from, count, out.zRemainder);
      copyColumn(targets, TARGET_RADIUS, from, count, out.radius);
      return;
    }
    case 'grid':
      gridNodes(targets, from, count, out);
      return;
    case 'path': {
      const at = position();
      for (let i = 0; i < count; i++) {
        pathSample(targets, from + i, at);
        storePosition(out, i, at);
      }
    }
  }
}

function copyColumn(
  {values, count: stride}: PackedPoints,
  column: number,
  from: number,
  count: number,
  out: Float64Array,
): void {
  const start = column * stride + from;
  for (let i = 0; i < count; i++) out[i] = values[start + i];
}

/** Positions of the targets `indices[start]` … `indices[start + count − 1]`. */
export function positionsOfSamples(
  targets: PackedTargets,
  indices: Int32Array,
  start: number,
  count: number,
  out: PositionColumns,
): void {
  for (let i = 0; i < count; i++) targetPositions(targets, indices[start + i], 1, rowOf(out, i));
}

/** One position of columns, as columns. */
function rowOf(columns: PositionColumns, i: number): PositionColumns {
  const one = (column: Float64Array): Float64Array => column.subarray(i, i + 1);
  return {
    x: one(columns.x),
    y: one(columns.y),
    z: one(columns.z),
    xRemainder: one(columns.xRemainder),
    yRemainder: one(columns.yRemainder),
    zRemainder: one(columns.zRemainder),
    radius: one(columns.radius),
  };
}
