import type {Targets} from '../../shared/api.ts';
import type {Unit} from '../../shared/units.ts';
import {gridNode, packGrid, type PackedGrid} from './grid.ts';
import type {Memory} from './memory.ts';
import {packPath, pathSample, type PackedPath} from './path.ts';
import {convert, position, type Position} from './positions.ts';

/** Numbers of one position in a flat array: x, y, z, their remainders, radius [m]. */
export const POSITION_STRIDE = 7;

/** Points [m], flat. */
export interface PackedPoints {
  readonly kind: 'points';
  readonly values: Float64Array;
}

export type PackedTargets = PackedPoints | PackedGrid | PackedPath;

export function packTargets(targets: Targets, unit: Unit, memory: Memory): PackedTargets {
  if (targets.grid) return packGrid(targets.grid, unit);
  if (targets.path) return packPath(targets.path, unit);
  const points = targets.points;
  if (!points) throw new RangeError('expected points, a grid or a path');
  const values = memory(POSITION_STRIDE * points.x.length);
  const at = position();
  for (let i = 0; i < points.x.length; i++) {
    convert(unit, points.x[i], points.y[i], points.z[i], at);
    storePosition(values, i, at);
  }
  return {kind: 'points', values};
}

export function storePosition(values: Float64Array, index: number, p: Position): void {
  const start = POSITION_STRIDE * index;
  values[start] = p.x;
  values[start + 1] = p.y;
  values[start + 2] = p.z;
  values[start + 3] = p.xRemainder;
  values[start + 4] = p.yRemainder;
  values[start + 5] = p.zRemainder;
  values[start + 6] = p.radius;
}

const scratch = position();

/** Writes the position of target `index` to the first POSITION_STRIDE places of `out`. */
export function targetPosition(targets: PackedTargets, index: number, out: Float64Array): void {
  if (targets.kind === 'points') {
    const start = POSITION_STRIDE * index;
    for (let n = 0; n < POSITION_STRIDE; n++) out[n] = targets.values[start + n];
    return;
  }
  if (targets.kind === 'grid') gridNode(targets, index, scratch);
  else pathSample(targets, index, scratch);
  storePosition(out, 0, scratch);
}
