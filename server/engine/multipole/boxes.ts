import type {Arena} from './arena.ts';
import {GrowingDoubles, GrowingIntegers} from './growing.ts';

/** A cube: centre and size [m]. */
export interface Cube {
  readonly x: number;
  readonly y: number;
  readonly z: number;
  readonly size: number;
}

/** Numbers of a box: centre x, y, z and size [m]; and of its runs and its children. */
export const BOX_STRIDE = 4;

/**
 * Points in the order of an octree: columns that are moved about as boxes are split, so that every
 * box holds one run of them.
 */
export interface SortedPoints {
  /** x, y, z [m] first. */
  readonly columns: readonly Float64Array[];
  /** Which point each was before. */
  readonly order: Int32Array;
  readonly spare: Float64Array;
  readonly spareOrder: Int32Array;
  readonly octantOf: Uint8Array;
}

/**
 * Copies points to `columns`, roughly in the order of the octree already: boxes then find most of
 * their points in order, and moving them once is quicker than at every level.
 */
export function sortedPoints(
  from: readonly Float64Array[],
  columns: readonly Float64Array[],
  order: Int32Array,
  root: Cube,
  spare: Arena,
): SortedPoints {
  const count = order.length;
  roughOrder(from, order, root, spare);
  from.forEach((values, n) => {
    const column = columns[n];
    for (let i = 0; i < count; i++) column[i] = values[order[i]];
  });
  return {
    columns,
    order,
    spare: spare.doubles(count),
    spareOrder: spare.integers(count),
    octantOf: spare.flags(count),
  };
}

/** Levels that points are sorted by at once, and points of a box that is small enough for that. */
const MOST_LEVELS = 6;
const ENOUGH = 64;

/** Sorts by the octants of the first levels: Morton's order (G. M. Morton, 1966), by counting. */
function roughOrder(
  [xs, ys, zs]: readonly Float64Array[],
  order: Int32Array,
  {x, y, z, size}: Cube,
  spare: Arena,
): void {
  const count = order.length;
  const levels = Math.min(MOST_LEVELS, Math.ceil(Math.log2(Math.max(1, count / ENOUGH)) / 3));
  const side = 2 ** levels;
  const scale = side / size;
  const bits = Int32Array.from({length: side}, (_, n) => spreadBits(n));
  const keys = spare.integers(count);
  const next = new Int32Array(side ** 3 + 1);
  const place = (value: number, centre: number): number => {
    const at = Math.floor((value - centre) * scale + side / 2);
    return at < 0 ? 0 : at >= side ? side - 1 : at;
  };
  for (let i = 0; i < count; i++) {
    const key = bits[place(xs[i], x)] + 2 * bits[place(ys[i], y)] + 4 * bits[place(zs[i], z)];
    keys[i] = key;
    next[key + 1]++;
  }
  for (let key = 0; key < side ** 3; key++) next[key + 1] += next[key];
  for (let i = 0; i < count; i++) order[next[keys[i]]++] = i;
}

/** Bit n of a number at bit 3 n. */
function spreadBits(value: number): number {
  let out = 0;
  for (let bit = 0; value >> bit > 0; bit++) out += ((value >> bit) & 1) << (3 * bit);
  return out;
}

/** Smaller boxes cannot be told apart in double precision [parts of their distance from 0]. */
const SMALLEST = 2 ** -48;

/**
 * The boxes of an octree, each level after the one before, children of a box side by side. Boxes
 * without points are left out.
 */
export class Boxes {
  readonly geometry = new GrowingDoubles();
  /** First point, and the one after the last. */
  readonly ranges = new GrowingIntegers();
  /** First child and how many. */
  readonly children = new GrowingIntegers();
  readonly octants = new GrowingIntegers();
  readonly parents = new GrowingIntegers();

  constructor(root: Cube, from: number, to: number) {
    this.#add(root.x, root.y, root.z, root.size, from, to, 7, -1);
  }

  get count(): number {
    return this.octants.length;
  }

  sizeOf(box: number): number {
    return this.geometry.at(BOX_STRIDE * box + 3);
  }

  pointsIn(box: number): number {
    return this.ranges.at(2 * box + 1) - this.ranges.at(2 * box);
  }

  childCount(box: number): number {
    return this.children.at(2 * box + 1);
  }

  /** Whether the halves of a box can be told apart. */
  isDivisible(box: number): boolean {
    const at = BOX_STRIDE * box;
    const {geometry} = this;
    const largest = Math.max(
      Math.abs(geometry.at(at)),
      Math.abs(geometry.at(at + 1)),
      Math.abs(geometry.at(at + 2)),
    );
    return geometry.at(at + 3) > Math.max(SMALLEST * largest, Number.MIN_VALUE * 1e30);
  }

  /** Splits a box whose turn it is: boxes are split in the order of their numbers. */
  split(box: number, points: SortedPoints): void {
    const at = BOX_STRIDE * box;
    const x = this.geometry.at(at);
    const y = this.geometry.at(at + 1);
    const z = this.geometry.at(at + 2);
    const size = this.geometry.at(at + 3);
    const from = this.ranges.at(2 * box);
    const to = this.ranges.at(2 * box + 1);
    const starts = sortByOctant(points, x, y, z, from, to);
    this.children.set(2 * box, this.count);
    let children = 0;
    const half = size / 2;
    const quarter = size / 4;
    for (let octant = 0; octant < 8; octant++) {
      if (starts[octant] === starts[octant + 1]) continue;
      const cx = octant & 1 ? x + quarter : x - quarter;
      const cy = octant & 2 ? y + quarter : y - quarter;
      const cz = octant & 4 ? z + quarter : z - quarter;
      this.#add(cx, cy, cz, half, starts[octant], starts[octant + 1], octant, box);
      children++;
    }
    this.children.set(2 * box + 1, children);
  }

  /** Whether all points of a box are at one place. */
  isOnePlace(box: number, {columns: [x, y, z]}: SortedPoints): boolean {
    const from = this.ranges.at(2 * box);
    const to = this.ranges.at(2 * box + 1);
    for (let i = from + 1; i < to; i++) {
      if (x[i] !== x[from] || y[i] !== y[from] || z[i] !== z[from]) return false;
    }
    return true;
  }

  #add(
    x: number,
    y: number,
    z: number,
    size: number,
    from: number,
    to: number,
    octant: number,
    parent: number,
  ): void {
    const {geometry, ranges, children} = this;
    geometry.push(x);
    geometry.push(y);
    geometry.push(z);
    geometry.push(size);
    ranges.push(from);
    ranges.push(to);
    children.push(0);
    children.push(0);
    this.octants.push(octant);
    this.parents.push(parent);
  }
}

const starts = new Int32Array(9);
const next = new Int32Array(8);

/** Moves the points of a box so that its octants follow each other; returns where each begins. */
function sortByOctant(
  {columns, order, spare, spareOrder, octantOf}: SortedPoints,
  x: number,
  y: number,
  z: number,
  from: number,
  to: number,
): Int32Array {
  const [xs, ys, zs] = columns;
  next.fill(0);
  let last = 0;
  let isSorted = true;
  for (let i = from; i < to; i++) {
    const octant = (xs[i] >= x ? 1 : 0) + (ys[i] >= y ? 2 : 0) + (zs[i] >= z ? 4 : 0);
    octantOf[i] = octant;
    next[octant]++;
    if (octant < last) isSorted = false;
    last = octant;
  }
  let at = from;
  for (let octant = 0; octant < 8; octant++) {
    starts[octant] = at;
    at += next[octant];
    next[octant] = starts[octant];
  }
  starts[8] = at;
  if (isSorted) return starts;
  for (const column of columns) {
    for (let octant = 0; octant < 8; octant++) next[octant] = starts[octant];
    for (let i = from; i < to; i++) spare[next[octantOf[i]]++] = column[i];
    column.set(spare.subarray(from, to), from);
  }
  for (let octant = 0; octant < 8; octant++) next[octant] = starts[octant];
  for (let i = from; i < to; i++) spareOrder[next[octantOf[i]]++] = order[i];
  order.set(spareOrder.subarray(from, to), from);
  return starts;
}
