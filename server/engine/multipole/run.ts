import {ServiceError} from '../../errors.ts';
import {scalesOf, writeColumn, type Results} from '../field-columns.ts';
import type {BlockReport, FieldJob} from '../jobs.ts';
import {RESULT} from '../methods/direct-sum.ts';
import type {Workplace} from '../workplace.ts';
import type {Arena} from './arena.ts';
import type {LoadedTable} from './load-table.ts';
import {begin} from './begin.ts';
import {effortFor, efforts, effortWithin, nextEffort} from './effort.ts';
import {farWork, handDown, makeExpansions, valuesWork} from './expansions.ts';
import {addUp, findError} from './finish.ts';
import {kernelsOf} from './kernels.ts';
import {atPhase, SAMPLING, type MultipoleJob, type Totals} from './multipole-job.ts';
import {listed, nothingFound} from './coincidences.ts';
import {sumFlagged} from './near.ts';
import {countUnmasked} from './norms.ts';
import {chooseChecks, samplingWork, sumSamples} from './samples.ts';
import {farShare} from './share.ts';
import {tableOf, type Tools} from './tools.ts';

/** Computes one piece of the phase that a job is in. */
export function computeMultipoleBlock(
  job: MultipoleJob,
  block: number,
  workplace: Workplace,
): BlockReport {
  const {part: index, first, last, whole} = job.work[block];
  const nothing = {coincident: [], coincidentCount: 0, reach: job.reach};
  if (index === SAMPLING) {
    sumSamples(job.field, job.samples, first, last, workplace);
    return nothing;
  }
  const {table} = job;
  const {multipole} = workplace;
  if (!table || !multipole) throw new RangeError('expected a table and kernels');
  const part = job.parts[index];
  const {address, level} = table;
  const kernels = kernelsOf(multipole.exports, level);
  const {sourcesAddress: sources, targetsAddress: targets, reach} = part;
  const leaves = part.targets.leaves.byteOffset;
  const {scratch} = multipole;
  if (job.phase === 'near') {
    kernels.near(sources, targets, leaves, first, last, reach, scratch);
  } else if (job.phase === 'far') {
    kernels.far(sources, targets, address, first, last, scratch);
  } else if (whole === undefined) {
    const others = (part.sorted?.others ?? part.targets.leaves).byteOffset;
    kernels.values(sources, targets, address, others, first, last, scratch);
  } else {
    const boxes = part.sorted?.whole[whole];
    if (!boxes) throw new RangeError('expected whole boxes');
    const order = part.targets.order.byteOffset;
    const list = boxes.leaves.byteOffset;
    kernels.lattice(sources, targets, address, boxes.address, order, list, first, last, scratch);
  }
  return nothing;
}

/** What is done between two phases; a field job if it must be summed directly after all. */
export function advance(job: MultipoleJob, tools: Tools): MultipoleJob | FieldJob {
  switch (job.phase) {
    case 'begin':
      return beginWith(job, {}, tools);
    case 'near':
      return afterNear(job, tools);
    case 'far': {
      for (const part of job.parts) handDown(part, usedTable(job), tools);
      return atPhase(job, 'values', valuesWork(job.parts));
    }
    case 'values': {
      const totals = addUp(job.field, job.parts, tools.arena);
      const samples = chooseChecks(job.field, totals, job.near ?? [], tools.arena);
      return atPhase(job, 'check', samplingWork(job.field, samples), {samples, totals});
    }
    case 'check':
      return afterCheck(job, tools);
    case 'done':
      return job;
  }
}

/** Of all pairs, how many may be near so that the rest is worth the trouble. */
const MOST_NEAR = 0.75;

function beginWith(
  job: MultipoleJob,
  changes: Partial<MultipoleJob>,
  tools: Tools,
): MultipoleJob | FieldJob {
  const {field, mostPairs} = job;
  const begun = begin({...job, ...changes}, tools);
  const all = field.charges.count * field.count;
  // As with a coincidence distance as large as the whole.
  const isDirect = all <= mostPairs && begun.nearPairs > MOST_NEAR * all;
  return isDirect ? field : begun;
}

function afterNear(job: MultipoleJob, tools: Tools): MultipoleJob | FieldJob {
  const {field, parts, tolerance, effort, leastEffort} = job;
  const found = nothingFound();
  for (const part of parts) sumFlagged(field, part, found, tools.stop);
  const near = addUp(field, parts, tools.arena);
  const share = farShare(near, job.samples);
  const isField = field.sum !== 'potential';
  const wanted = Math.max(leastEffort, effortFor(tolerance, isField, share));
  const used = Math.max(leastEffort, effortWithin(effort, wanted, tolerance, isField, share));
  // Other boxes are near with another separation, so all begins again.
  if (efforts[used].level.separation !== efforts[effort].level.separation) {
    return beginWith(job, {effort: used}, tools);
  }
  const table = tableOf(tools, efforts[used].level.name);
  const expanded = parts.map(part => makeExpansions(part, table, tools));
  return atPhase(job, 'far', farWork(expanded), {
    parts: expanded,
    effort: used,
    table,
    coincident: listed(found),
    coincidentCount: found.coincidentCount,
    maskedCount: found.masked.size,
    near: near.slice(isField ? 1 : 0).map(column => inFewDigits(column, tools.arena)),
  });
}

function afterCheck(job: MultipoleJob, tools: Tools): MultipoleJob | FieldJob {
  const {field, samples, totals, effort, tolerance, maskedCount} = job;
  if (!totals) throw new RangeError('expected totals');
  const {estimated, upper} = findError(totals, samples);
  // A value that single precision cannot hold is no value, and no mask either.
  const isWhole = countUnmasked(totals) === field.count - maskedCount;
  if (isWhole && upper <= tolerance) {
    writeTotals(field, totals);
    return atPhase(job, 'done', [], {estimated});
  }
  const next = isWhole ? nextEffort(effort, tolerance, estimated) : finest(effort);
  if (next !== undefined) {
    return beginWith(job, {effort: next, leastEffort: next}, tools);
  }
  if (field.charges.count * field.count <= job.mostPairs) return field;
  const detail = `The best the multipole method reached is a relative error of about ${Math.max(estimated.potential, estimated.field ?? 0).toExponential(1)}; the tolerance is ${tolerance}.`;
  throw new ServiceError('tolerance-not-reached', detail, {
    errors: [{pointer: '/accuracy/tolerance', code: 'tolerance-not-reached', detail}],
  });
}

/** Elsewhere, since totals lie where the answer does. */
function inFewDigits(column: Float64Array, arena: Arena): Float32Array {
  const out = arena.singles(column.length);
  out.set(column);
  return out;
}

/** The last effort, unless that was it. */
const finest = (effort: number): number | undefined =>
  effort + 1 < efforts.length ? efforts.length - 1 : undefined;

function writeTotals(field: FieldJob, totals: Totals): void {
  const scales = scalesOf(field);
  const results: Results = {
    result: place => totals[place === RESULT.v ? 0 : 1 + place - RESULT.e],
  };
  // From the last, since the magnitude is made of components that are scaled where they lie.
  for (let n = field.columns.length - 1; n >= 0; n--) {
    const out = field.out.subarray(n * field.count, (n + 1) * field.count);
    writeColumn(field.columns[n], results, scales, out);
  }
}

function usedTable({table}: MultipoleJob): LoadedTable {
  if (!table) throw new RangeError('expected a table');
  return table;
}
