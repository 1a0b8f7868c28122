import {threadId} from 'node:worker_threads';

import {ServiceError} from '../errors.ts';
import {kernelMemory, STATIC_BYTES, type KernelMemory} from './kernels/load.ts';
import type {Memory} from './memory.ts';

/** What threads are given of a heap. */
export interface SharedHeap {
  readonly memory: KernelMemory;
  readonly table: Int32Array;
}

/** [bytes] Sizes and places are counted in lines of the cache, so that they fit the table. */
const LINE = 64;
const NUMBER = Float64Array.BYTES_PER_ELEMENT;

// The table: the lock, how far memory was ever handed out, the end of the entries that were ever
// used, and the entries: tag (0: none), first line, and the line after the last.
const LOCK = 0;
const USED = 1;
const END = 2;
const ENTRIES = 3;
const ENTRY = 3;
const MOST_ENTRIES = 4096;

/** @param bytes of address space; fewer if they cannot be had */
export function createHeap(bytes: number, memory = kernelMemory(bytes)): SharedHeap {
  const table = new Int32Array(new SharedArrayBuffer(4 * (ENTRIES + ENTRY * MOST_ENTRIES)));
  table[USED] = STATIC_BYTES / LINE;
  table[END] = ENTRIES;
  return {memory, table};
}

/**
 * One memory for all threads and the kernels. What is allocated has the tag of a call and is given
 * back by that tag all at once, whatever became of the call.
 *
 * An entry counts from the moment that its tag is written, the last thing an allocation does to the
 * table, and no longer once the tag is 0. So releasing needs no lock, and a thread that dies while
 * it holds the lock leaves the table in order.
 */
export class Heap {
  readonly shared: SharedHeap;
  readonly #table: Int32Array;
  readonly #numbers: Float64Array;

  constructor(shared: SharedHeap) {
    this.shared = shared;
    this.#table = shared.table;
    this.#numbers = new Float64Array(shared.memory.buffer);
  }

  get memory(): KernelMemory {
    return this.shared.memory;
  }

  /** [bytes] */
  get capacity(): number {
    return this.memory.buffer.byteLength;
  }

  /** [bytes] handed out to calls at the moment; what is kept from call to call has tags below 0 */
  get allocated(): number {
    let lines = 0;
    this.#forEach((tag, start, end) => (lines += tag > 0 ? end - start : 0));
    return LINE * lines;
  }

  /**
   * Memory of zeros.
   *
   * @param tag of a call, not 0
   * @returns where it begins [bytes], a multiple of 64
   * @throws ServiceError overloaded, if there is not enough in one piece
   */
  allocate(tag: number, bytes: number): number {
    const lines = Math.max(1, Math.ceil(bytes / LINE));
    const table = this.#table;
    this.#lock();
    let start: number;
    let used: number;
    try {
      start = this.#findGap(lines);
      const entry = this.#findEntry();
      if (entry >= table.length || LINE * (start + lines) > this.capacity) throw full();
      if (entry >= table[END]) table[END] = entry + ENTRY;
      used = table[USED];
      table[USED] = Math.max(used, start + lines);
      table[entry + 1] = start;
      table[entry + 2] = start + lines;
      Atomics.store(table, entry, tag);
    } finally {
      this.#unlock();
    }
    // What lies beyond was never written and is zero.
    const dirty = Math.min(start + lines, used);
    if (dirty > start) this.#numbers.fill(0, (start * LINE) / NUMBER, (dirty * LINE) / NUMBER);
    return LINE * start;
  }

  /** Gives back all that was allocated under a tag; no thread may use it any more. */
  release(tag: number): void {
    const table = this.#table;
    for (let entry = ENTRIES; entry < table[END]; entry += ENTRY) {
      Atomics.compareExchange(table, entry, tag, 0);
    }
  }

  /** Opens the lock if a thread that is no more has left it closed. */
  recover(living: readonly number[]): void {
    const holder = Atomics.load(this.#table, LOCK);
    if (holder === 0 || living.includes(holder - 1)) return;
    Atomics.compareExchange(this.#table, LOCK, holder, 0);
    Atomics.notify(this.#table, LOCK);
  }

  /** Memory for what belongs to a call. */
  memoryOf(tag: number): Memory {
    const give = (length: number): Float64Array => {
      const start = this.allocate(tag, NUMBER * length) / NUMBER;
      return this.#numbers.subarray(start, start + length);
    };
    return Object.assign(give, {addressOf: (values: Float64Array) => values.byteOffset});
  }

  /** The first line after which `lines` lines are free: entries come in no order. */
  #findGap(lines: number): number {
    let start = STATIC_BYTES / LINE;
    for (let isMoved = true; isMoved;) {
      isMoved = false;
      this.#forEach((_tag, from, to) => {
        if (from >= start + lines || to <= start) return;
        start = to;
        isMoved = true;
      });
    }
    return start;
  }

  #findEntry(): number {
    const table = this.#table;
    let entry = ENTRIES;
    while (entry < table[END] && Atomics.load(table, entry) !== 0) entry += ENTRY;
    return entry;
  }

  #forEach(visit: (tag: number, start: number, end: number) => void): void {
    const table = this.#table;
    for (let entry = ENTRIES; entry < table[END]; entry += ENTRY) {
      const tag = Atomics.load(table, entry);
      if (tag !== 0) visit(tag, table[entry + 1], table[entry + 2]);
    }
  }

  /** Held for microseconds; the thread that holds it is noted for `recover`. */
  #lock(): void {
    for (;;) {
      const holder = Atomics.compareExchange(this.#table, LOCK, 0, threadId + 1);
      if (holder === 0) return;
      Atomics.wait(this.#table, LOCK, holder);
    }
  }

  #unlock(): void {
    Atomics.store(this.#table, LOCK, 0);
    Atomics.notify(this.#table, LOCK, 1);
  }
}

const full = (): ServiceError =>
  new ServiceError(
    'overloaded',
    'The memory that calls are computed in is full; try again in a moment.',
    {retryAfter: 1},
  );
