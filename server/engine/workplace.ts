import type {SumKernels} from './kernels/sum-kernels.ts';
import {ownMemory, type Memory} from './memory.ts';
import type {MultipoleStation} from './multipole/tools.ts';

/** Where and with what a thread computes. */
export interface Workplace {
  /** For what is needed while computing. */
  readonly memory: Memory;
  /** Kernels for charges and batches that lie in the heap, where there are such kernels. */
  readonly compiled?: SumKernels;
  readonly multipole?: MultipoleStation;
}

/** That of a thread without a heap, for calls that never leave it. */
export const ownWorkplace: Workplace = {memory: ownMemory};
