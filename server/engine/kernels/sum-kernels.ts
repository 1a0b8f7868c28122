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

/** The kernels of a direct sum: three for sums, two for their bounds, and what stands around them. */
export interface SumKernels {
  /** Fills rows with zeros: `row` numbers a target, in the part that begins at `at`. */
  readonly clear: (
    batch: TargetBatch,
    at: number,
    row: number,
    first: number,
    last: number,
  ) => void;
  /** Adds sums and their carried errors, into the first `columns` columns of results. */
  readonly finish: (batch: TargetBatch, columns: number, first: number, last: number) => void;
  readonly potential: SumKernel;
  readonly field: SumKernel;
  readonly fieldGradient: SumKernel;
  readonly fieldErrors: SumKernel;
  readonly magnitudes: SumKernel;
}
