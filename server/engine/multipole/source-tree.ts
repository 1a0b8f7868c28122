import type {Arena} from './arena.ts';
import {Boxes, sortedPoints, type Cube} from './boxes.ts';

/**
 * Charges in the order of an octree, with nothing that depends on targets: it is kept from call to
 * call. Plain data; its arrays lie in the heap.
 */
export interface SourceTree {
  readonly root: Cube;
  readonly count: number;
  /** x, y, z [m] and charge · chargeScale of one after the other, sorted and padded. */
  readonly charges: Float64Array;
  /** Charges are computed with in units near the largest: a power of two rounds nothing. */
  readonly chargeScale: number;
  /** Which charge each was. */
  readonly order: Int32Array;
  readonly boxCount: number;
  readonly boxes: Float64Array;
  readonly ranges: Int32Array;
  readonly children: Int32Array;
  readonly octants: Int32Array;
  /** First box of every level, and the number of boxes. */
  readonly levels: readonly number[];
  /** Boxes without children. */
  readonly leaves: Int32Array;
  /**
   * Charges at one place that cannot be told apart are summed: the first carries all of them, and
   * stands for as many. 1 elsewhere.
   */
  readonly members: Int32Array;
}

/** Numbers that vectors may read beyond the last point, and boxes beyond the last box. */
export const COLUMN_PADDING = 8;
export const BOX_PADDING = 4;

export interface Positions {
  readonly count: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
}

/**
 * @param spare memory that is needed only while the tree is made
 * @param capacity charges that a box may hold without being split
 */
export function sourceTree(
  arena: Arena,
  spare: Arena,
  charges: Positions & {readonly q: Float64Array},
  root: Cube,
  capacity: number,
): SourceTree {
  const {count} = charges;
  const columns = [0, 1, 2, 3].map(() => spare.doubles(count));
  const [x, y, z, q] = columns;
  const order = arena.integers(count);
  const points = sortedPoints(
    [charges.x, charges.y, charges.z, charges.q],
    columns,
    order,
    root,
    spare,
  );
  const members = arena.integers(count).fill(1);
  const boxes = new Boxes(root, 0, count);
  const levels = [0, 1];
  const leaves: number[] = [];
  for (let box = 0; box < boxes.count; box++) {
    if (box === levels[levels.length - 1]) levels.push(boxes.count);
    const held = boxes.pointsIn(box);
    if (held > capacity && boxes.isOnePlace(box, points)) mergeAlike(boxes, box, {q, members});
    else if (held > capacity && boxes.isDivisible(box) && boxes.count < MOST_BOXES) {
      boxes.split(box, points);
      continue;
    }
    leaves.push(box);
  }
  const chargeScale = scaleOf(q);
  const packed = arena.doubles(CHARGE_STRIDE * (count + COLUMN_PADDING));
  for (let i = 0, at = 0; i < count; i++, at += CHARGE_STRIDE) {
    packed[at] = x[i];
    packed[at + 1] = y[i];
    packed[at + 2] = z[i];
    packed[at + 3] = q[i] * chargeScale;
  }
  const boxArray = arena.doubles(4 * (boxes.count + BOX_PADDING));
  boxes.geometry.copyTo(boxArray);
  return {
    root,
    count,
    charges: packed,
    chargeScale,
    order,
    boxCount: boxes.count,
    boxes: boxArray,
    ranges: boxes.ranges.copyTo(arena.integers(boxes.ranges.length)),
    children: boxes.children.copyTo(arena.integers(boxes.children.length)),
    octants: boxes.octants.copyTo(arena.integers(boxes.octants.length)),
    levels,
    leaves: arena.keep(leaves),
    members,
  };
}

/** Far boxes are told by number and slot in 32 bits (interactions.ts), with room for a last split. */
const MOST_BOXES = 2 ** 21 - 8;

/** Numbers of one charge: x, y, z and the charge. */
export const CHARGE_STRIDE = 4;

function scaleOf(charges: Float64Array): number {
  let largest = 0;
  for (let i = 0; i < charges.length; i++) largest = Math.max(largest, Math.abs(charges[i])); // eslint-disable-line @typescript-eslint/prefer-for-of -- an iterator takes ten times as long
  return largest === 0 ? 1 : 2 ** -Math.max(-1000, Math.floor(Math.log2(largest)));
}

/** Lets one charge stand for all of a box, which are at one place. */
function mergeAlike(
  boxes: Boxes,
  box: number,
  {q, members}: {q: Float64Array; members: Int32Array},
): void {
  const from = boxes.ranges.at(2 * box);
  const to = boxes.ranges.at(2 * box + 1);
  let sum = 0;
  let rest = 0;
  for (let i = from; i < to; i++) {
    const after = sum + q[i];
    const second = after - sum;
    rest += sum - (after - second) + (q[i] - second);
    sum = after;
    q[i] = 0;
  }
  q[from] = sum + rest;
  members[from] = to - from;
  boxes.ranges.set(2 * box + 1, from + 1);
}

/** Room around charges, so that targets that reach a little further need no other tree. */
const MARGIN = 1.02;

/** A cube around points, widened by twos until it holds `others` as well. */
export function rootCube(points: Positions, others: Bounds): Cube {
  const own = boundsOf(points);
  const [x, y, z] = [0, 1, 2].map(axis => (own.low[axis] + own.high[axis]) / 2);
  const extent = Math.max(...[0, 1, 2].map(axis => own.high[axis] - own.low[axis]));
  const centre = [x, y, z];
  const furthest = Math.max(
    ...[0, 1, 2].map(axis =>
      Math.max(others.high[axis] - centre[axis], centre[axis] - others.low[axis]),
    ),
  );
  // A little more, so that rounding leaves nothing outside.
  let size = extent * MARGIN;
  const needed = 2 * furthest * (1 + 2 ** -20);
  if (size === 0) size = needed > 0 ? needed : 1;
  while (size < needed) size *= 2;
  return {x, y, z, size};
}

export interface Bounds {
  readonly low: readonly number[];
  readonly high: readonly number[];
}

export function boundsOf({count, x, y, z}: Positions): Bounds {
  const low = [Infinity, Infinity, Infinity];
  const high = [-Infinity, -Infinity, -Infinity];
  for (const [axis, values] of [x, y, z].entries()) {
    let least = Infinity;
    let most = -Infinity;
    for (let i = 0; i < count; i++) {
      if (values[i] < least) least = values[i];
      if (values[i] > most) most = values[i];
    }
    low[axis] = least;
    high[axis] = most;
  }
  return {low, high};
}
