import type {Heap} from '../heap.ts';
import type {Memory} from '../memory.ts';

/** Memory of one call or one kept form, in views that kernels can be given by address. */
export class Arena {
  readonly #heap: Heap;
  readonly #tag: number;
  #bytes = 0;

  constructor(heap: Heap, tag: number) {
    this.#heap = heap;
    this.#tag = tag;
  }

  /** [bytes] that were taken. */
  get bytes(): number {
    return this.#bytes;
  }

  /** @returns address; zeros lie there */
  take(bytes: number): number {
    this.#bytes += bytes;
    return this.#heap.allocate(this.#tag, bytes);
  }

  doubles(length: number): Float64Array {
    return new Float64Array(this.#heap.memory.buffer, this.take(8 * length), length);
  }

  integers(length: number): Int32Array {
    return new Int32Array(this.#heap.memory.buffer, this.take(4 * length), length);
  }

  flags(length: number): Uint8Array {
    return new Uint8Array(this.#heap.memory.buffer, this.take(length), length);
  }

  singles(length: number): Float32Array {
    return new Float32Array(this.#heap.memory.buffer, this.take(4 * length), length);
  }

  /** A copy of whole numbers. */
  keep(values: ArrayLike<number>): Int32Array {
    const out = this.integers(values.length);
    out.set(values);
    return out;
  }

  /** For what only takes doubles. */
  get memory(): Memory {
    const give = (length: number): Float64Array => this.doubles(length);
    return Object.assign(give, {addressOf: (values: Float64Array) => values.byteOffset});
  }

  get buffer(): SharedArrayBuffer {
    return this.#heap.memory.buffer;
  }
}
