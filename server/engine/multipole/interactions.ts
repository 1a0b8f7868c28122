import type {Arena} from './arena.ts';
import {Boxes, sortedPoints} from './boxes.ts';
import {GrowingIntegers} from './growing.ts';
import type {LoadedTable} from './load-table.ts';
import {BOX_PADDING, COLUMN_PADDING, type Positions, type SourceTree} from './source-tree.ts';

/**
 * Targets in the order of an octree over the cube of the sources, and what each of its boxes
 * interacts with. A pair of boxes of one size is either far, and the local expansion of the one
 * takes from the multipoles of the other; or near, and is summed directly, if that is little work;
 * or near and both are split. So every target meets every charge exactly once, and all far pairs
 * are of one size (the dual traversal of a tree of targets and a tree of sources: W. Dehnen,
 * J. Comput. Phys. 179 (2002), with the far pairs of the classical scheme). Plain data.
 */
export interface TargetTree {
  readonly count: number;
  /** [m] sorted; padded. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
  readonly order: Int32Array;
  readonly boxCount: number;
  readonly boxes: Float64Array;
  readonly ranges: Int32Array;
  readonly children: Int32Array;
  readonly octants: Int32Array;
  readonly parents: Int32Array;
  readonly levels: readonly number[];
  readonly leaves: Int32Array;
  readonly farStarts: Int32Array;
  readonly farEntries: Int32Array;
  readonly nearStarts: Int32Array;
  readonly nearEntries: Int32Array;
}

/** Far boxes are stored with the slot of the operator: kernels/assembly/multipole-translate.ts. */
const SLOT_BITS = 11;

export interface Splitting {
  /** Pairs of a target and a charge in two near boxes up to which they are summed directly. */
  readonly pairs: number;
  /** [m] Boxes are not smaller, and those of targets not larger if they can be split. */
  readonly smallestBox: number;
  readonly largestBox?: number;
}

/** @param spare memory that is needed only while the tree is made */
export function targetTree(
  arena: Arena,
  spare: Arena,
  targets: Positions,
  sources: SourceTree,
  {slots, level}: LoadedTable,
  splitting: Splitting,
): TargetTree {
  const {count} = targets;
  const columns = [0, 1, 2].map(() => arena.doubles(count + COLUMN_PADDING));
  const [x, y, z] = columns;
  const order = arena.integers(count);
  const points = sortedPoints(
    [targets.x, targets.y, targets.z],
    columns,
    order,
    sources.root,
    spare,
  );
  const boxes = new Boxes(sources.root, 0, count);
  const pairs = new NearPairs(boxes, points, sources, splitting, level.separation, slots);
  pairs.visit();
  const boxArray = arena.doubles(4 * (boxes.count + BOX_PADDING));
  boxes.geometry.copyTo(boxArray);
  return {
    count,
    x,
    y,
    z,
    order,
    boxCount: boxes.count,
    boxes: boxArray,
    ranges: boxes.ranges.copyTo(arena.integers(boxes.ranges.length)),
    children: boxes.children.copyTo(arena.integers(boxes.children.length)),
    octants: boxes.octants.copyTo(arena.integers(boxes.octants.length)),
    parents: boxes.parents.copyTo(arena.integers(boxes.parents.length)),
    levels: pairs.levels,
    leaves: pairs.leaves.copyTo(arena.integers(pairs.leaves.length)),
    farStarts: pairs.farStarts.copyTo(arena.integers(pairs.farStarts.length)),
    farEntries: pairs.farEntries.copyTo(arena.integers(pairs.farEntries.length)),
    nearStarts: pairs.nearStarts.copyTo(arena.integers(pairs.nearStarts.length)),
    nearEntries: pairs.nearEntries.copyTo(arena.integers(pairs.nearEntries.length)),
  };
}

/** Offsets between near boxes as one number: components + 2, 5 values each. */
const NEAR_SIDE = 5;
const NEAR_MIDDLE = 2;

class NearPairs {
  readonly levels = [0, 1];
  readonly leaves = new GrowingIntegers();
  readonly farStarts = new GrowingIntegers();
  readonly farEntries = new GrowingIntegers();
  readonly nearStarts = new GrowingIntegers();
  readonly nearEntries = new GrowingIntegers();
  /** Near boxes of every box, with their offsets, while their turn has not come. */
  #starts = new GrowingIntegers();
  #sources = new GrowingIntegers();
  #offsets = new GrowingIntegers();

  constructor(
    readonly boxes: Boxes,
    readonly points: ReturnType<typeof sortedPoints>,
    readonly tree: SourceTree,
    readonly splitting: Splitting,
    readonly separation: number,
    readonly slots: Int32Array,
  ) {}

  visit(): void {
    const {boxes} = this;
    this.#starts.push(0);
    this.#sources.push(0);
    this.#offsets.push(NEAR_MIDDLE * (1 + NEAR_SIDE * (1 + NEAR_SIDE)));
    this.#starts.push(1);
    this.farStarts.push(0);
    this.farStarts.push(0);
    for (let box = 0; box < boxes.count; box++) {
      if (box === this.levels[this.levels.length - 1]) this.levels.push(boxes.count);
      this.#visitBox(box);
    }
    this.nearStarts.push(this.nearEntries.length / 2);
  }

  #visitBox(box: number): void {
    const {boxes, tree, splitting} = this;
    const {ranges} = tree;
    const from = this.#starts.at(box);
    const to = this.#starts.at(box + 1);
    const targets = boxes.pointsIn(box);
    const canSplit = boxes.sizeOf(box) >= 2 * splitting.smallestBox && boxes.isDivisible(box);
    const isTooLarge = canSplit && boxes.sizeOf(box) > (splitting.largestBox ?? Infinity);
    let splits = isTooLarge;
    for (let n = from; n < to && canSplit && !splits; n++) {
      splits = this.#isSplit(this.#sources.at(n), targets);
    }
    if (splits) boxes.split(box, this.points);
    this.nearStarts.push(this.nearEntries.length / 2);
    const first = boxes.children.at(2 * box);
    const count = splits ? boxes.childCount(box) : 0;
    if (!splits) this.leaves.push(box);
    // What is summed directly.
    let lastEnd = -1;
    for (let n = from; n < to; n++) {
      const source = this.#sources.at(n);
      if (splits && this.#isSplit(source, targets)) continue;
      const start = ranges[2 * source];
      const end = ranges[2 * source + 1];
      if (start === lastEnd) this.nearEntries.set(this.nearEntries.length - 1, end);
      else {
        this.nearEntries.push(start);
        this.nearEntries.push(end);
      }
      lastEnd = end;
    }
    for (let child = first; child < first + count; child++) {
      this.#inherit(child, from, to, targets);
    }
  }

  /** Whether a near pair is too much work for a direct sum and its charges can be split. */
  #isSplit(source: number, targets: number): boolean {
    const {ranges, children} = this.tree;
    if (children[2 * source + 1] === 0) return false;
    return targets * (ranges[2 * source + 1] - ranges[2 * source]) > this.splitting.pairs;
  }

  /** Near and far boxes of a child, among the children of the near boxes of its parent. */
  #inherit(child: number, from: number, to: number, targets: number): void {
    const {boxes, tree, separation, slots} = this;
    const most = 2 * separation + 1;
    const side = 2 * most + 1;
    const octant = boxes.octants.at(child);
    const ox = octant & 1;
    const oy = (octant >> 1) & 1;
    const oz = octant >> 2;
    for (let n = from; n < to; n++) {
      const source = this.#sources.at(n);
      if (!this.#isSplit(source, targets)) continue;
      const offset = this.#offsets.at(n);
      const dx = 2 * ((offset % NEAR_SIDE) - NEAR_MIDDLE) + ox;
      const dy = 2 * ((((offset / NEAR_SIDE) | 0) % NEAR_SIDE) - NEAR_MIDDLE) + oy;
      const dz = 2 * (((offset / (NEAR_SIDE * NEAR_SIDE)) | 0) - NEAR_MIDDLE) + oz;
      const first = tree.children[2 * source];
      const last = first + tree.children[2 * source + 1];
      for (let other = first; other < last; other++) {
        const own = tree.octants[other];
        const x = dx - (own & 1);
        const y = dy - ((own >> 1) & 1);
        const z = dz - (own >> 2);
        const isNear =
          x <= separation &&
          x >= -separation &&
          y <= separation &&
          y >= -separation &&
          z <= separation &&
          z >= -separation;
        if (isNear) {
          this.#sources.push(other);
          this.#offsets.push(
            x + NEAR_MIDDLE + NEAR_SIDE * (y + NEAR_MIDDLE + NEAR_SIDE * (z + NEAR_MIDDLE)),
          );
        } else {
          const slot = slots[x + most + side * (y + most + side * (z + most))];
          this.farEntries.push(slot | (other << SLOT_BITS));
        }
      }
    }
    this.#starts.push(this.#sources.length);
    this.farStarts.push(this.farEntries.length);
  }
}
