import {ServiceError} from '../errors.ts';
import {blockCount} from './evaluate.ts';
import type {Heap} from './heap.ts';
import type {BlockReport} from './jobs.ts';
import {Lease} from './lease.ts';
import type {PackedCall} from './pack.ts';
import type {PreparedCall, Task, WrittenAnswer} from './tasks.ts';
import type {Threads} from './threads.ts';

/** Work up to here is one task: hops between threads cost more than what sharing it would save. */
const WHOLE_WORK = 4e6;
const WHOLE_WORK_WITH_BOUNDS = 5e5;

/** A call on its way through the threads. */
interface Call {
  /** The next task, or undefined while the tasks that are out must come back first. */
  next(): (() => Promise<void>) | undefined;
  startedAt: number | undefined;
  readonly onStart: () => void;
}

/**
 * Gives the threads their tasks. Calls take turns, block by block, so that a small one never waits
 * for a large one to end; at most as many tasks are out as there are threads, so that turns are
 * taken here and not in the queue of the pool.
 */
export class Scheduler {
  readonly #threads: Threads;
  readonly #heap: Heap;
  readonly #capacity: number;
  readonly #computeMilliseconds: number;
  /** Whose turn it is stands first. */
  #calls: Call[] = [];
  #out = 0;
  #admitted = 0;
  #lastTag = 0;

  constructor(threads: Threads, heap: Heap, capacity: number, computeMilliseconds: number) {
    this.#threads = threads;
    this.#heap = heap;
    this.#capacity = capacity;
    this.#computeMilliseconds = computeMilliseconds;
  }

  get load(): {queued: number; capacity: number} {
    return {queued: this.#admitted, capacity: this.#capacity};
  }

  /**
   * Does one task in its turn.
   *
   * @throws ServiceError overloaded, or what the task refuses
   */
  async single(task: Task & {type: 'prepare'}): Promise<PreparedCall> {
    return this.#admit((resolve, reject) => {
      let isOut = false;
      return {
        startedAt: undefined,
        onStart: () => undefined,
        next: () => {
          if (isOut) return undefined;
          isOut = true;
          return async () => {
            try {
              resolve(await this.#threads.do(task, [task.bytes.buffer as ArrayBuffer]));
            } catch (error) {
              // Refusals and bugs alike belong to the caller.
              reject(error);
            }
          };
        },
      };
    });
  }

  /**
   * Computes a call and writes its answer.
   *
   * @throws ServiceError overloaded, time-out, or what the call is refused for; the reason of
   *   `signal` once that is aborted
   */
  async run({plan, call}: PreparedCall, signal: AbortSignal): Promise<Required<WrittenAnswer>> {
    signal.throwIfAborted();
    const flag = new Int32Array(new SharedArrayBuffer(Int32Array.BYTES_PER_ELEMENT));
    const queuedAt = performance.now();
    const tag = this.#newTag();
    const lease = new Lease(() => this.#heap.release(tag));
    let timer: NodeJS.Timeout | undefined;
    let onAbort: (() => void) | undefined;
    try {
      return await this.#admit((resolve, reject) => {
        const end = (reason: unknown): void => {
          Atomics.store(flag, 0, 1);
          reject(reason);
        };
        onAbort = () => end(signal.reason);
        signal.addEventListener('abort', onAbort, {once: true});
        const onStart = (): void => {
          const limit = this.#computeMilliseconds;
          const detail = `The call did not end within ${limit / 1000} s; split the targets over several calls.`;
          timer = setTimeout(() => end(new ServiceError('time-out', detail)), limit);
        };
        const finish = ({bytes, timing}: WrittenAnswer): void => {
          if (bytes) resolve({bytes, timing});
        };
        const hasBounds = plan.request.accuracy?.bounds === true;
        return plan.work <= (hasBounds ? WHOLE_WORK_WITH_BOUNDS : WHOLE_WORK)
          ? this.#wholeCall({plan, call}, tag, lease, flag, queuedAt, onStart, finish, end)
          : this.#blockCall({plan, call}, tag, lease, flag, queuedAt, onStart, finish, end);
      });
    } finally {
      clearTimeout(timer);
      lease.end();
      if (onAbort) signal.removeEventListener('abort', onAbort);
    }
  }

  #wholeCall(
    {plan, call}: PreparedCall,
    tag: number,
    lease: Lease,
    flag: Int32Array,
    queuedAt: number,
    onStart: () => void,
    finish: (answer: WrittenAnswer) => void,
    fail: (reason: unknown) => void,
  ): Call {
    let isOut = false;
    const own: Call = {
      startedAt: undefined,
      onStart,
      next: () => {
        if (isOut) return undefined;
        isOut = true;
        const queuedMilliseconds = performance.now() - queuedAt;
        return guarded(lease, fail, async () => {
          finish(
            await this.#threads.do({type: 'whole', plan, call, queuedMilliseconds, tag, flag}),
          );
        });
      },
    };
    return own;
  }

  #blockCall(
    {plan, call}: PreparedCall,
    tag: number,
    lease: Lease,
    flag: Int32Array,
    queuedAt: number,
    onStart: () => void,
    finish: (answer: WrittenAnswer) => void,
    fail: (reason: unknown) => void,
  ): Call {
    let packed: PackedCall | undefined;
    let isPacking = false;
    let nextBlock = 0;
    let done = 0;
    const reports: BlockReport[] = [];
    const own: Call = {
      startedAt: undefined,
      onStart,
      next: () => {
        if (!packed) {
          if (isPacking) return undefined;
          isPacking = true;
          return guarded(lease, fail, async () => {
            packed = await this.#threads.do({type: 'pack', plan, call, tag});
          });
        }
        const {header, job} = packed;
        const count = blockCount(job);
        if (nextBlock < count) {
          const block = nextBlock++;
          return guarded(lease, fail, async () => {
            reports[block] = await this.#withScratch(scratch =>
              this.#threads.do({type: 'block', job, block, tag: scratch, flag}),
            );
            done++;
          });
        }
        if (nextBlock > count || done < count) return undefined;
        nextBlock++;
        const started = own.startedAt ?? queuedAt;
        const timing = {
          queuedMilliseconds: started - queuedAt,
          computedMilliseconds: performance.now() - started,
        };
        return guarded(lease, fail, async () => {
          finish(await this.#threads.do({type: 'answer', header, job, reports, timing, flag}));
        });
      },
    };
    return own;
  }

  /** Lends a task memory of its own until it is back. */
  async #withScratch<T>(task: (tag: number) => Promise<T>): Promise<T> {
    const tag = this.#newTag();
    try {
      return await task(tag);
    } finally {
      this.#heap.release(tag);
    }
  }

  #newTag(): number {
    this.#lastTag = (this.#lastTag % 0x7fff_ffff) + 1;
    return this.#lastTag;
  }

  async #admit<T>(
    make: (resolve: (value: T) => void, reject: (reason: unknown) => void) => Call,
  ): Promise<T> {
    if (this.#admitted >= this.#capacity) {
      const detail = `${this.#capacity} calls are waiting or computing; try again in a moment.`;
      throw new ServiceError('overloaded', detail, {retryAfter: 1});
    }
    this.#admitted++;
    let call: Call | undefined;
    try {
      return await new Promise<T>((resolve, reject) => {
        call = make(resolve, reject);
        this.#calls.push(call);
        this.#dispatch();
      });
    } finally {
      this.#admitted--;
      this.#calls = this.#calls.filter(each => each !== call);
    }
  }

  #dispatch(): void {
    while (this.#out < this.#threads.count) {
      const step = this.#nextStep();
      if (!step) return;
      this.#out++;
      void step().finally(() => {
        this.#out--;
        this.#dispatch();
      });
    }
  }

  /** The next task of the first call that has one; that call goes to the end of the line. */
  #nextStep(): (() => Promise<void>) | undefined {
    for (let n = 0; n < this.#calls.length; n++) {
      const call = this.#calls[n];
      const step = call.next();
      if (!step) continue;
      this.#calls.splice(n, 1);
      this.#calls.push(call);
      if (call.startedAt === undefined) {
        call.startedAt = performance.now();
        call.onStart();
      }
      return step;
    }
    return undefined;
  }
}

/** A step of a call: its memory is kept until the step is over, and what it throws ends the call. */
const guarded =
  (lease: Lease, fail: (reason: unknown) => void, step: () => Promise<void>) =>
  async (): Promise<void> => {
    try {
      await lease.during(step);
    } catch (error) {
      fail(error);
    }
  };
