import {blockCount, computeBlock, writeAnswer} from './evaluate.ts';
import type {BlockReport, Stop} from './jobs.ts';
import {housedCall} from './housed-call.ts';
import {pack, type PackedCall} from './pack.ts';
import type {Plan} from './plan.ts';
import type {WrittenAnswer} from './tasks.ts';
import {ownWorkplace, type Workplace} from './workplace.ts';

/** Computes a whole call where it is, block by block, and writes its answer. */
export function runWhole(
  plan: Plan,
  packed: PackedCall | undefined,
  queuedMilliseconds: number,
  stop: Stop,
  workplace: Workplace = ownWorkplace,
): WrittenAnswer {
  const start = performance.now();
  const {memory} = workplace;
  const {header, job} = packed ? housedCall(packed, memory) : pack(plan, memory);
  const reports: BlockReport[] = [];
  for (let block = 0; block < blockCount(job); block++) {
    reports.push(computeBlock(job, block, stop, workplace));
  }
  const timing = {queuedMilliseconds, computedMilliseconds: performance.now() - start};
  const bytes = stop() ? undefined : writeAnswer(header, job, reports, timing, stop, workplace);
  return {bytes, timing};
}
