import {subscribe, unsubscribe} from 'node:diagnostics_channel';
import type {Worker} from 'node:worker_threads';
import {afterAll, expect, test} from 'vitest';

import type {Operation} from '../../shared/api.ts';
import {ServiceError} from '../../server/errors.ts';
import {createHeap, Heap} from '../../server/engine/heap.ts';
import {instantiate, loadKernels, plainMemory} from '../../server/engine/kernels/load.ts';
import {Lease} from '../../server/engine/lease.ts';
import {createEngine, type Engine, type EngineOptions} from '../../server/engine/pool.ts';
import {randomNumbers} from './random.ts';

const MIB = 2 ** 20;
const PAGE = 65_536;

const newHeap = (): Heap => new Heap(createHeap(16 * MIB));

function codeOf(refused: () => unknown): string | undefined {
  try {
    refused();
  } catch (error) {
    // The refusal that is expected.
    if (error instanceof ServiceError) return error.code;
    throw error;
  }
  return undefined;
}

test('memory begins at full cache lines, above the first page, and overlaps with no other', () => {
  const heap = newHeap();
  const random = randomNumbers(1);
  const taken: [number, number][] = [];
  for (let n = 0; n < 200; n++) {
    const bytes = 1 + Math.floor(20_000 * random());
    const start = heap.allocate(1 + (n % 7), bytes);
    expect(start % 64).toBe(0);
    expect(start).toBeGreaterThanOrEqual(PAGE);
    for (const [from, to] of taken) expect(start >= to || start + bytes <= from).toBe(true);
    taken.push([start, start + bytes]);
  }
});

test('memory is of zeros, also where it was used before', () => {
  const heap = newHeap();
  for (const length of [100, 70, 300, 1]) {
    const values = heap.memoryOf(1)(length);
    expect(values.every(value => value === 0)).toBe(true);
    values.fill(7);
    heap.release(1);
  }
  expect(heap.allocated).toBe(0);
});

test('what is released can be had again, and nothing else is released', () => {
  const heap = newHeap();
  const kept = heap.memoryOf(1)(1000).fill(1);
  heap.allocate(2, 6 * MIB);
  heap.allocate(3, 6 * MIB);
  expect(codeOf(() => heap.allocate(4, 6 * MIB))).toBe('overloaded');
  heap.release(2);
  expect(heap.allocate(4, 6 * MIB)).toBeLessThan(8 * MIB);
  expect(kept.every(value => value === 1)).toBe(true);
});

test('a heap that has no more entries is full, and says so', () => {
  const heap = newHeap();
  const fill = (): void => {
    for (let n = 0; n < 10_000; n++) heap.allocate(1, 1);
  };
  expect(codeOf(fill)).toBe('overloaded');
  heap.release(1);
  expect(heap.allocated).toBe(0);
  heap.allocate(1, 1);
});

test('where kernels can have no memory there is a heap all the same, without them', () => {
  const heap = new Heap(createHeap(16 * MIB, plainMemory(16 * MIB)));
  const module = loadKernels();
  expect(module && instantiate(module, newHeap().memory)).toBeDefined();
  expect(module && instantiate(module, heap.memory)).toBeUndefined();
  expect(heap.memoryOf(1)(1000).fill(1).byteOffset).toBe(PAGE);
});

test('a lock that a dead thread left closed is opened, and one that a living thread holds is not', () => {
  const shared = createHeap(16 * MIB);
  const heap = new Heap(shared);
  const [DEAD, LIVING] = [41, 42];
  shared.table[0] = LIVING + 1;
  heap.recover([0, LIVING]);
  expect(shared.table[0]).toBe(LIVING + 1);
  shared.table[0] = DEAD + 1;
  heap.recover([0, LIVING]);
  expect(heap.allocate(1, 64)).toBe(PAGE);
});

test('the memory of a call is given back once it has ended and its tasks are back, not before', async () => {
  const events: string[] = [];
  const lease = new Lease(() => events.push('given back'));
  let finish = (): void => undefined;
  const task = lease.during(() => new Promise<void>(done => (finish = done)));
  await lease.during(async () => Promise.resolve());
  lease.end();
  expect(events).toEqual([]);
  finish();
  await task;
  expect(events).toEqual(['given back']);
  const failing = new Lease(() => events.push('after a failure'));
  await expect(failing.during(() => Promise.reject(new Error('a bug')))).rejects.toThrow('a bug');
  expect(events).toEqual(['given back']);
  failing.end();
  expect(events).toEqual(['given back', 'after a failure']);
});

const engines: Engine[] = [];
afterAll(() => Promise.all(engines.map(engine => engine.close())));

function startEngine(options: EngineOptions): Engine {
  const engine = createEngine(options);
  engines.push(engine);
  return engine;
}

function charges(count: number, seed = 1) {
  const random = randomNumbers(seed);
  const column = (): number[] => Array.from({length: count}, () => random() - 0.5);
  return {x: column(), y: column(), z: column(), charge: column()};
}

function points(count: number, seed: number) {
  const {x, y, z} = charges(count, seed);
  return {points: {x, y, z}};
}

/** Small ones are one task, large ones several blocks. */
const small = (seed: number) => ({
  bodies: [{charges: charges(300, seed)}],
  targets: points(200, seed + 1),
});
const large = (seed: number) => ({
  bodies: [{charges: charges(3000, seed)}],
  targets: points(3500, seed + 1),
});
const refused = {
  bodies: [{charges: charges(600)}],
  targets: points(600, 1),
  onCoincidence: 'reject',
};
const forces = {bodies: [{charges: charges(250, 2)}, {charges: charges(250, 3)}]};

async function run(
  engine: Engine,
  operation: Operation,
  request: unknown,
  signal = new AbortController().signal,
): Promise<string> {
  const prepared = await engine.prepare(operation, Buffer.from(JSON.stringify(request), 'utf8'));
  expect(prepared.route).toBe('worker');
  const {bytes} = await engine.run(prepared, {signal});
  return Buffer.from(bytes)
    .toString('utf8')
    .replace(/"cost":\{[^}]*\}/, '');
}

test('after 1,000 calls of all kinds and ends no memory is held, and no answer was written over', async () => {
  const engine = startEngine({threads: 2});
  const expected = await run(engine, 'fields', large(5));
  const expectedSmall = await run(engine, 'fields', small(5));
  const ends = {answered: 0, aborted: 0, refused: 0};
  const random = randomNumbers(3);
  const one = async (n: number): Promise<void> => {
    const kind = n % 5;
    if (kind === 0) expect(await run(engine, 'fields', small(5))).toBe(expectedSmall);
    if (kind === 1) expect(await run(engine, 'fields', large(5))).toBe(expected);
    if (kind === 2) await run(engine, 'forces', forces);
    if (kind < 3) ends.answered++;
    if (kind === 3) {
      await expect(run(engine, 'fields', refused)).rejects.toThrow(/lies on charge/);
      ends.refused++;
    }
    if (kind === 4) {
      const controller = new AbortController();
      setTimeout(() => controller.abort(new Error('gone')), 40 * random());
      await run(engine, 'fields', large(n), controller.signal).then(
        () => ends.answered++,
        () => ends.aborted++,
      );
    }
  };
  for (let wave = 0; wave < 40; wave++) {
    await Promise.all(Array.from({length: 25}, (_, n) => one(25 * wave + n)));
  }
  expect(ends.answered + ends.aborted + ends.refused).toBe(1000);
  expect(ends.refused).toBe(200);
  expect(ends.aborted).toBeGreaterThan(50);
  await expect.poll(() => engine.memory().allocated).toBe(0);
}, 120_000);

test('a call that does not fit the heap is refused as overloaded, and holds nothing', async () => {
  const engine = startEngine({threads: 1, limits: {heapBytes: 16 * MIB}});
  const request = {
    bodies: [{charges: charges(10)}],
    targets: {
      grid: {
        origin: [1, 1, 1],
        steps: [
          [1, 0, 0],
          [0, 1, 0],
          [0, 0, 1],
        ],
        counts: [100, 100, 20],
      },
    },
    quantities: ['potential', 'field', 'fieldGradient'],
    accuracy: {bounds: true},
  };
  const error: unknown = await run(engine, 'fields', request).catch((reason: unknown) => reason);
  expect(error).toBeInstanceOf(ServiceError);
  expect(error).toMatchObject({code: 'overloaded', retryAfter: 1});
  await expect.poll(() => engine.memory().allocated).toBe(0);
  await run(engine, 'fields', small(1));
});

test('a call that takes too long gives its memory back', async () => {
  const engine = startEngine({threads: 1, limits: {computeMilliseconds: 30}});
  const request = {bodies: [{charges: charges(20_000)}], targets: points(10_000, 2)};
  await expect(run(engine, 'fields', request)).rejects.toThrow(/did not end within/);
  await expect.poll(() => engine.memory().allocated).toBe(0);
});

test('a thread that dies takes no memory with it, and the next call is computed', async () => {
  const workers: Worker[] = [];
  const note = (message: unknown): void => {
    workers.push((message as {worker: Worker}).worker);
  };
  subscribe('worker_threads', note);
  try {
    const engine = startEngine({threads: 1});
    const expected = await run(engine, 'fields', small(9));
    const request = {bodies: [{charges: charges(20_000)}], targets: points(10_000, 2)};
    const running = run(engine, 'fields', request).catch((reason: unknown) => reason);
    await expect.poll(() => engine.memory().allocated).toBeGreaterThan(1e6);
    expect(workers.length).toBe(1);
    await workers[0].terminate();
    expect(await running).toBeInstanceOf(Error);
    await expect.poll(() => engine.memory().allocated).toBe(0);
    expect(await run(engine, 'fields', small(9))).toBe(expected);
    expect(workers.length).toBe(2);
  } finally {
    unsubscribe('worker_threads', note);
  }
});

test('without compiled kernels an engine gives the same bits', async () => {
  const compiled = startEngine({threads: 1});
  const plain = startEngine({threads: 1, kernels: null});
  for (const [operation, request] of [
    ['fields', {...large(7), accuracy: {bounds: true}}],
    ['fields', {...small(7), quantities: ['fieldGradient'], accuracy: {bounds: true}}],
    ['potentials', large(8)],
    ['forces', {...forces, accuracy: {bounds: true}, include: ['internalEnergy']}],
  ] as const) {
    expect(await run(plain, operation, request)).toBe(await run(compiled, operation, request));
  }
});
