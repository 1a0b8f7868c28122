import {workerData} from 'node:worker_threads';
import {move, transferableSymbol, valueSymbol} from 'piscina';

import {ServiceError} from '../errors.ts';
import {computeBlock, writeAnswer} from './evaluate.ts';
import {Forms, type KnownForms} from './forms.ts';
import {Heap} from './heap.ts';
import {housedCall} from './housed-call.ts';
import type {Stop} from './jobs.ts';
import {compiledKernels} from './kernels/compiled-kernels.ts';
import {instantiate} from './kernels/load.ts';
import {ownMemory, sharedMemory} from './memory.ts';
import {Arena} from './multipole/arena.ts';
import {SCRATCH} from './multipole/kernels.ts';
import {advance} from './multipole/run.ts';
import type {MultipoleStation} from './multipole/tools.ts';
import {pack} from './pack.ts';
import {runWhole} from './run-call.ts';
import type {Task, TaskResponse, TaskResults, WrittenAnswer} from './tasks.ts';
import type {ThreadData} from './threads.ts';
import type {Workplace} from './workplace.ts';

const {heap: sharedHeap, kernels, formTags} = workerData as ThreadData;
const heap = new Heap(sharedHeap);
const kernelExports = kernels && instantiate(kernels, heap.memory);
const compiled = kernelExports && compiledKernels(kernelExports);

/** Tags of forms are below 0, those of calls above. */
const newFormTag = (): number => -1 - Atomics.add(formTags, 0, 1);

let station: MultipoleStation | undefined;

/** Kernels of the multipole method, with memory that is taken once. */
function multipoleStation(): MultipoleStation | undefined {
  if (!station && kernelExports) {
    station = {exports: kernelExports, scratch: heap.allocate(newFormTag(), SCRATCH)};
  }
  return station;
}

function workplaceOf(tag: number): Workplace {
  return {
    memory: heap.memoryOf(tag),
    ...(compiled && {compiled}),
    ...(station && {multipole: station}),
  };
}

/** Lets a step use forms; what it made is given back if it fails. */
function withForms<T>(known: KnownForms, step: (forms: Forms) => T): T {
  const forms = new Forms(known, heap, newFormTag);
  try {
    return step(forms);
  } catch (error) {
    // Goes on to who asked.
    forms.discard();
    throw error;
  }
}

/** Does one task of a thread. Refusals are results; anything else thrown is a bug. */
export default async function work(task: Task): Promise<TaskResponse> {
  try {
    const result = await resultOf(task);
    return result && 'bytes' in result ? withMovedBytes(result) : {result};
  } catch (error) {
    // A refusal of the request; bugs go up.
    if (!(error instanceof ServiceError)) throw error;
    const {code, message, errors, errorCount, retryAfter} = error;
    return {refusal: {code, message, errors, errorCount, retryAfter}};
  }
}

async function resultOf(task: Task): Promise<TaskResults[Task['type']]> {
  switch (task.type) {
    case 'prepare': {
      // Threads that never read a body need no contract.
      const {planBody} = await import('./prepare.ts');
      const plan = planBody(task.operation, task.bytes, task.limits);
      if (task.operation === 'estimates') return {plan: withoutRequest(plan)};
      // In the heap only once it runs, which not all calls do.
      const memory = plan.route === 'inline' ? ownMemory : sharedMemory;
      return withForms(task.forms, forms => {
        const call = pack(plan, memory, forms);
        return {plan: withoutRequest(plan), call, forms: forms.report};
      });
    }
    case 'warm': {
      const {compileChecks} = await import('./prepare.ts');
      compileChecks();
      return undefined;
    }
    case 'pack':
      return withForms(task.forms, forms => {
        const memory = heap.memoryOf(task.tag);
        const call = task.call ? housedCall(task.call, memory) : pack(task.plan, memory, forms);
        return {call, forms: forms.report};
      });
    case 'advance':
      return withForms(task.forms, forms => {
        const own = multipoleStation();
        if (!own) throw new RangeError('expected kernels');
        const arena = new Arena(heap, task.tag);
        const spareTag = newFormTag();
        const spare = new Arena(heap, spareTag);
        const stop = stopOf(task.flag);
        try {
          const job = advance(task.job, {...own, arena, spare, forms, stop});
          return {job, forms: forms.report};
        } finally {
          heap.release(spareTag);
        }
      });
    case 'block':
      if (task.job.kind === 'multipole') multipoleStation();
      return computeBlock(task.job, task.block, stopOf(task.flag), workplaceOf(task.tag));
    case 'answer': {
      const {header, job, reports, timing} = task;
      const workplace = workplaceOf(task.tag);
      const stop = stopOf(task.flag);
      return {bytes: writeAnswer(header, job, reports, timing, stop, workplace), timing};
    }
    case 'whole':
      return runWhole(
        task.plan,
        task.call,
        task.queuedMilliseconds,
        stopOf(task.flag),
        workplaceOf(task.tag),
      );
  }
}

const stopOf =
  (flag: Int32Array): Stop =>
  () =>
    Atomics.load(flag, 0) !== 0;

type Plan = TaskResults['prepare']['plan'];

/** The columns are packed and must not travel again; the options stay for the estimate. */
function withoutRequest(plan: Plan): Plan {
  const {accuracy, quantities, units} = plan.request;
  const request = {
    bodies: [],
    units,
    ...(accuracy && {accuracy}),
    ...(quantities && {quantities}),
  };
  return {...plan, request};
}

/** Bytes are moved, not copied; small ones lie in a pool of Node's and are copied out first. */
function withMovedBytes({bytes, timing}: WrittenAnswer): TaskResponse {
  if (!bytes) return {result: {bytes, timing}};
  const own = bytes.byteLength === bytes.buffer.byteLength ? bytes : new Uint8Array(bytes);
  const response: TaskResponse = {result: {bytes: own, timing}};
  // What piscina takes for a result of which a part is to be moved.
  const moved = {[transferableSymbol]: own.buffer, [valueSymbol]: response};
  return move(moved) as unknown as TaskResponse;
}
