import type {Grid} from '../../shared/api.ts';
import type {Unit} from '../../shared/units.ts';
import {productError, sumError, UNIT_ROUNDOFF} from './exact.ts';
import {convert, norm, position, type Position} from './positions.ts';

/**
 * A regular grid in metres: the first step varies fastest, values sit on the grid points.
 *
 *     node (i, j, k) = ((origin + i a) + j b) + k c        index = i + nₐ (j + n_b k)
 */
export interface PackedGrid {
  readonly kind: 'grid';
  readonly origin: Position;
  readonly steps: readonly Position[];
  readonly counts: readonly number[];
  /** Roundings of one length conversion. */
  readonly roundings: number;
}

export function packGrid(grid: Grid, unit: Unit): PackedGrid {
  const converted = ([x, y, z]: readonly number[]): Position => {
    const out = position();
    convert(unit, x, y, z, out);
    return out;
  };
  return {
    kind: 'grid',
    origin: converted(grid.origin),
    steps: grid.steps.map(converted),
    counts: grid.counts,
    roundings: unit.roundings,
  };
}

export const gridCount = (counts: readonly number[]): number => counts[0] * counts[1] * counts[2];

let remainder = 0;

/** start + n · step, adding what is rounded away to `remainder`. */
function advance(start: number, n: number, step: number, stepRemainder: number): number {
  if (n === 0) return start;
  const product = n * step;
  const sum = start + product;
  remainder += productError(n, step, product) + sumError(start, product, sum) + n * stepRemainder;
  return sum;
}

/** Where the node at `index` lies. */
export function gridNode(grid: PackedGrid, index: number, out: Position): void {
  const {origin, counts} = grid;
  const [a, b, c] = grid.steps;
  const i = index % counts[0];
  const rest = (index - i) / counts[0];
  const j = rest % counts[1];
  const k = (rest - j) / counts[1];

  remainder = origin.xRemainder;
  const x = advance(origin.x, i, a.x, a.xRemainder);
  const xy = advance(x, j, b.x, b.xRemainder);
  out.x = advance(xy, k, c.x, c.xRemainder);
  out.xRemainder = remainder;

  remainder = origin.yRemainder;
  const y = advance(origin.y, i, a.y, a.yRemainder);
  const yy = advance(y, j, b.y, b.yRemainder);
  out.y = advance(yy, k, c.y, c.yRemainder);
  out.yRemainder = remainder;

  remainder = origin.zRemainder;
  const z = advance(origin.z, i, a.z, a.zRemainder);
  const zy = advance(z, j, b.z, b.zRemainder);
  out.z = advance(zy, k, c.z, c.zRemainder);
  out.zRemainder = remainder;

  const isExact = out.xRemainder === 0 && out.yRemainder === 0 && out.zRemainder === 0;
  // On every axis: the conversions, one product a step and three sums of what is at most `reach`.
  const reach =
    norm(origin.x, origin.y, origin.z) +
    i * norm(a.x, a.y, a.z) +
    j * norm(b.x, b.y, b.z) +
    k * norm(c.x, c.y, c.z);
  out.radius = isExact ? 0 : 2 * (grid.roundings + 4) * UNIT_ROUNDOFF * reach;
}
