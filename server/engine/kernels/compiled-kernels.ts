import type {ChargeColumns} from '../sources/charge-columns.ts';
import type {SumKernel, SumKernels} from './sum-kernels.ts';
import type {TargetBatch} from './target-batch.ts';

/** A kernel of assembly/direct.ts: addresses in bytes, stride and capacity in numbers. */
type CompiledKernel = (
  charges: number,
  stride: number,
  from: number,
  to: number,
  batch: number,
  capacity: number,
  first: number,
  last: number,
) => void;

export type DirectExports = Readonly<Record<keyof SumKernels, CompiledKernel>>;

/** The kernels of WebAssembly, for charges and batches that lie in the heap. */
export function compiledKernels(exports: DirectExports): SumKernels {
  return {
    potential: onHeap(exports.potential),
    field: onHeap(exports.field),
    fieldGradient: onHeap(exports.fieldGradient),
    fieldErrors: onHeap(exports.fieldErrors),
    magnitudes: onHeap(exports.magnitudes),
  };
}

const onHeap =
  (kernel: CompiledKernel): SumKernel =>
  (charges, from, to, batch, first, last) =>
    kernel(
      addressOf(charges),
      charges.stride,
      from,
      to,
      addressOf(batch),
      batch.capacity,
      first,
      last,
    );

function addressOf({address}: ChargeColumns | TargetBatch): number {
  if (address === undefined) throw new RangeError('expected numbers in the heap');
  return address;
}
