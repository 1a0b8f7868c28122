import {ServiceError} from '../../errors.ts';
import {scalesOf, writeColumn, type Results} from '../field-columns.ts';
import type {BlockReport, FieldJob} from '../jobs.ts';
import {RESULT} from '../methods/direct-sum.ts';
import type {Workplace} from '../workplace.ts';
import type {LoadedTable} from './load-table.ts';
import {begin} from './begin.ts';
import {effortFor, efforts, nextEffort} from './effort.ts';
import {farWork, handDown, makeExpansions, valuesWork} from './expansions.ts';
import {addUp, estimateError, isReached, type Totals} from './finish.ts';
import {kernelsOf} from './kernels.ts';
import {atPhase, SAMPLING, type MultipoleJob} from './multipole-job.ts';
import {listed, sumFlagged, type Coincidences} from './near.ts';
import {sumSamples} from './samples.ts';
import {farShare} from './share.ts';
import {tableOf, type Tools} from './tools.ts';

/** Computes one piece of the phase that a job is in. */
export function computeMultipoleBlock(
  job: MultipoleJob,
  block: number,
  workplace: Workplace,
): BlockReport {
  const {part: index, first, last} = job.work[block];
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
  } else {
    kernels.values(sources, targets, address, leaves, first, last, scratch);
  }
  return nothing;
}

/** What is done between two phases; a field job if it must be summed directly after all. */
export function advance(job: MultipoleJob, tools: Tools): MultipoleJob | FieldJob {
  switch (job.phase) {
    case 'begin':
      return begin(job, tools);
    case 'near':
      return afterNear(job, tools);
    case 'far': {
      for (const part of job.parts) handDown(part, usedTable(job), tools);
      return atPhase(job, 'values', valuesWork(job.parts));
    }
    case 'values':
      return afterValues(job, tools);
    case 'done':
      return job;
  }
}

function afterNear(job: MultipoleJob, tools: Tools): MultipoleJob {
  const {field, parts, tolerance, effort, leastEffort} = job;
  const found: Coincidences = {pairs: [], coincidentCount: 0};
  for (const part of parts) sumFlagged(field, part, found);
  const near = addUp(field, parts, tools.arena);
  const share = farShare(near, job.samples);
  const wanted = Math.max(leastEffort, effortFor(tolerance, field.sum !== 'potential', share));
  const level = efforts[effort].level;
  const better = efforts[wanted].level;
  // Other boxes are near with another separation, so all begins again.
  if (better.separation !== level.separation && wanted > effort) {
    return begin({...job, effort: wanted}, tools);
  }
  const used = better.separation === level.separation ? wanted : effort;
  const table = tableOf(tools, efforts[used].level.name);
  for (const part of parts) makeExpansions(part, table, tools);
  return atPhase(job, 'far', farWork(parts), {
    effort: used,
    table,
    coincident: listed(found),
    coincidentCount: found.coincidentCount,
  });
}

function afterValues(job: MultipoleJob, tools: Tools): MultipoleJob | FieldJob {
  const {field, parts, samples, effort, tolerance} = job;
  const totals = addUp(field, parts, tools.arena);
  const estimated = estimateError(totals, samples);
  if (isReached(estimated, tolerance)) {
    writeTotals(field, totals);
    return atPhase(job, 'done', [], {estimated});
  }
  const next = nextEffort(effort, tolerance, estimated);
  if (next !== undefined) {
    return begin({...job, effort: next, leastEffort: next}, tools);
  }
  if (field.charges.count * field.count <= job.mostPairs) return field;
  const detail = `The best the multipole method reached is a relative error of about ${Math.max(estimated.potential, estimated.field ?? 0).toExponential(1)}; the tolerance is ${tolerance}.`;
  throw new ServiceError('tolerance-not-reached', detail, {
    errors: [{pointer: '/accuracy/tolerance', code: 'tolerance-not-reached', detail}],
  });
}

function writeTotals(field: FieldJob, totals: Totals): void {
  const scales = scalesOf(field);
  const results: Results = {
    result: place => totals[place === RESULT.v ? 0 : 1 + place - RESULT.e],
  };
  field.columns.forEach((column, n) => {
    writeColumn(
      column,
      results,
      scales,
      field.out.subarray(n * field.count, (n + 1) * field.count),
    );
  });
}

function usedTable({table}: MultipoleJob): LoadedTable {
  if (!table) throw new RangeError('expected a table');
  return table;
}
