import type {Memory} from '../memory.ts';
import {BATCH_PARTS, SPARE} from './layout.ts';

/**
 * Targets that are summed together, with their positions, sums and bounds; layout.ts says where
 * each of them lies in `values`.
 */
export interface TargetBatch {
  readonly capacity: number;
  readonly values: Float64Array;
  /** [bytes] where `values` lies in the heap; undefined elsewhere */
  readonly address: number | undefined;
}

export function targetBatch(capacity: number, memory: Memory): TargetBatch {
  const values = memory(BATCH_PARTS * capacity + SPARE);
  return {capacity, values, address: memory.addressOf(values)};
}

/** One of the columns at the beginning of a batch. */
export const batchColumn = ({values, capacity}: TargetBatch, column: number): Float64Array =>
  values.subarray(column * capacity, (column + 1) * capacity);
