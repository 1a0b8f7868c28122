import {afterAll, describe, expect, test} from 'vitest';

import type {Body, FieldAnswer, FieldRequest} from '../../shared/api.ts';
import {Forms, type FormsReport} from '../../server/engine/forms.ts';
import {createHeap, Heap} from '../../server/engine/heap.ts';
import {KeptForms, MOST_FORMS} from '../../server/engine/kept-forms.ts';
import {createEngine, type Engine, type EngineOptions} from '../../server/engine/pool.ts';
import {randomNumbers} from './random.ts';

const KIB = 1024;

describe('kept forms', () => {
  /** A heap with forms of it; `make` is what a task does that needs them, and says what it did. */
  function shop(limit: number) {
    const heap = new Heap(createHeap(2 ** 24));
    const kept = new KeptForms(heap, limit);
    let lastTag = 0;
    let calls = 0;
    const make = (keys: readonly string[], bytes: number, pieces = 1): FormsReport => {
      const forms = new Forms({}, heap, () => --lastTag);
      for (const key of keys) {
        forms.get(key, arena => {
          for (let n = 0; n < pieces; n++) arena.take(bytes / pieces);
          return {key};
        });
      }
      return forms.report;
    };
    /** Free is what one piece can be taken of. */
    const isFree = (bytes: number): boolean => {
      const tag = 1000 + ++calls;
      try {
        heap.allocate(tag, bytes);
        return true;
      } catch {
        // There is no room.
        return false;
      } finally {
        heap.release(tag);
      }
    };
    return {heap, kept, make, isFree};
  }

  test('go when they were used longest ago and there are too many bytes', () => {
    const {kept, make} = shop(300 * KIB);
    const call = (report: FormsReport): void => {
      const hold = kept.hold([]);
      hold.add(report);
      hold.release();
    };
    for (const key of ['a', 'b', 'c']) call(make([key], 100 * KIB));
    call({made: [], used: ['a'], hits: 1, misses: 0});
    call(make(['d'], 100 * KIB));
    expect(Object.keys(kept.hold(['']).known)).toEqual(['c', 'a', 'd']);
    expect(kept.bytes).toBe(300 * KIB);
  });

  test('stay while a call may be using them, however many there are', () => {
    const {kept, make, isFree} = shop(100 * KIB);
    const using = kept.hold([]);
    using.add(make(['a', 'b', 'c'], 5 * KIB * KIB));
    const other = kept.hold(['']);
    expect(Object.keys(other.known)).toEqual(['a', 'b', 'c']);
    using.release();
    expect(kept.count).toBe(3);
    expect(isFree(5 * KIB * KIB)).toBe(false);
    other.release();
    expect(kept.count).toBe(0);
    expect(kept.bytes).toBe(0);
    expect(isFree(5 * KIB * KIB)).toBe(true);
  });

  test('that two calls made at once are kept once, and the other one until its call ends', () => {
    const {kept, make, isFree} = shop(10 * KIB * KIB);
    const [one, two] = [kept.hold([]), kept.hold([])];
    one.add(make(['a'], 7 * KIB * KIB));
    two.add(make(['a'], 7 * KIB * KIB));
    expect(kept.bytes).toBe(7 * KIB * KIB);
    expect(isFree(7 * KIB * KIB)).toBe(false);
    one.release();
    expect(isFree(7 * KIB * KIB)).toBe(false);
    two.release();
    expect(kept.bytes).toBe(7 * KIB * KIB);
    expect(isFree(7 * KIB * KIB)).toBe(true);
  });

  test('are so few that the heap has room for calls, however small they are', () => {
    const {kept, make, isFree} = shop(2 ** 30);
    for (let n = 0; n < 1000; n++) {
      const hold = kept.hold([]);
      hold.add(make([`tree:${n}`], KIB, 12));
      hold.release();
    }
    expect(kept.count).toBe(MOST_FORMS);
    expect(isFree(KIB)).toBe(true);
  });

  test('of a task that failed are given back', () => {
    const heap = new Heap(createHeap(2 ** 24));
    let lastTag = 0;
    const forms = new Forms({}, heap, () => --lastTag);
    forms.get('a', arena => ({address: arena.take(6 * KIB * KIB)}));
    const failing = (): unknown =>
      forms.get('b', arena => {
        arena.take(6 * KIB * KIB);
        throw new Error('a step failed');
      });
    expect(failing).toThrow('a step failed');
    heap.allocate(1, 6 * KIB * KIB);
    heap.release(1);
    forms.discard();
    expect(heap.allocate(2, 15 * KIB * KIB)).toBeGreaterThan(0);
  });
});

const engines: Engine[] = [];
afterAll(() => Promise.all(engines.map(engine => engine.close())));

function startEngine(options: EngineOptions): Engine {
  const engine = createEngine(options);
  engines.push(engine);
  return engine;
}

function columns(count: number, seed: number): Body['charges'] {
  const random = randomNumbers(seed);
  // Of few digits, since most of the time of these calls would be spent on reading them.
  const column = (): number[] =>
    Array.from({length: count}, () => Math.round(1e4 * random() - 5e3) / 1e4);
  return {x: column(), y: column(), z: column(), charge: column()};
}

const fixed = columns(4100, 1);
const moving = columns(4096, 2);
const request = (shift: number, more: Partial<FieldRequest> = {}): FieldRequest => ({
  bodies: [
    {id: 'fixed', charges: fixed},
    {id: 'moving', charges: moving, placement: {translate: [shift, 0.1, 0]}},
  ],
  targets: {
    grid: {
      origin: [-0.4, -0.4, -0.4],
      steps: [
        [0.04, 0, 0],
        [0, 0.04, 0],
        [0, 0, 0.04],
      ],
      counts: [20, 20, 20],
    },
  },
  quantities: ['potential'],
  accuracy: {tolerance: 1e-4},
  ...more,
});

async function answerOf(
  engine: Engine,
  body: FieldRequest,
  signal = new AbortController().signal,
): Promise<FieldAnswer> {
  const prepared = await engine.prepare('fields', Buffer.from(JSON.stringify(body), 'utf8'));
  const {bytes} = await engine.run(prepared, {signal});
  return JSON.parse(Buffer.from(bytes).toString('utf8')) as FieldAnswer;
}

test('a call says what it found of earlier ones, and what it made', async () => {
  const engine = startEngine({threads: 2});
  const prepared = async (body: FieldRequest) => (await answerOf(engine, body)).cost.preparation;
  // Of each of two bodies its columns, its tree and its expansions.
  expect(await prepared(request(0.1))).toEqual({hits: 0, misses: 6});
  expect(await prepared(request(0.1))).toEqual({hits: 6, misses: 0});
  // Moved: columns and trees at least; expansions are of a level, which values decide on.
  const {hits = 0} = (await prepared(request(0.13))) ?? {};
  expect(hits).toBeGreaterThanOrEqual(4);
  // Without a tolerance only the columns are of use.
  expect(await prepared(request(0.1, {accuracy: {}}))).toEqual({hits: 2, misses: 0});
  const [first, second] = request(0.1).bodies;
  const charge = [...fixed.charge];
  charge[77] += 1e-15;
  const changed = {...first, charges: {...fixed, charge}};
  expect(await prepared(request(0.1, {bodies: [changed, second]}))).toEqual({hits: 3, misses: 3});
  const inMillimetres = request(0.1, {units: {length: 'mm'}});
  expect(await prepared(inMillimetres)).toEqual({hits: 0, misses: 6});
  const few = {...request(0.1), bodies: [{charges: columns(900, 3)}]};
  expect(await prepared(few)).toBeUndefined();
});

test('with little room for them answers are the same, and what is kept stays within it', async () => {
  const keptBytes = 2 * KIB * KIB;
  const [large, little] = [
    startEngine({threads: 2}),
    startEngine({threads: 2, limits: {keptBytes}}),
  ];
  for (const shift of [0.1, 0.1, 0.2]) {
    const bodies = [...request(shift).bodies, {id: 'more', charges: columns(4200, 4)}];
    const [one, other] = await Promise.all(
      [large, little].map(engine => answerOf(engine, request(shift, {bodies}))),
    );
    expect(one.accuracy.method).toBe('multipole');
    expect(other.resultDigest).toBe(one.resultDigest);
    expect(little.memory().kept).toBeLessThanOrEqual(keptBytes);
    expect(large.memory().kept).toBeGreaterThan(keptBytes);
  }
});

test('calls at once with one body share it, and give the answers of calls one by one', async () => {
  const engine = startEngine({threads: 2, limits: {keptBytes: 4 * KIB * KIB}});
  const shifts = [0, 0.1, 0.2, 0.3];
  const together = await Promise.all(shifts.map(shift => answerOf(engine, request(shift))));
  for (const [n, shift] of shifts.entries()) {
    const alone = await answerOf(engine, request(shift));
    expect(alone.resultDigest).toBe(together[n].resultDigest);
  }
});

test('200 calls of all kinds, refused and given up ones among them, leave nothing but what is kept', async () => {
  const keptBytes = 2 * KIB * KIB;
  const engine = startEngine({threads: 2, limits: {keptBytes}});
  const random = randomNumbers(6);
  const seeds = [10, 11, 12, 13, 14, 15, 16];
  const bodies = seeds.flatMap((seed, n) => {
    const large = [{charges: columns(4100, seed)}];
    const few = [{charges: columns(1100, seed)}];
    return [
      request(0, {bodies: large}),
      request(0, {bodies: few, accuracy: {}}),
      request(0.01 * n),
      request(0, {bodies: few, accuracy: {}, quantities: ['field']}),
      // Some target is that near to a charge.
      request(0, {bodies: few, onCoincidence: 'reject', coincidenceDistance: 0.02}),
    ];
  });
  const sent = bodies.map(body => Buffer.from(JSON.stringify(body), 'utf8'));
  const outcomes = {answered: 0, refused: 0, aborted: 0};
  const one = async (n: number): Promise<void> => {
    const controller = new AbortController();
    const {signal} = controller;
    const prepared = await engine.prepare('fields', sent[n % sent.length]);
    const timer = n % 3 === 0 && setTimeout(() => controller.abort(), 100 * random());
    try {
      await engine.run(prepared, {signal});
      outcomes.answered++;
    } catch (error) {
      // Refusals and aborts are what this is about.
      if (signal.aborted) outcomes.aborted++;
      else if ((error as {code?: string}).code === 'coincident-target') outcomes.refused++;
      else throw error;
    } finally {
      if (timer) clearTimeout(timer);
    }
  };
  for (let n = 0; n < 200; n += 4) {
    await Promise.all([n, n + 1, n + 2, n + 3].map(one));
  }
  for (const count of Object.values(outcomes)) expect(count).toBeGreaterThan(10);
  // Tasks of calls that were given up may be on their way back.
  await expect.poll(() => engine.memory().allocated).toBe(0);
  expect(engine.memory().kept).toBeLessThanOrEqual(keptBytes);
  expect(engine.load().queued).toBe(0);
});
