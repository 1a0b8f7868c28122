import type {CallForms} from './call-forms.ts';
import {blockCount} from './evaluate.ts';
import type {BlockReport, Job} from './jobs.ts';
import type {Lease} from './lease.ts';
import type {PackedCall} from './pack.ts';
import type {PreparedCall, WrittenAnswer} from './tasks.ts';
import type {Threads} from './threads.ts';

/** A call that is being computed: what all its tasks share. */
export interface Run {
  readonly prepared: PreparedCall;
  /** Of its memory in the heap, and what gives that back. */
  readonly tag: number;
  readonly lease: Lease;
  readonly forms: CallForms;
  /** Not 0 means stop. */
  readonly flag: Int32Array;
  readonly queuedAt: number;
  readonly onStart: () => void;
  readonly finish: (answer: WrittenAnswer) => void;
  readonly fail: (reason: unknown) => void;
}

/** A call on its way through the threads. */
export interface Call {
  /** The next task, or undefined while the tasks that are out must come back first. */
  next(): (() => Promise<void>) | undefined;
  startedAt: number | undefined;
  readonly onStart: () => void;
}

/** Lends a task memory of its own until it is back. */
export type WithScratch = <T>(task: (tag: number) => Promise<T>) => Promise<T>;

/**
 * A call computed block by block: packed, then the blocks of its job on any thread, then, for jobs
 * of several phases, one step and the blocks of the next phase, and in the end its answer.
 */
export class BlockCall implements Call {
  startedAt: number | undefined;
  readonly onStart: () => void;
  readonly #run: Run;
  readonly #threads: Threads;
  readonly #withScratch: WithScratch;
  #packed: PackedCall | undefined;
  #isBetween = false;
  #isAnswering = false;
  #nextBlock = 0;
  #done = 0;
  #reports: BlockReport[] = [];

  constructor(run: Run, threads: Threads, withScratch: WithScratch) {
    this.#run = run;
    this.#threads = threads;
    this.#withScratch = withScratch;
    this.onStart = run.onStart;
  }

  next(): (() => Promise<void>) | undefined {
    if (this.#isBetween || this.#isAnswering) return undefined;
    if (!this.#packed) return this.#between(() => this.#pack());
    const {job} = this.#packed;
    const count = blockCount(job);
    if (this.#nextBlock < count) return this.#block(job, this.#nextBlock++);
    if (this.#done < count) return undefined;
    if (job.kind === 'multipole' && job.phase !== 'done') {
      return this.#between(() => this.#advance(job));
    }
    this.#isAnswering = true;
    return guarded(this.#run, () => this.#answer(job));
  }

  /** A step during which nothing else can be done for the call. */
  #between(step: () => Promise<PackedCall>): () => Promise<void> {
    this.#isBetween = true;
    return guarded(this.#run, async () => {
      this.#packed = await step();
      this.#reports = [];
      this.#nextBlock = 0;
      this.#done = 0;
      this.#isBetween = false;
    });
  }

  async #pack(): Promise<PackedCall> {
    const {prepared, tag, forms} = this.#run;
    const {plan, call} = prepared;
    // What a thread has read is packed already and needs only its place in the heap.
    const hold = call ? undefined : forms.columns;
    const known = hold?.known ?? {};
    const result = await this.#threads.do({type: 'pack', plan, call, tag, forms: known});
    if (hold) forms.add(hold, result.forms);
    return result.call;
  }

  async #advance(job: Job & {kind: 'multipole'}): Promise<PackedCall> {
    const {tag, forms, flag} = this.#run;
    const hold = forms.treesOf(job);
    const task = {type: 'advance', job, tag, forms: hold.known, flag} as const;
    const result = await this.#threads.do(task);
    forms.add(hold, result.forms);
    if (!this.#packed) throw new RangeError('expected a packed call');
    return {...this.#packed, job: result.job};
  }

  #block(job: Job, block: number): () => Promise<void> {
    const {flag} = this.#run;
    return guarded(this.#run, async () => {
      this.#reports[block] = await this.#withScratch(tag =>
        this.#threads.do({type: 'block', job, block, tag, flag}),
      );
      this.#done++;
    });
  }

  async #answer(job: Job): Promise<void> {
    const {queuedAt, flag, forms, finish} = this.#run;
    if (!this.#packed) throw new RangeError('expected a packed call');
    const {header} = this.#packed;
    const started = this.startedAt ?? queuedAt;
    const {preparation} = forms;
    const timing = {
      queuedMilliseconds: started - queuedAt,
      computedMilliseconds: performance.now() - started,
      ...(preparation && {preparation}),
    };
    const reports = this.#reports;
    finish(
      await this.#withScratch(tag =>
        this.#threads.do({type: 'answer', header, job, reports, timing, tag, flag}),
      ),
    );
  }
}

/** A step of a call: its memory is kept until the step is over, and what it throws ends the call. */
export const guarded =
  ({lease, fail}: Run, step: () => Promise<void>) =>
  async (): Promise<void> => {
    try {
      await lease.during(step);
    } catch (error) {
      fail(error);
    }
  };
