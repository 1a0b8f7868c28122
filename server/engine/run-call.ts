import {blockCount, computeBlock, writeAnswer} from './evaluate.ts';
import type {BlockReport, Stop} from './jobs.ts';
import {pack, type PackedCall} from './pack.ts';
import type {Plan} from './plan.ts';
import type {WrittenAnswer} from './tasks.ts';

/** Computes a whole call where it is, block by block, and writes its answer. */
export function runWhole(
  plan: Plan,
  packed: PackedCall | undefined,
  queuedMilliseconds: number,
  stop: Stop,
): WrittenAnswer {
  const start = performance.now();
  const {header, job} = packed ?? pack(plan);
  const reports: BlockReport[] = [];
  for (let block = 0; block < blockCount(job); block++) {
    reports.push(computeBlock(job, block, stop));
  }
  const timing = {queuedMilliseconds, computedMilliseconds: performance.now() - start};
  const bytes = stop() ? undefined : writeAnswer(header, job, reports, timing, stop);
  return {bytes, timing};
}
