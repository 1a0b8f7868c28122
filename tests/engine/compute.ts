import type {
  FieldAnswer,
  FieldRequest,
  ForceAnswer,
  ForceRequest,
  MomentAnswer,
  MomentRequest,
  PotentialRequest,
} from '../../shared/api.ts';
import {blockCount, computeBlock, writeAnswer} from '../../server/engine/evaluate.ts';
import type {FilledRequest} from '../../server/engine/filled-request.ts';
import type {Job} from '../../server/engine/jobs.ts';
import {ownMemory} from '../../server/engine/memory.ts';
import {pack} from '../../server/engine/pack.ts';
import {plan} from '../../server/engine/plan.ts';

interface Requests {
  potentials: PotentialRequest;
  fields: FieldRequest;
  forces: ForceRequest;
  moments: MomentRequest;
}

interface Answers {
  potentials: FieldAnswer;
  fields: FieldAnswer;
  forces: ForceAnswer;
  moments: MomentAnswer;
}

/** A column that was asked for and has no masked value. */
export function numbers(column: readonly (number | null)[] | undefined): number[] {
  if (!column) throw new Error('the column is not there');
  return column.map(value => {
    if (value === null) throw new Error('a value is masked');
    return value;
  });
}

const NEVER = (): boolean => false;

/** Computes a request as one thread does and reads the answer; `change` may alter the packed job. */
export function compute<O extends keyof Requests>(
  operation: O,
  request: Requests[O],
  change: (job: Job) => Job = job => job,
): {filled: FilledRequest; answer: Answers[O]} {
  const planned = plan(operation, request);
  const packed = pack(planned, ownMemory);
  const job = change(packed.job);
  const reports = Array.from({length: blockCount(job)}, (_, b) => computeBlock(job, b, NEVER));
  const timing = {queuedMilliseconds: 0, computedMilliseconds: 0};
  const bytes = writeAnswer(packed.header, job, reports, timing, NEVER);
  if (!bytes) throw new Error('stopped');
  // The answer is what the contract says; tests of the contract check that.
  const answer = JSON.parse(Buffer.from(bytes).toString('utf8')) as Answers[O];
  return {filled: planned.request, answer};
}
