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

type PairKernel = 'potential' | 'field' | 'fieldGradient' | 'fieldErrors' | 'magnitudes';

export type DirectExports = Readonly<Record<PairKernel, CompiledKernel>> & {
  readonly clear: (address: number, bytes: number) => void;
  readonly finish: (
    batch: number,
    capacity: number,
    columns: number,
    first: number,
    last: number,
  ) => void;
};

const NUMBER = Float64Array.BYTES_PER_ELEMENT;

/** The kernels of WebAssembly, for charges and batches that lie in the heap. */
export function compiledKernels(exports: DirectExports): SumKernels {
  return {
    clear(batch, at, row, first, last) {
      const start = NUMBER * (at * batch.capacity + row * first);
      exports.clear(addressOf(batch) + start, NUMBER * row * (last - first));
    },
    finish(batch, columns, first, last) {
      exports.finish(addressOf(batch), batch.capacity, columns, first, last);
    },
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
