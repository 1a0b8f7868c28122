import {kernelsOf} from './kernels.ts';
import {numberSize, type LoadedTable} from './load-table.ts';
import type {Part, Work} from './multipole-job.ts';
import {BOX_PADDING} from './source-tree.ts';
import {setExpansions, setLocals} from './structs.ts';
import type {Tools} from './tools.ts';

/** Multipoles of all boxes of a part, from the leaves up, and room for its local expansions. */
export function makeExpansions(part: Part, table: LoadedTable, tools: Tools): void {
  const {arena, exports, scratch} = tools;
  const {sources, targets, sourcesAddress} = part;
  const kernels = kernelsOf(exports, table.level);
  const bytes = numberSize(table.level);
  const room = (boxes: number, size: number): number =>
    arena.take(bytes * size * (boxes + BOX_PADDING));
  setExpansions(arena, sourcesAddress, {
    multipoles: room(sources.boxCount, table.size),
    compressed: room(sources.boxCount, table.sourceSize),
    zeros: room(0, Math.max(table.size, table.sourceSize)),
  });
  const {leaves, levels} = sources;
  kernels.multipoles(sourcesAddress, table.address, leaves.byteOffset, 0, leaves.length, scratch);
  for (let level = levels.length - 2; level >= 0; level--) {
    kernels.up(sourcesAddress, table.address, levels[level], levels[level + 1], scratch);
  }
  kernels.kept(sourcesAddress, table.address, 0, sources.boxCount, scratch);
  setLocals(arena, part.targetsAddress, room(targets.boxCount, table.size));
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
