/** Gives zeros. */
export interface Memory {
  (length: number): Float64Array;
  /** [bytes] Where numbers that it gave lie in the heap, which kernels need to know. */
  readonly addressOf: (values: Float64Array) => number | undefined;
}

const NOWHERE = {addressOf: () => undefined};

/** Zeros that all threads can read and write. */
export const sharedMemory: Memory = Object.assign(
  (length: number) =>
    new Float64Array(new SharedArrayBuffer(length * Float64Array.BYTES_PER_ELEMENT)),
  NOWHERE,
);

/** Zeros of this thread: several times quicker to get, for calls that never leave it. */
export const ownMemory: Memory = Object.assign(
  (length: number) => new Float64Array(length),
  NOWHERE,
);
