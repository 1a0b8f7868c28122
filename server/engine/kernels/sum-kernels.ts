import type {ChargeColumns} from '../sources/charge-columns.ts';
import type {TargetBatch} from './target-batch.ts';

/** Adds what the charges `from` … `to` − 1 do to the targets `first` … `last` − 1 of a batch. */
export type SumKernel = (
  charges: ChargeColumns,
  from: number,
  to: number,
  batch: TargetBatch,
  first: number,
  last: number,
) => void;

/** The kernels of a direct sum: three for sums, two for their bounds. */
export interface SumKernels {
  readonly potential: SumKernel;
  readonly field: SumKernel;
  readonly fieldGradient: SumKernel;
  readonly fieldErrors: SumKernel;
  readonly magnitudes: SumKernel;
}
