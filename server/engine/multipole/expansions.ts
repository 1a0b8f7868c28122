import {kernelsOf} from './kernels.ts';
import {LEAF_STRIDE, sortLeaves} from './lattice.ts';
import {numberSize, type LoadedTable} from './load-table.ts';
import type {Part, Work} from './multipole-job.ts';
import type {Arena} from './arena.ts';
import {BOX_PADDING, type SourceTree} from './source-tree.ts';
import {setExpansions, setLocals, type SourceExpansions} from './structs.ts';
import type {Tools} from './tools.ts';

/** What far boxes take of a part, kept where its tree is, and room for its local expansions. */
export function makeExpansions(part: Part, table: LoadedTable, tools: Tools): Part {
  const {arena, forms} = tools;
  const {sources, sourcesAddress, targets, treeKey} = part;
  const bytes = numberSize(table.level) * table.size;
  const forLocals = bytes * (targets.boxCount + BOX_PADDING);
  let room: number | undefined;
  const make = (own: Arena): SourceExpansions => {
    const forMultipoles = bytes * (sources.boxCount + BOX_PADDING);
    const size = Math.max(forLocals, forMultipoles);
    const multipoles = arena.take(size);
    const expansions = expansionsOf(sources, sourcesAddress, multipoles, table, own, tools);
    // They are not needed any more, and local expansions may lie there.
    new Uint8Array(arena.buffer, multipoles, size).fill(0);
    room = multipoles;
    return expansions;
  };
  const expansions =
    treeKey === undefined
      ? make(arena)
      : forms.get(`${treeKey}:expansions:${table.level.name}`, make);
  room ??= arena.take(forLocals);
  setExpansions(arena, sourcesAddress, room, expansions);
  setLocals(arena, part.targetsAddress, room);
  const {lattice} = part;
  return lattice ? {...part, sorted: sortLeaves(lattice, targets, table, arena)} : part;
}

/** Multipoles from the leaves up, and what far boxes take of them. */
function expansionsOf(
  {boxCount, leaves, levels}: SourceTree,
  sourcesAddress: number,
  multipoles: number,
  table: LoadedTable,
  arena: Arena,
  {exports, scratch}: Tools,
): SourceExpansions {
  const kernels = kernelsOf(exports, table.level);
  const room = (boxes: number, size: number): number =>
    arena.take(numberSize(table.level) * size * (boxes + BOX_PADDING));
  const expansions = {
    compressed: room(boxCount, table.sourceSize),
    zeros: room(0, Math.max(table.size, table.sourceSize)),
  };
  setExpansions(arena, sourcesAddress, multipoles, expansions);
  kernels.multipoles(sourcesAddress, table.address, leaves.byteOffset, 0, leaves.length, scratch);
  for (let level = levels.length - 2; level >= 0; level--) {
    kernels.up(sourcesAddress, table.address, levels[level], levels[level + 1], scratch);
  }
  kernels.kept(sourcesAddress, table.address, 0, boxCount, scratch);
  return expansions;
}

/** Far boxes of a piece of work: some 20 ms of them. */
const FAR_OF_WORK = 40_000;

export function farWork(parts: readonly Part[]): Work[] {
  const work: Work[] = [];
  parts.forEach(({targets: {boxCount, farStarts}}, part) => {
    let first = 0;
    for (let box = 0; box < boxCount; box++) {
      const isFull = farStarts[box + 1] - farStarts[first] >= FAR_OF_WORK;
      if (!isFull && box + 1 < boxCount) continue;
      work.push({part, first, last: box + 1});
      first = box + 1;
    }
  });
  return work;
}

/** Targets of a piece of work: some 20 ms of them. */
const TARGETS_OF_WORK = 40_000;

export function valuesWork(parts: readonly Part[]): Work[] {
  return parts.flatMap(({targets, sorted}, part) => {
    const {ranges} = targets;
    const others = sorted?.others ?? targets.leaves;
    const work: Work[] = [];
    let first = 0;
    let held = 0;
    others.forEach((box, n) => {
      held += ranges[2 * box + 1] - ranges[2 * box];
      if (held < TARGETS_OF_WORK && n + 1 < others.length) return;
      work.push({part, first, last: n + 1});
      first = n + 1;
      held = 0;
    });
    sorted?.whole.forEach(({leaves}, whole) => {
      const count = leaves.length / LEAF_STRIDE;
      for (let start = 0; start < count; start += WHOLE_OF_WORK) {
        work.push({part, first: start, last: Math.min(start + WHOLE_OF_WORK, count), whole});
      }
    });
    return work;
  });
}

/** Whole boxes of a lattice of a piece of work. */
const WHOLE_OF_WORK = 256;

/** Hands local expansions down from the root to the leaves. */
export function handDown(part: Part, table: LoadedTable, {exports, scratch}: Tools): void {
  const {levels} = part.targets;
  const kernels = kernelsOf(exports, table.level);
  for (let level = 0; level + 1 < levels.length; level++) {
    kernels.down(part.targetsAddress, table.address, levels[level], levels[level + 1], scratch);
  }
}
