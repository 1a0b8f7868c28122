import {unitOf} from '../../../shared/units.ts';
import {ISSUES_LISTED} from '../limits.ts';
import {
  FORCE_STRIDE,
  PAIRS_BETWEEN_STOPS,
  type BlockReport,
  type ForceJob,
  type Stop,
} from '../jobs.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import {POSITION_STRIDE} from '../targets.ts';
import type {ChargeColumns} from '../sources/charge-columns.ts';

/**
 * Computes one block of a force job: the field and potential of all other bodies at each charge of
 * the block (all of one body, or all probes), and what each earlier body does to them.
 *
 * Charges on top of each other are reported as coincident, unless one of the two is zero.
 */
export function computeForceBlock(job: ForceJob, block: number, stop: Stop): BlockReport {
  const {charges, probes, starts} = job;
  const from = job.blocks[block];
  const to = job.blocks[block + 1];
  const bodies = starts.length - 1;
  const isProbe = from >= charges.count;
  const feeling = isProbe && probes ? probes : charges;
  const offset = isProbe ? charges.count : 0;
  const body = isProbe ? bodies : bodyAt(starts, from);
  const sum = new DirectSum(charges, {
    kind: 'field',
    bounds: job.bounds,
    coincidenceDistance: 0,
    isExcluding: true,
    chargeRoundings: unitOf('charge', job.symbols.charge).roundings,
  });
  const interactions = new Float64Array(job.hasInteractions && !isProbe ? 4 * bodies : 0);
  const others = rangesOfOthers(starts, body, interactions.length > 0);
  const target = new Float64Array(POSITION_STRIDE);
  const listed: number[] = [];
  let coincidentCount = 0;
  let reach = 0;
  const note = (i: number, charge: number): void => {
    if (charge === 0) return;
    coincidentCount += sum.coincident.length;
    for (const j of sum.coincident) if (listed.length < 2 * ISSUES_LISTED) listed.push(i, j);
  };
  const everyTargets = Math.max(1, Math.floor(PAIRS_BETWEEN_STOPS / charges.count));

  for (let i = from; i < to; i++) {
    if ((i - from) % everyTargets === 0 && stop()) break;
    const own = i - offset;
    chargePosition(feeling, own, target);
    reach = Math.max(reach, sum.reach(target[6]));
    const charge = feeling.q[own];
    const place = FORCE_STRIDE * i;
    job.out.fill(0, place, place + FORCE_STRIDE);
    for (const {body: acting, ranges} of others) {
      sum.at(target, ranges);
      note(i, charge);
      addTo(job.out, place, sum.result);
      // Every two bodies are answered once, the earlier one acting.
      if (interactions.length > 0 && acting < body) {
        const at = 4 * acting;
        for (let n = 0; n < 3; n++) interactions[at + n] += charge * sum.result[RESULT.e + n];
        interactions[at + 3] += charge * sum.result[RESULT.v];
      }
    }
    if (job.hasInternalEnergy && !isProbe) {
      sum.at(target, [starts[body], i, i + 1, starts[body + 1]]);
      note(i, charge);
      job.out[place + 4] = sum.result[RESULT.v];
    }
  }
  return {coincident: listed, coincidentCount, reach, interactions};
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

function addTo(out: Float64Array, place: number, result: Float64Array): void {
  for (let n = 0; n < 3; n++) out[place + n] += result[RESULT.e + n];
  out[place + 3] += result[RESULT.v];
  out[place + 5] += result[RESULT.eBound];
}

function chargePosition(charges: ChargeColumns, index: number, out: Float64Array): void {
  out[0] = charges.x[index];
  out[1] = charges.y[index];
  out[2] = charges.z[index];
  out[3] = charges.xRemainder[index];
  out[4] = charges.yRemainder[index];
  out[5] = charges.zRemainder[index];
  out[6] = charges.radius[index];
}

function bodyAt(starts: readonly number[], index: number): number {
  let body = 0;
  while (starts[body + 1] <= index) body++;
  return body;
}
