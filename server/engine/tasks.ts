import type {Operation, ProblemCode} from '../../shared/api.ts';
import type {Issue} from '../errors.ts';
import type {AnswerHeader, Timing} from './answers/header.ts';
import type {FormsReport, KnownForms} from './forms.ts';
import type {BlockReport, Job} from './jobs.ts';
import type {EngineLimits} from './limits.ts';
import type {MultipoleJob} from './multipole/multipole-job.ts';
import type {PackedCall} from './pack.ts';
import type {Plan} from './plan.ts';

/**
 * What a thread is asked to do; plain data. `flag` is shared: not 0 means stop. Memory is taken from
 * the heap under `tag`; who made the task gives it back.
 */
export type Task =
  | {
      readonly type: 'prepare';
      readonly operation: Operation | 'estimates';
      readonly bytes: Uint8Array;
      readonly limits: EngineLimits;
      readonly forms: KnownForms;
    }
  | {readonly type: 'warm'}
  | {
      /** Into the heap; `call` is there already if a thread has read the body. */
      readonly type: 'pack';
      readonly plan: Plan;
      readonly call: PackedCall | undefined;
      readonly tag: number;
      readonly forms: KnownForms;
    }
  | {
      /** What is done between two phases of a job. */
      readonly type: 'advance';
      readonly job: MultipoleJob;
      readonly tag: number;
      readonly forms: KnownForms;
      readonly flag: Int32Array;
    }
  | {
      readonly type: 'block';
      readonly job: Job;
      readonly block: number;
      readonly tag: number;
      readonly flag: Int32Array;
    }
  | {
      readonly type: 'answer';
      readonly header: AnswerHeader;
      readonly job: Job;
      readonly reports: readonly BlockReport[];
      readonly timing: Timing;
      readonly tag: number;
      readonly flag: Int32Array;
    }
  | {
      /** A call that is one block: all of it at once. */
      readonly type: 'whole';
      readonly plan: Plan;
      readonly call: PackedCall | undefined;
      readonly queuedMilliseconds: number;
      readonly tag: number;
      readonly flag: Int32Array;
    };

/** What is kept of a call between preparing and running it. */
export interface PreparedCall {
  readonly plan: Plan;
  /** There already if a thread has read the body. */
  readonly call?: PackedCall;
  /** What was found and made on the way. */
  readonly forms?: FormsReport;
}

export interface WrittenAnswer {
  /** Undefined if it was stopped. */
  readonly bytes: Uint8Array | undefined;
  readonly timing: Timing;
}

/** What each type of task results in. */
export interface TaskResults {
  readonly prepare: PreparedCall;
  readonly advance: {readonly job: Job; readonly forms: FormsReport};
  readonly warm: undefined;
  readonly pack: {readonly call: PackedCall; readonly forms: FormsReport};
  readonly block: BlockReport;
  readonly answer: WrittenAnswer;
  readonly whole: WrittenAnswer;
}

/** A ServiceError as plain data: threads can pass on neither its class nor its members. */
export interface Refusal {
  readonly code: ProblemCode;
  readonly message: string;
  readonly errors: readonly Issue[];
  readonly errorCount: number;
  readonly retryAfter: number | undefined;
}

export type TaskResponse =
  {readonly result: TaskResults[Task['type']]} | {readonly refusal: Refusal};
