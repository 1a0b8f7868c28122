import {workerData} from 'node:worker_threads';
import {move, transferableSymbol, valueSymbol} from 'piscina';

import {ServiceError} from '../errors.ts';
import {computeBlock, writeAnswer} from './evaluate.ts';
import {Heap} from './heap.ts';
import {housedCall} from './housed-call.ts';
import type {Stop} from './jobs.ts';
import {compiledKernels} from './kernels/compiled-kernels.ts';
import {instantiate} from './kernels/load.ts';
import {ownMemory, sharedMemory} from './memory.ts';
import {pack} from './pack.ts';
import {runWhole} from './run-call.ts';
import type {Task, TaskResponse, TaskResults, WrittenAnswer} from './tasks.ts';
import type {ThreadData} from './threads.ts';
import type {Workplace} from './workplace.ts';

const {heap: sharedHeap, kernels} = workerData as ThreadData;
const heap = new Heap(sharedHeap);
const kernelExports = kernels && instantiate(kernels, heap.memory);
const compiled = kernelExports && compiledKernels(kernelExports);

const workplaceOf = (tag: number): Workplace => ({
  memory: heap.memoryOf(tag),
  ...(compiled && {compiled}),
});

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
      return {plan: withoutRequest(plan), call: pack(plan, memory)};
    }
    case 'warm': {
      const {compileChecks} = await import('./prepare.ts');
      compileChecks();
      return undefined;
    }
    case 'pack':
      return task.call
        ? housedCall(task.call, heap.memoryOf(task.tag))
        : pack(task.plan, heap.memoryOf(task.tag));
    case 'block':
      return computeBlock(task.job, task.block, stopOf(task.flag), workplaceOf(task.tag));
    case 'answer': {
      const {header, job, reports, timing} = task;
      return {bytes: writeAnswer(header, job, reports, timing, stopOf(task.flag)), timing};
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
