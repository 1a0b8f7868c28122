import {unitOf} from '../../shared/units.ts';
import {scalesOf, writeColumn} from './field-columns.ts';
import {COINCIDENCES_LISTED, ISSUES_LISTED} from './limits.ts';
import {DirectSum} from './methods/direct-sum.ts';
import type {BlockReport, FieldJob, Stop} from './jobs.ts';
import {targetPositions} from './targets.ts';
import type {Workplace} from './workplace.ts';

/** Computes one block of a field job into `job.out`: columns, each as long as there are targets. */
export function computeFieldBlock(
  job: FieldJob,
  block: number,
  stop: Stop,
  workplace: Workplace,
): BlockReport {
  const {charges, columns} = job;
  const from = job.blocks[block];
  const to = job.blocks[block + 1];
  const options = {
    kind: job.sum,
    bounds: job.bounds,
    coincidenceDistance: job.coincidenceDistance,
    isExcluding: job.onCoincidence === 'exclude',
    chargeRoundings: unitOf('charge', job.symbols.charge).roundings,
  };
  const sum = new DirectSum(charges, options, to - from, workplace);
  const scales = scalesOf(job);
  const ranges = [0, charges.count];
  const most = job.onCoincidence === 'reject' ? ISSUES_LISTED : COINCIDENCES_LISTED;
  const listed: number[] = [];
  let coincidentCount = 0;

  for (let start = from; start < to; start += sum.capacity) {
    if (stop()) break;
    const count = Math.min(sum.capacity, to - start);
    targetPositions(job.targets, start, count, sum.positions);
    sum.compute(0, count, ranges);
    for (const [i, coincident] of sum.coincident) {
      coincidentCount += coincident.length;
      for (const j of coincident) if (listed.length < 2 * most) listed.push(start + i, j);
    }
    for (let c = 0; c < columns.length; c++) {
      const at = c * job.count + start;
      const column = job.out.subarray(at, at + count);
      writeColumn(columns[c], sum, scales, column);
      for (const i of sum.withoutSum) column[i] = NaN;
    }
  }
  return {coincident: listed, coincidentCount, reach: sum.reach};
}
