import type {PackedTargets} from '../targets.ts';
import type {Arena} from './arena.ts';
import type {Cube} from './boxes.ts';
import type {TargetTree} from './interactions.ts';
import {numberSize, type LoadedTable} from './load-table.ts';
import type {Bounds} from './source-tree.ts';
import {writeWords} from './structs.ts';
import {byParity, regularHarmonics} from './tables/harmonics.ts';
import {addGroup, emptyOperator, GROUP_STRIDE, padded} from './tables/operator.ts';
import type {Dense} from './tables/dense.ts';

/**
 * Targets on a grid whose steps lie along the axes and are equally long: with the boxes of the octree
 * aligned to it, most boxes hold the same points from their centre, and the values of their local
 * expansions there are one matrix product. A box is symmetric, so only the points on the positive
 * side of each axis are multiplied for, by parity.
 */
export interface Lattice {
  /** [m] */
  readonly step: number;
  /** Low corner of the grid [m]: its nodes ascend from there along every axis. */
  readonly low: readonly number[];
  readonly counts: readonly number[];
  /** Whether nodes descend along an axis. */
  readonly isReversed: readonly boolean[];
}

/** The longest side of a box that is multiplied for, in nodes. */
const MOST_SIDE = 16;
/** Sides of the smallest boxes that are tried. */
const SIDES = [8, 7, 6, 5];
/** What steps may differ by, relative. */
const SAME = 1e-12;

/** The lattice that targets are, if they are one. */
export function latticeOf(targets: PackedTargets): Lattice | undefined {
  if (targets.kind !== 'grid') return undefined;
  const {steps, counts, origin} = targets;
  let step = 0;
  for (let axis = 0; axis < 3; axis++) {
    if (counts[axis] === 1) continue;
    const vector = [steps[axis].x, steps[axis].y, steps[axis].z];
    if (vector.some((value, other) => other !== axis && value !== 0)) return undefined;
    const length = Math.abs(vector[axis]);
    if (step !== 0 && Math.abs(length - step) > SAME * step) return undefined;
    step = step || length;
  }
  if (step === 0) return undefined;
  const start = [origin.x, origin.y, origin.z];
  const along = [steps[0].x, steps[1].y, steps[2].z];
  const isReversed = along.map((value, axis) => counts[axis] > 1 && value < 0);
  const low = start.map((value, axis) =>
    isReversed[axis] ? value - step * (counts[axis] - 1) : value,
  );
  return {step, low, counts, isReversed};
}

/** A cube around a lattice and charges whose boxes are cut between nodes, as many in each as can be. */
export function latticeCube({step, low, counts}: Lattice, charges: Bounds): Cube {
  const whole = (side: number): number =>
    counts.reduce((part, count) => part * Math.floor(count / (2 * side)) * ((2 * side) / count), 1);
  const side = SIDES.reduce((best, each) => (whole(each) > whole(best) ? each : best));
  const cell = side * step;
  // Where the first cell begins; along an axis of one node, that is in the middle.
  const first = low.map((value, axis) => value - (counts[axis] > 1 ? step / 2 : cell / 2));
  const before = first.map((value, axis) =>
    Math.max(0, Math.ceil((value - charges.low[axis]) / cell + 2 ** -20)),
  );
  const corner = first.map((value, axis) => value - before[axis] * cell);
  const furthest = Math.max(
    ...corner.map(
      (value, axis) => Math.max(charges.high[axis], low[axis] + step * (counts[axis] - 1)) - value,
    ),
  );
  let size = cell;
  while (size < furthest * (1 + 2 ** -20)) size *= 2;
  const [x, y, z] = corner.map(value => value + size / 2);
  return {x, y, z, size};
}

/** [m] Boxes with targets that are larger are split, so that their values are a matrix product. */
export const largestCell = ({step}: Lattice): number => (MOST_SIDE + 0.5) * step;

/** Boxes of one size that are whole. */
export interface WholeBoxes {
  /** Address of the struct that kernels read. */
  readonly address: number;
  /** Box and its first node along each axis; flat. */
  readonly leaves: Int32Array;
}

/** Leaves that are whole, by size, and the others. */
export interface SortedLeaves {
  readonly whole: readonly WholeBoxes[];
  readonly others: Int32Array;
}

export const LEAF_STRIDE = 4;

export function sortLeaves(
  lattice: Lattice,
  {leaves, ranges, boxes}: TargetTree,
  table: LoadedTable,
  arena: Arena,
): SortedLeaves {
  const bySide = new Map<number, number[]>();
  const heights = new Map<number, readonly number[]>();
  const others: number[] = [];
  for (const box of leaves) {
    const size = boxes[4 * box + 3];
    const side = Math.round(size / lattice.step);
    const sides = lattice.counts.map(count => (count > 1 ? side : 1));
    const held = ranges[2 * box + 1] - ranges[2 * box];
    const isWhole =
      Math.abs(size - side * lattice.step) <= 1e-6 * lattice.step &&
      side <= MOST_SIDE &&
      held === sides[0] * sides[1] * sides[2];
    if (!isWhole) {
      others.push(box);
      continue;
    }
    const centre = [boxes[4 * box], boxes[4 * box + 1], boxes[4 * box + 2]];
    const first = centre.map((value, axis) => firstNode(lattice, axis, value, side));
    const list = bySide.get(side) ?? [];
    list.push(box, ...first);
    bySide.set(side, list);
    // Along an axis of one node all boxes of a size have it at the same height.
    heights.set(
      side,
      centre.map((value, axis) => (lattice.low[axis] - value) / size),
    );
  }
  const whole = [...bySide].map(([side, list]) => ({
    address: writeLattice(lattice, side, heights.get(side) ?? [], table, arena),
    leaves: arena.keep(list),
  }));
  return {whole, others: arena.keep(others)};
}

/** The smallest index of a node in a box, along an axis. */
function firstNode(
  {step, low, counts, isReversed}: Lattice,
  axis: number,
  centre: number,
  side: number,
): number {
  if (counts[axis] === 1) return 0;
  const from = Math.round((centre - low[axis]) / step - (side - 1) / 2);
  return isReversed[axis] ? counts[axis] - from - side : from;
}

/** The matrix and the numbers that a kernel needs for whole boxes of one size. */
function writeLattice(
  {counts, isReversed}: Lattice,
  side: number,
  heights: readonly number[],
  table: LoadedTable,
  arena: Arena,
): number {
  const {level} = table;
  const sides = counts.map(count => (count > 1 ? side : 1));
  const coordinates = counts.map((count, axis) =>
    count > 1
      ? Array.from({length: Math.ceil(side / 2)}, (_, n) => {
          const at = (n + (side % 2 === 0 ? 0.5 : 0)) / side;
          // Nodes that descend have the negative side where others have the positive one.
          return isReversed[axis] ? -at : at;
        })
      : [heights[axis]],
  );
  const points = coordinates[2].flatMap(z =>
    coordinates[1].flatMap(y => coordinates[0].map(x => [x, y, z] as const)),
  );
  const harmonics = points.map(([x, y, z]) => regularHarmonics(level.degree, x, y, z));
  const rows = padded(points.length);
  const operator = emptyOperator();
  byParity(level.degree).forEach((own, parity) => {
    const block: Dense = {
      rows: points.length,
      columns: own.length,
      values: Float64Array.from(harmonics.flatMap(each => own.map(index => each[index]))),
    };
    addGroup(operator, [block], rows, table.harmonicStarts[parity], parity * rows);
  });
  const length = operator.parts.reduce((sum, part) => sum + part.length, 0);
  const values = numberSize(level) === 4 ? arena.singles(length) : arena.doubles(length);
  let at = 0;
  for (const part of operator.parts) {
    values.set(part, at);
    at += part.length;
  }
  const operatorAddress = writeWords(arena, [
    operator.groups.length / GROUP_STRIDE,
    writeWords(arena, operator.groups),
    values.byteOffset,
    1,
    0,
    0,
  ]);
  const mirrors = counts.reduce((bits, count, axis) => bits + (count > 1 ? 1 << axis : 0), 0);
  return writeWords(arena, [
    operatorAddress,
    rows,
    ...coordinates.map(each => each.length),
    ...sides,
    mirrors,
    counts[0],
    counts[1],
    table.termPlaces,
  ]);
}
