/** Gives zeros. */
export type Memory = (length: number) => Float64Array;

/** Zeros that all threads can read and write. */
export const sharedMemory: Memory = length =>
  new Float64Array(new SharedArrayBuffer(length * Float64Array.BYTES_PER_ELEMENT));

/** Zeros of this thread: several times quicker to get, for calls that never leave it. */
export const ownMemory: Memory = length => new Float64Array(length);
