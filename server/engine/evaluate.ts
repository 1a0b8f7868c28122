import {computeForceBlock} from './analyses/force-block.ts';
import {fieldAnswer} from './answers/field-answer.ts';
import {forceAnswer} from './answers/force-answer.ts';
import type {AccuracyFacts, AnswerHeader, Timing} from './answers/header.ts';
import {momentAnswer} from './answers/moment-answer.ts';
import {computeFieldBlock} from './field-block.ts';
import type {BlockReport, FieldJob, Job, Stop} from './jobs.ts';
import {reachedByRounding} from './methods/rounding.ts';
import {computeMultipoleBlock} from './multipole/run.ts';
import {ownWorkplace, type Workplace} from './workplace.ts';

/** How many blocks a job has. */
export const blockCount = (job: Job): number => job.blocks.length - 1;

/**
 * Computes one block of a job into its `out`: pure but for that, and the same on any thread and at
 * any workplace.
 */
export function computeBlock(
  job: Job,
  block: number,
  stop: Stop,
  workplace: Workplace = ownWorkplace,
): BlockReport {
  switch (job.kind) {
    case 'field':
      return computeFieldBlock(job, block, stop, workplace);
    case 'force':
      return computeForceBlock(job, block, stop, workplace);
    case 'moment':
      throw new RangeError('moments have no blocks');
    case 'multipole':
      return computeMultipoleBlock(job, block, workplace);
  }
}

/**
 * Writes the answer of a job, whose blocks are all done, as JSON in UTF-8.
 *
 * @returns undefined if it was stopped
 */
export function writeAnswer(
  header: AnswerHeader,
  job: Job,
  reports: readonly BlockReport[],
  timing: Timing,
  stop: Stop,
  workplace: Workplace = ownWorkplace,
): Uint8Array | undefined {
  switch (job.kind) {
    case 'field':
      return fieldAnswer(header, job, reports, timing, stop, directAccuracy(job, workplace));
    case 'force':
      return forceAnswer(header, job, reports, timing);
    case 'moment':
      return momentAnswer(header, job, timing);
    case 'multipole': {
      const {field, tolerance, estimated} = job;
      const accuracy = {method: 'multipole', tolerance, estimated} as const;
      return fieldAnswer(header, field, [job], timing, stop, accuracy);
    }
  }
}

function directAccuracy(job: FieldJob, workplace: Workplace): AccuracyFacts {
  const {tolerance} = job;
  if (tolerance === undefined) return {method: 'direct'};
  const reached = reachedByRounding(job, workplace);
  return {method: 'direct', tolerance, ...(reached > tolerance && {reached})};
}
