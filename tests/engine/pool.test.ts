import {afterAll, expect, test} from 'vitest';

import type {FieldAnswer, Operation} from '../../shared/api.ts';
import {ServiceError} from '../../server/errors.ts';
import {createEngine, type Engine, type EngineOptions} from '../../server/engine/pool.ts';
import {randomNumbers} from './random.ts';

const engines: Engine[] = [];
afterAll(() => Promise.all(engines.map(engine => engine.close())));

function startEngine(options: EngineOptions): Engine {
  const engine = createEngine(options);
  engines.push(engine);
  return engine;
}

// Threads take a second to start from sources, so most tests share these.
const oneThread = startEngine({threads: 1});
const twoThreads = startEngine({threads: 2});

const bytesOf = (value: unknown): Uint8Array => Buffer.from(JSON.stringify(value), 'utf8');
const textOf = (bytes: Uint8Array): string => Buffer.from(bytes).toString('utf8');
const unwatched = (): AbortSignal => new AbortController().signal;

function charges(count: number, seed = 1) {
  const random = randomNumbers(seed);
  const column = (): number[] => Array.from({length: count}, () => random() - 0.5);
  return {x: column(), y: column(), z: column(), charge: column()};
}

const grid = (nx: number, ny: number) => ({
  grid: {
    origin: [-1, -1, 0.7],
    steps: [
      [2 / nx, 0, 0],
      [0, 2 / ny, 0],
      [0, 0, 0],
    ],
    counts: [nx, ny, 1],
  },
});

async function answerOf(engine: Engine, operation: Operation, request: unknown): Promise<string> {
  const prepared = await engine.prepare(operation, bytesOf(request));
  const {bytes} = await engine.run(prepared, {signal: unwatched()});
  return textOf(bytes);
}

/** An answer without what it took. */
const withoutCost = (text: string): string => text.replace(/"cost":\{[^}]*\}/, '"cost":{}');

/** The refusal of a call. */
async function refusalOf(call: () => unknown): Promise<ServiceError> {
  try {
    await call();
  } catch (error) {
    // The refusal that is expected.
    if (error instanceof ServiceError) return error;
    throw error;
  }
  throw new Error('expected a refusal');
}

const everything = {
  bodies: [{id: 'cloud', charges: charges(3000)}],
  targets: grid(60, 40),
  quantities: ['potential', 'field', 'magnitude', 'fieldGradient'],
  accuracy: {bounds: true},
};
const assembly = {
  bodies: [
    {id: 'one', charges: charges(900, 2)},
    {id: 'two', charges: charges(700, 3), placement: {translate: [3, 0, 0]}},
    {id: 'three', charges: charges(5, 4), placement: {translate: [0, 3, 0]}},
  ],
  probes: charges(7, 5),
  include: ['charges', 'internalEnergy'],
  accuracy: {bounds: true},
};

test('one, two and three threads give the same bits', async () => {
  const answers: string[][] = [];
  for (const engine of [oneThread, twoThreads, startEngine({threads: 3})]) {
    answers.push([
      withoutCost(await answerOf(engine, 'fields', everything)),
      withoutCost(await answerOf(engine, 'forces', assembly)),
    ]);
  }
  expect(answers[0][0].length).toBeGreaterThan(100_000);
  expect(answers[1]).toEqual(answers[0]);
  expect(answers[2]).toEqual(answers[0]);
});

test('a call computed inline and in a thread gives the same bits, however the threads get it', async () => {
  const request = {
    bodies: [{charges: charges(15)}],
    targets: grid(20, 20),
    accuracy: {bounds: true},
  };
  const engine = twoThreads;
  const prepared = await engine.prepare('fields', bytesOf(request));
  expect(prepared.route).toBe('inline');
  const inline = withoutCost(textOf(engine.runInline(prepared).bytes));
  const threaded = withoutCost(textOf((await engine.run(prepared, {signal: unwatched()})).bytes));
  expect(threaded).toBe(inline);
  const remote = startEngine({threads: 1, limits: {inlineBytes: 10}});
  expect(withoutCost(await answerOf(remote, 'fields', request))).toBe(inline);
});

test('bounds are free of charge in bits too: asking for them changes no value', async () => {
  const engine = twoThreads;
  const request = {bodies: [{charges: charges(500)}], targets: grid(30, 30)};
  const plain = JSON.parse(await answerOf(engine, 'fields', request)) as FieldAnswer;
  const withBounds = {...request, accuracy: {bounds: true}};
  const bounded = JSON.parse(await answerOf(engine, 'fields', withBounds)) as FieldAnswer;
  expect(bounded.columns.potential).toEqual(plain.columns.potential);
  expect(bounded.columns.fieldX).toEqual(plain.columns.fieldX);
  expect(bounded.columns.potentialBound?.length).toBe(900);
});

test('large bodies are read by a thread, and refused with the same words and pointers', async () => {
  const engine = oneThread;
  const bodies = [{charges: charges(3000)}];
  const targets = {points: {x: [2, 3], y: [2], z: [2, 3]}};
  const large = bytesOf({bodies, targets});
  expect(large.length).toBeGreaterThan(64 * 1024);
  const refusal = await refusalOf(() => engine.prepare('fields', large));
  expect(refusal.code).toBe('unequal-columns');
  expect(refusal.errors[0].pointer).toBe('/targets/points/y');
  const small = await refusalOf(() =>
    engine.prepare('fields', bytesOf({bodies: [{charges: charges(3)}], targets})),
  );
  expect(small.message).toBe(refusal.message);
  // The caller's own bytes are still there.
  expect(large.length).toBeGreaterThan(64 * 1024);
});

// A figure of the service, measured on a machine that others use too: it may be tried again.
test(
  'a call stops within 250 ms once its client has gone, and the threads are free again',
  {retry: 3},
  async () => {
    const engine = twoThreads;
    const request = {bodies: [{charges: charges(20_000)}], targets: grid(120, 120)};
    const prepared = await engine.prepare('fields', bytesOf(request));
    const controller = new AbortController();
    const running = engine.run(prepared, {signal: controller.signal});
    await new Promise(resolve => setTimeout(resolve, 150));
    expect(engine.load().queued).toBe(1);
    const gone = performance.now();
    controller.abort(new Error('the client has gone'));
    await expect(running).rejects.toThrow('the client has gone');
    // The next call needs a thread, so it shows when they are free.
    await answerOf(engine, 'fields', {bodies: [{charges: charges(600)}], targets: grid(30, 30)});
    expect(performance.now() - gone).toBeLessThan(250);
    expect(engine.load().queued).toBe(0);
  },
);

test('a call whose client has gone before it starts is not computed', async () => {
  const engine = oneThread;
  const prepared = await engine.prepare('fields', bytesOf(everything));
  const signal = AbortSignal.abort(new Error('gone already'));
  await expect(engine.run(prepared, {signal})).rejects.toThrow('gone already');
  expect(engine.load().queued).toBe(0);
});

test('a small call does not wait for a large one to end', async () => {
  const engine = oneThread;
  const large = {bodies: [{charges: charges(20_000)}], targets: grid(100, 100)};
  const prepared = await engine.prepare('fields', bytesOf(large));
  let isDone = false;
  const controller = new AbortController();
  const running = engine.run(prepared, {signal: controller.signal}).then(
    () => (isDone = true),
    () => undefined,
  );
  await new Promise(resolve => setTimeout(resolve, 100));
  await answerOf(engine, 'fields', {bodies: [{charges: charges(600)}], targets: grid(30, 30)});
  expect(isDone).toBe(false);
  controller.abort();
  await running;
});

test('a call that takes too long is stopped', async () => {
  const engine = startEngine({threads: 1, limits: {computeMilliseconds: 60}});
  const request = {bodies: [{charges: charges(20_000)}], targets: grid(100, 100)};
  const prepared = await engine.prepare('fields', bytesOf(request));
  const refusal = await refusalOf(() => engine.run(prepared, {signal: unwatched()}));
  expect(refusal.code).toBe('time-out');
});

test('more calls than the queue holds are refused as overloaded', async () => {
  const engine = startEngine({threads: 1, maxQueue: 2});
  const prepared = await engine.prepare(
    'fields',
    bytesOf({bodies: [{charges: charges(600)}], targets: grid(30, 30)}),
  );
  const run = () => engine.run(prepared, {signal: unwatched()});
  const [first, second] = [run(), run()];
  expect((await refusalOf(run)).code).toBe('overloaded');
  expect(engine.load()).toEqual({queued: 2, capacity: 2});
  await Promise.all([first, second]);
  await run();
});

test('a coincident target is refused by a thread as it is inline', async () => {
  const engine = oneThread;
  const request = {
    bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}],
    targets: {points: {x: [1, 0], y: [0, 0], z: [0, 0]}},
    onCoincidence: 'reject',
  };
  const prepared = await engine.prepare('fields', bytesOf(request));
  const inline = await refusalOf(() => engine.runInline(prepared));
  const threaded = await refusalOf(() => engine.run(prepared, {signal: unwatched()}));
  expect(threaded.code).toBe('coincident-target');
  expect(threaded.errors).toEqual(inline.errors);
});

test('an estimate is what the call costs, and faults of its request are pointed at inside it', async () => {
  const engine = twoThreads;
  for (const [operation, request] of [
    ['fields', everything],
    ['forces', assembly],
    ['moments', {bodies: assembly.bodies}],
  ] as const) {
    const estimate = await engine.estimate(bytesOf({operation, request}));
    const prepared = await engine.prepare(operation, bytesOf(request));
    expect(estimate.pairs).toBe(prepared.pairs);
    expect(estimate.route).toBe(prepared.route);
    expect(estimate.milliseconds).toBeGreaterThan(0);
  }
  const faulty = {bodies: [{charges: {x: [1], y: [1, 2], z: [1], charge: [1]}}]};
  const refusal = await refusalOf(() =>
    engine.estimate(bytesOf({operation: 'moments', request: faulty})),
  );
  expect(refusal.errors[0].pointer).toBe('/request/bodies/0/charges/y');
});

test('threads that were warmed up have read the contract', {retry: 3}, async () => {
  const body = bytesOf({bodies: [{charges: charges(3000)}], targets: grid(2, 2)});
  const timeOf = async (engine: Engine): Promise<number> => {
    const start = performance.now();
    await Promise.all([engine.prepare('fields', body), engine.prepare('fields', body)]);
    return performance.now() - start;
  };
  const cold = createEngine({threads: 2});
  const warm = createEngine({threads: 2});
  await warm.warmUp();
  // Compiling the contract takes many times what reading this body does.
  expect(await timeOf(warm)).toBeLessThan(0.5 * (await timeOf(cold)));
  await Promise.all([cold.close(), warm.close()]);
});
