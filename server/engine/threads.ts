import {createRequire} from 'node:module';
import {fileURLToPath, pathToFileURL} from 'node:url';
import {threadId} from 'node:worker_threads';
import {Piscina} from 'piscina';

import {ServiceError} from '../errors.ts';
import type {Heap, SharedHeap} from './heap.ts';
import type {KernelModule} from './kernels/load.ts';
import type {Task, TaskResponse, TaskResults} from './tasks.ts';

/** [MiB] of heap a thread may have before it is ended; results lie outside, in shared memory. */
const HEAP = 512;

type ResultOf<T extends Task> = TaskResults[T['type']];

/** What every thread is given at its start. */
export interface ThreadData {
  readonly heap: SharedHeap;
  /** Undefined where only the plain ones are to be had. */
  readonly kernels: KernelModule | undefined;
  /** How many tags threads have given to forms. */
  readonly formTags: Int32Array;
}

/** Threads that do tasks, one each at a time. */
export class Threads {
  readonly count: number;
  readonly #pool: Piscina<Task, TaskResponse>;
  readonly #heap: Heap;

  constructor(count: number, heap: Heap, kernels: KernelModule | undefined) {
    this.count = count;
    this.#heap = heap;
    const formTags = new Int32Array(new SharedArrayBuffer(Int32Array.BYTES_PER_ELEMENT));
    const workerData: ThreadData = {heap: heap.shared, kernels, formTags};
    this.#pool = new Piscina({
      ...workerFile(),
      workerData,
      minThreads: count,
      maxThreads: count,
      idleTimeout: Infinity,
      concurrentTasksPerWorker: 1,
      resourceLimits: {maxOldGenerationSizeMb: HEAP},
      recordTiming: false,
    });
  }

  /** @throws ServiceError if the request is refused */
  async do<T extends Task>(task: T, moved: readonly ArrayBuffer[] = []): Promise<ResultOf<T>> {
    const response = await this.#run(task, moved);
    if ('result' in response) return response.result as ResultOf<T>;
    const {code, message, ...options} = response.refusal;
    throw new ServiceError(code, message, options);
  }

  async #run(task: Task, moved: readonly ArrayBuffer[]): Promise<TaskResponse> {
    try {
      return await this.#pool.run(task, {transferList: [...moved]});
    } catch (error) {
      // A bug, or the thread is no more.
      this.#heap.recover([threadId, ...this.#pool.threads.map(thread => thread.threadId)]);
      throw error;
    }
  }

  async close(): Promise<void> {
    await this.#pool.destroy();
  }
}

/** The compiled worker; from sources, the TypeScript one with tsx registered in the thread. */
function workerFile(): {filename: string; execArgv?: string[]} {
  const isSource = import.meta.url.endsWith('.ts');
  const filename = fileURLToPath(
    new URL(isSource ? './worker.ts' : './worker.js', import.meta.url),
  );
  if (!isSource) return {filename};
  // Node 20 loads no TypeScript, and threads do not get --import tsx of the main one.
  const api = createRequire(import.meta.url)
    .resolve('tsx/esm/api')
    .replace(/cjs$/, 'mjs');
  const script = `import {register} from ${JSON.stringify(pathToFileURL(api).href)}; register();`;
  return {filename, execArgv: ['--import', `data:text/javascript,${encodeURIComponent(script)}`]};
}
