import {unitOf} from '../../../shared/units.ts';
import {ISSUES_LISTED} from '../limits.ts';
import {FORCE_STRIDE, type BlockReport, type ForceJob, type Stop} from '../jobs.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import type {PositionColumns} from '../positions.ts';
import type {ChargeColumns} from '../sources/charge-columns.ts';
import type {Workplace} from '../workplace.ts';

/**
 * Computes one block of a force job: the field and potential of all other bodies at each charge of
 * the block (all of one body, or all probes), and what each earlier body does to them.
 *
 * Charges on top of each other are reported as coincident, unless one of the two is zero.
 */
export function computeForceBlock(
  job: ForceJob,
  block: number,
  stop: Stop,
  workplace: Workplace,
): BlockReport {
  const {charges, probes, starts} = job;
  const from = job.blocks[block];
  const to = job.blocks[block + 1];
  const bodies = starts.length - 1;
  const isProbe = from >= charges.count;
  const feeling = isProbe && probes ? probes : charges;
  const offset = isProbe ? charges.count : 0;
  const body = isProbe ? bodies : bodyAt(starts, from);
  const options = {
    kind: 'field',
    bounds: job.bounds,
    coincidenceDistance: 0,
    isExcluding: true,
    chargeRoundings: unitOf('charge', job.symbols.charge).roundings,
  } as const;
  const sum = new DirectSum(charges, options, to - from, workplace);
  const interactions = new Float64Array(job.hasInteractions && !isProbe ? 4 * bodies : 0);
  const others = rangesOfOthers(starts, body, interactions.length > 0);
  const found = new Coincidences();

  for (let start = from; start < to; start += sum.capacity) {
    if (stop()) break;
    const count = Math.min(sum.capacity, to - start);
    const own = start - offset;
    const q = feeling.q.subarray(own, own + count);
    chargePositions(feeling, own, count, sum.positions);
    job.out.fill(0, FORCE_STRIDE * start, FORCE_STRIDE * (start + count));
    for (const {body: acting, ranges} of others) {
      sum.compute(0, count, ranges);
      found.note(sum, start, q);
      addTo(job.out, start, count, sum);
      // Every two bodies are answered once, the earlier one acting.
      if (interactions.length > 0 && acting < body) addInteraction(interactions, acting, q, sum);
    }
    if (job.hasInternalEnergy && !isProbe) {
      for (let i = 0; i < count; i++) {
        const j = start + i;
        sum.compute(i, i + 1, [starts[body], j, j + 1, starts[body + 1]]);
        found.note(sum, start, q);
        job.out[FORCE_STRIDE * j + 4] = sum.value(RESULT.v, i);
      }
    }
  }
  const {listed: coincident, count: coincidentCount} = found;
  return {coincident, coincidentCount, reach: sum.reach, interactions};
}

/** Collects coincident pairs: lists the first, counts all. */
class Coincidences {
  readonly listed: number[] = [];
  count = 0;

  /** @param q of the charges that feel, from `start` on; one of zero overlaps with nothing */
  note(sum: DirectSum, start: number, q: Float64Array): void {
    for (const [i, coincident] of sum.coincident) {
      if (q[i] === 0) continue;
      this.count += coincident.length;
      for (const j of coincident) {
        if (this.listed.length < 2 * ISSUES_LISTED) this.listed.push(start + i, j);
      }
    }
  }
}

function addInteraction(
  interactions: Float64Array,
  acting: number,
  q: Float64Array,
  sum: DirectSum,
): void {
  const at = 4 * acting;
  for (let i = 0; i < q.length; i++) {
    interactions[at] += q[i] * sum.value(RESULT.e, i);
    interactions[at + 1] += q[i] * sum.value(RESULT.e + 1, i);
    interactions[at + 2] += q[i] * sum.value(RESULT.e + 2, i);
    interactions[at + 3] += q[i] * sum.value(RESULT.v, i);
  }
}

interface Acting {
  readonly body: number;
  readonly ranges: readonly number[];
}

/** The charges of all bodies but `body`: body by body, or all in one. */
function rangesOfOthers(starts: readonly number[], body: number, isByBody: boolean): Acting[] {
  const bodies = starts.length - 1;
  if (isByBody) {
    const acting: Acting[] = [];
    for (let b = 0; b < bodies; b++) {
      if (b !== body) acting.push({body: b, ranges: [starts[b], starts[b + 1]]});
    }
    return acting;
  }
  const end = starts[bodies];
  const ranges = body === bodies ? [0, end] : [0, starts[body], starts[body + 1], end];
  return [{body: bodies, ranges}];
}

function addTo(out: Float64Array, start: number, count: number, sum: DirectSum): void {
  for (let i = 0; i < count; i++) {
    const place = FORCE_STRIDE * (start + i);
    out[place] += sum.value(RESULT.e, i);
    out[place + 1] += sum.value(RESULT.e + 1, i);
    out[place + 2] += sum.value(RESULT.e + 2, i);
    out[place + 3] += sum.value(RESULT.v, i);
    out[place + 5] += sum.value(RESULT.eBound, i);
  }
}

function chargePositions(
  charges: ChargeColumns,
  from: number,
  count: number,
  out: PositionColumns,
): void {
  const to = from + count;
  out.x.set(charges.x.subarray(from, to));
  out.y.set(charges.y.subarray(from, to));
  out.z.set(charges.z.subarray(from, to));
  out.xRemainder.set(charges.xRemainder.subarray(from, to));
  out.yRemainder.set(charges.yRemainder.subarray(from, to));
  out.zRemainder.set(charges.zRemainder.subarray(from, to));
  out.radius.set(charges.radius.subarray(from, to));
}

function bodyAt(starts: readonly number[], index: number): number {
  let body = 0;
  while (starts[body + 1] <= index) body++;
  return body;
}
