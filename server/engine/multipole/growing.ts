const CHUNK_BITS = 16;
const CHUNK = 1 << CHUNK_BITS;
const IN_CHUNK = CHUNK - 1;

/** Numbers, as many as come: in chunks, so that growing copies nothing. */
abstract class Growing<T extends Int32Array | Float64Array> {
  readonly #chunks: T[] = [];
  #length = 0;

  protected abstract makeChunk(length: number): T;

  get length(): number {
    return this.#length;
  }

  push(value: number): void {
    if ((this.#length & IN_CHUNK) === 0) this.#chunks.push(this.makeChunk(CHUNK));
    this.#chunks[this.#length >> CHUNK_BITS][this.#length & IN_CHUNK] = value;
    this.#length++;
  }

  at(index: number): number {
    return this.#chunks[index >> CHUNK_BITS][index & IN_CHUNK];
  }

  set(index: number, value: number): void {
    this.#chunks[index >> CHUNK_BITS][index & IN_CHUNK] = value;
  }

  /** Copies all of them to the beginning of `out`. */
  copyTo<O extends T>(out: O): O {
    this.#chunks.forEach((chunk, n) => {
      const from = n << CHUNK_BITS;
      out.set(chunk.subarray(0, Math.min(CHUNK, this.#length - from)), from);
    });
    return out;
  }
}

export class GrowingIntegers extends Growing<Int32Array> {
  protected makeChunk(length: number): Int32Array {
    return new Int32Array(length);
  }
}

export class GrowingDoubles extends Growing<Float64Array> {
  protected makeChunk(length: number): Float64Array {
    return new Float64Array(length);
  }
}
