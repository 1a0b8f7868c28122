import {kernelsOf} from './kernels.ts';
import {numberSize, type LoadedTable} from './load-table.ts';
import type {Part, Work} from './multipole-job.ts';
import type {Arena} from './arena.ts';
import {BOX_PADDING, type SourceTree} from './source-tree.ts';
import {setExpansions, setLocals, type SourceExpansions} from './structs.ts';
import type {Tools} from './tools.ts';

/** Multipoles of all boxes of a part, kept where its tree is, and room for its local expansions. */
export function makeExpansions(part: Part, table: LoadedTable, tools: Tools): void {
  const {arena, forms} = tools;
  const {sources, sourcesAddress, targets, treeKey} = part;
  const make = (own: Arena): SourceExpansions =>
    multipolesOf(sources, sourcesAddress, table, own, tools);
  const expansions =
    treeKey === undefined
      ? make(arena)
      : forms.get(`${treeKey}:multipoles:${table.level.name}`, make);
  setExpansions(arena, sourcesAddress, expansions);
  const bytes = numberSize(table.level) * table.size;
  setLocals(arena, part.targetsAddress, arena.take(bytes * (targets.boxCount + BOX_PADDING)));
}

/** From the leaves up. */
function multipolesOf(
  {boxCount, leaves, levels}: SourceTree,
  sourcesAddress: number,
  table: LoadedTable,
  arena: Arena,
  {exports, scratch}: Tools,
): SourceExpansions {
  const kernels = kernelsOf(exports, table.level);
  const room = (boxes: number, size: number): number =>
    arena.take(numberSize(table.level) * size * (boxes + BOX_PADDING));
  const expansions = {
    multipoles: room(boxCount, table.size),
    compressed: room(boxCount, table.sourceSize),
    zeros: room(0, Math.max(table.size, table.sourceSize)),
  };
  setExpansions(arena, sourcesAddress, expansions);
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
  const work: Work[] = [];
  parts.forEach(({targets: {leaves, ranges}}, part) => {
    let first = 0;
    let held = 0;
    for (let n = 0; n < leaves.length; n++) {
      const box = leaves[n];
      held += ranges[2 * box + 1] - ranges[2 * box];
      if (held < TARGETS_OF_WORK && n + 1 < leaves.length) continue;
      work.push({part, first, last: n + 1});
      first = n + 1;
      held = 0;
    }
  });
  return work;
}

/** Hands local expansions down from the root to the leaves. */
export function handDown(part: Part, table: LoadedTable, {exports, scratch}: Tools): void {
  const {levels} = part.targets;
  const kernels = kernelsOf(exports, table.level);
  for (let level = 0; level + 1 < levels.length; level++) {
    kernels.down(part.targetsAddress, table.address, levels[level], levels[level + 1], scratch);
  }
}
