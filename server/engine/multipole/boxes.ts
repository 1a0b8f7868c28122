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

export function sortedPoints(
  columns: readonly Float64Array[],
  order: Int32Array,
  count: number,
): SortedPoints {
  return {
    columns,
    order,
    spare: new Float64Array(count),
    spareOrder: new Int32Array(count),
    octantOf: new Uint8Array(count),
  };
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
  for (let i = from; i < to; i++) {
    const octant = (xs[i] >= x ? 1 : 0) + (ys[i] >= y ? 2 : 0) + (zs[i] >= z ? 4 : 0);
    octantOf[i] = octant;
    next[octant]++;
  }
  let at = from;
  let filled = 0;
  for (let octant = 0; octant < 8; octant++) {
    starts[octant] = at;
    at += next[octant];
    if (next[octant] > 0) filled++;
    next[octant] = starts[octant];
  }
  starts[8] = at;
  if (filled === 1) return starts;
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
