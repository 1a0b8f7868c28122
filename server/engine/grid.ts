import type {Grid} from '../../shared/api.ts';
import type {Unit} from '../../shared/units.ts';
import {productError, sumError, UNIT_ROUNDOFF, upperHalf} from './exact.ts';
import {convert, norm, position, type Position, type PositionColumns} from './positions.ts';

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

/** Writes where `count` nodes from `from` on lie to the beginning of `out`: row by row. */
export function gridNodes(
  grid: PackedGrid,
  from: number,
  count: number,
  out: PositionColumns,
): void {
  const {origin, counts} = grid;
  const [a, b, c] = grid.steps;
  const error = 2 * (grid.roundings + 4) * UNIT_ROUNDOFF;
  const [originNorm, aNorm, bNorm, cNorm] = [origin, a, b, c].map(p => norm(p.x, p.y, p.z));
  for (let at = 0; at < count;) {
    const i = (from + at) % counts[0];
    const rest = (from + at - i) / counts[0];
    const j = rest % counts[1];
    const k = (rest - j) / counts[1];
    const end = Math.min(count, at + counts[0] - i);
    const row = {at, end, i, j, k};
    rowAlong('x', 'xRemainder', grid, row, out);
    rowAlong('y', 'yRemainder', grid, row, out);
    rowAlong('z', 'zRemainder', grid, row, out);
    const {xRemainder, yRemainder, zRemainder, radius} = out;
    for (let n = at; n < end; n++) {
      const isExact = xRemainder[n] === 0 && yRemainder[n] === 0 && zRemainder[n] === 0;
      // On every axis: the conversions, one product a step and three sums of what is at most this.
      const reach = originNorm + (i + n - at) * aNorm + j * bNorm + k * cNorm;
      radius[n] = isExact ? 0 : error * reach;
    }
    at = end;
  }
}

/** Nodes of one row: where they are written, and the indices of the first. */
interface Row {
  readonly at: number;
  readonly end: number;
  readonly i: number;
  readonly j: number;
  readonly k: number;
}

function rowAlong(
  axis: 'x' | 'y' | 'z',
  lost: 'xRemainder' | 'yRemainder' | 'zRemainder',
  {origin, steps: [a, b, c]}: PackedGrid,
  {at, end, i, j, k}: Row,
  out: PositionColumns,
): void {
  const values = out[axis];
  const remainders = out[lost];
  const start = origin[axis];
  const startLost = origin[lost];
  const step = a[axis];
  const stepLost = a[lost];
  const stepUpper = upperHalf(step);
  const stepLower = step - stepUpper;
  const second = j * b[axis];
  const secondLost = productError(j, b[axis], second);
  const secondStepLost = j * b[lost];
  const third = k * c[axis];
  const thirdLost = productError(k, c[axis], third);
  const thirdStepLost = k * c[lost];
  // Rows mostly run along one axis.
  const isStill = step === 0 && stepLost === 0;
  for (let n = at; n < (isStill ? at + 1 : end); n++) {
    const times = i + n - at;
    const first = times * step;
    // The product with half a step is exact, since `times` has no more than 26 bits.
    const firstLost = times * stepUpper - first + times * stepLower;
    const one = start + first;
    const two = one + second;
    const three = two + third;
    let remainder = startLost + (firstLost + sumError(start, first, one) + times * stepLost);
    remainder += secondLost + sumError(one, second, two) + secondStepLost;
    remainder += thirdLost + sumError(two, third, three) + thirdStepLost;
    values[n] = three;
    remainders[n] = remainder;
  }
  if (!isStill) return;
  // Not fill: in shared memory it is slower than this.
  const value = values[at];
  const remainder = remainders[at];
  for (let n = at + 1; n < end; n++) {
    values[n] = value;
    remainders[n] = remainder;
  }
}
