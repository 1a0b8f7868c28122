import type {Operation} from '../../shared/api.ts';
import {ServiceError} from '../errors.ts';
import {BlockCall, guarded, type Call, type Run} from './block-call.ts';
import {CallForms} from './call-forms.ts';
import type {Heap} from './heap.ts';
import type {KeptForms} from './kept-forms.ts';
import {Lease} from './lease.ts';
import type {EngineLimits} from './limits.ts';
import type {PreparedCall, WrittenAnswer} from './tasks.ts';
import type {Threads} from './threads.ts';

/** Work up to here is one task: hops between threads cost more than what sharing it would save. */
const WHOLE_WORK = 4e6;
const WHOLE_WORK_WITH_BOUNDS = 5e5;

/**
 * Gives the threads their tasks. Calls take turns, block by block, so that a small one never waits
 * for a large one to end; at most as many tasks are out as there are threads, so that turns are
 * taken here and not in the queue of the pool.
 */
export class Scheduler {
  readonly #threads: Threads;
  readonly #heap: Heap;
  readonly #kept: KeptForms;
  readonly #capacity: number;
  readonly #computeMilliseconds: number;
  /** Whose turn it is stands first. */
  #calls: Call[] = [];
  #out = 0;
  #admitted = 0;
  #lastTag = 0;

  constructor(
    threads: Threads,
    heap: Heap,
    kept: KeptForms,
    capacity: number,
    computeMilliseconds: number,
  ) {
    this.#threads = threads;
    this.#heap = heap;
    this.#kept = kept;
    this.#capacity = capacity;
    this.#computeMilliseconds = computeMilliseconds;
  }

  get load(): {queued: number; capacity: number} {
    return {queued: this.#admitted, capacity: this.#capacity};
  }

  /**
   * Reads, checks and packs a body in its turn.
   *
   * @throws ServiceError overloaded, or what the body is refused for
   */
  async prepare(
    operation: Operation | 'estimates',
    bytes: Uint8Array,
    limits: EngineLimits,
  ): Promise<PreparedCall> {
    return this.#admit((resolve, reject) => {
      let isOut = false;
      return {
        startedAt: undefined,
        onStart: () => undefined,
        next: () => {
          if (isOut) return undefined;
          isOut = true;
          return async () => {
            const hold = this.#kept.hold(['columns:']);
            try {
              const task = {type: 'prepare', operation, bytes, limits, forms: hold.known} as const;
              const prepared = await this.#threads.do(task, [bytes.buffer as ArrayBuffer]);
              if (prepared.forms) hold.add(prepared.forms);
              resolve(prepared);
            } catch (error) {
              // Refusals and bugs alike belong to the caller.
              reject(error);
            } finally {
              hold.release();
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
  async run(prepared: PreparedCall, signal: AbortSignal): Promise<Required<WrittenAnswer>> {
    const {plan} = prepared;
    signal.throwIfAborted();
    const flag = new Int32Array(new SharedArrayBuffer(Int32Array.BYTES_PER_ELEMENT));
    const queuedAt = performance.now();
    const tag = this.#newTag();
    const forms = new CallForms(this.#kept, prepared.forms);
    const lease = new Lease(() => {
      this.#heap.release(tag);
      forms.release();
    });
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
        const isWhole =
          plan.method === 'direct' &&
          plan.work <= (hasBounds ? WHOLE_WORK_WITH_BOUNDS : WHOLE_WORK);
        const run = {prepared, tag, lease, forms, flag, queuedAt, onStart, finish, fail: end};
        return isWhole
          ? this.#wholeCall(run)
          : new BlockCall(run, this.#threads, task => this.#withScratch(task));
      });
    } finally {
      clearTimeout(timer);
      lease.end();
      if (onAbort) signal.removeEventListener('abort', onAbort);
    }
  }

  #wholeCall(run: Run): Call {
    const {prepared, queuedAt, tag, flag, onStart, finish} = run;
    const {plan, call} = prepared;
    let isOut = false;
    return {
      startedAt: undefined,
      onStart,
      next: () => {
        if (isOut) return undefined;
        isOut = true;
        const queuedMilliseconds = performance.now() - queuedAt;
        return guarded(run, async () => {
          finish(
            await this.#threads.do({type: 'whole', plan, call, queuedMilliseconds, tag, flag}),
          );
        });
      },
    };
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
