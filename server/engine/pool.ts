import type {Estimate, Operation} from '../../shared/api.ts';
import {ServiceError} from '../errors.ts';
import {estimateOf} from './estimate.ts';
import {createHeap, Heap} from './heap.ts';
import {KeptForms} from './kept-forms.ts';
import {instantiate, loadKernels, type KernelModule} from './kernels/load.ts';
import {defaultLimits, type EngineLimits} from './limits.ts';
import {hasTables} from './multipole/find-table.ts';
import {planBody} from './prepare.ts';
import {runWhole} from './run-call.ts';
import {Scheduler} from './scheduler.ts';
import type {PreparedCall} from './tasks.ts';
import {Threads} from './threads.ts';

export interface EngineOptions {
  readonly threads: number;
  readonly limits?: Partial<EngineLimits>;
  /** Calls in the threads or waiting for them; more are refused as `overloaded`. */
  readonly maxQueue?: number;
  /** Compiled kernels, if not those of the build; null for the plain ones. */
  readonly kernels?: KernelModule | null;
}

/** A call that has been read, checked and counted. */
export interface Prepared {
  readonly operation: Operation;
  /** What it is charged. */
  readonly pairs: number;
  /** Rows of the answer. */
  readonly rows: number;
  readonly route: 'inline' | 'worker';
  /** The affair of the engine. */
  readonly call: PreparedCall;
}

export interface Outcome {
  /** The answer: JSON in UTF-8. */
  readonly bytes: Uint8Array;
  readonly pairs: number;
  readonly queuedMilliseconds: number;
  readonly computedMilliseconds: number;
}

export interface Engine {
  /** Whether large sums can be made by the multipole method: not without the kernels of the build. */
  readonly hasMultipole: boolean;
  /**
   * Reads, checks and counts a body: small ones at once, large ones in a thread.
   *
   * @throws ServiceError for whatever is wrong with it; overloaded
   */
  prepare(operation: Operation, body: Uint8Array): Prepared | Promise<Prepared>;
  /** Computes a prepared call in the threads. @throws ServiceError; the reason of the signal */
  run(prepared: Prepared, options: {readonly signal: AbortSignal}): Promise<Outcome>;
  /** Computes a prepared call of route `inline` where it is. @throws ServiceError */
  runInline(prepared: Prepared): Outcome;
  /** What a call would cost; the body is that of `/v1/estimates`. @throws ServiceError */
  estimate(body: Uint8Array): Estimate | Promise<Estimate>;
  /** Makes every thread ready to read bodies, so that no first caller waits for it. */
  warmUp(): Promise<void>;
  /** Calls in the threads or waiting for them, and how many there may be. */
  load(): {readonly queued: number; readonly capacity: number};
  /** [bytes] of the heap that calls hold at the moment, and kept forms */
  memory(): {readonly allocated: number; readonly kept: number; readonly capacity: number};
  close(): Promise<void>;
}

const NEVER = (): boolean => false;

export function createEngine({
  threads: count,
  limits: given,
  maxQueue = 200,
  kernels = loadKernels(),
}: EngineOptions): Engine {
  const wanted: EngineLimits = {...defaultLimits, ...given};
  const heap = new Heap(createHeap(wanted.heapBytes));
  const isCompiled = kernels ? instantiate(kernels, heap.memory) !== undefined : false;
  const limits = {...wanted, hasMultipole: wanted.hasMultipole && isCompiled && hasTables()};
  const kept = new KeptForms(heap, limits.keptBytes);
  const threads = new Threads(count, heap, kernels ?? undefined);
  const scheduler = new Scheduler(threads, heap, kept, maxQueue, limits.computeMilliseconds);

  const preparedOf = (call: PreparedCall): Prepared => {
    const {operation, pairs, rows, route} = call.plan;
    return {operation, pairs, rows, route, call};
  };
  /** A thread gets its own copy, since what is moved to it is gone here. */
  const read = (operation: Operation | 'estimates', body: Uint8Array): Promise<PreparedCall> =>
    scheduler.prepare(operation, new Uint8Array(body), limits);

  return {
    hasMultipole: limits.hasMultipole,
    prepare(operation, body) {
      if (body.length > limits.inlineBytes) return read(operation, body).then(preparedOf);
      return preparedOf({plan: planBody(operation, body, limits)});
    },
    async run({call, pairs}, {signal}) {
      const {bytes, timing} = await scheduler.run(call, signal);
      if (!bytes) throw new ServiceError('time-out', 'The call was stopped.');
      return {bytes, pairs, ...timing};
    },
    runInline({call, pairs, route}) {
      if (route !== 'inline') throw new RangeError('expected a call of route inline');
      const {bytes, timing} = runWhole(call.plan, call.call, 0, NEVER);
      if (!bytes) throw new RangeError('a call of route inline has no one to stop it');
      return {bytes, pairs, ...timing};
    },
    estimate(body) {
      if (body.length <= limits.inlineBytes) {
        return estimateOf(planBody('estimates', body, limits), count);
      }
      return read('estimates', body).then(({plan}) => estimateOf(plan, count));
    },
    async warmUp() {
      // As many tasks at once as there are threads: each thread gets one.
      await Promise.all(Array.from({length: count}, () => threads.do({type: 'warm'})));
    },
    load: () => scheduler.load,
    memory: () => ({allocated: heap.allocated, kept: kept.bytes, capacity: heap.capacity}),
    close: () => threads.close(),
  };
}
