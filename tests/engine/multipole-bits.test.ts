import {afterAll, expect, test} from 'vitest';

import type {Body, FieldAnswer, FieldRequest} from '../../shared/api.ts';
import {createEngine, type Engine} from '../../server/engine/pool.ts';
import {createWorkshop} from '../support/workshop.ts';
import {randomNumbers} from './random.ts';

const engines: Engine[] = [];
afterAll(() => Promise.all(engines.map(engine => engine.close())));

function startEngine(threads: number): Engine {
  const engine = createEngine({threads});
  engines.push(engine);
  return engine;
}
const twoThreads = startEngine(2);

const COUNT = 9000;

function columns(count: number, seed: number) {
  const random = randomNumbers(seed);
  const column = (): number[] => Array.from({length: count}, () => random() - 0.5);
  return {x: column(), y: column(), z: column(), charge: column()};
}
const cloud: Body = {id: 'cloud', charges: columns(COUNT, 1)};
const request = (bodies: readonly Body[], tolerance = 1e-5): FieldRequest => ({
  bodies: [...bodies],
  targets: {
    grid: {
      origin: [-0.6, -0.6, -0.6],
      steps: [
        [0.05, 0, 0],
        [0, 0.05, 0],
        [0, 0, 0.05],
      ],
      counts: [25, 25, 24],
    },
  },
  quantities: ['potential', 'field', 'magnitude'],
  accuracy: {tolerance},
});

async function textOf(engine: Engine, body: FieldRequest): Promise<string> {
  const prepared = await engine.prepare('fields', Buffer.from(JSON.stringify(body), 'utf8'));
  const {bytes} = await engine.run(prepared, {signal: new AbortController().signal});
  return Buffer.from(bytes).toString('utf8');
}
const answerOf = async (engine: Engine, body: FieldRequest): Promise<FieldAnswer> =>
  JSON.parse(await textOf(engine, body)) as FieldAnswer;

/** An answer without what it took. */
const withoutCost = (text: string): string => text.replace(/"cost":\{.*\},"engine"/, '"engine"');

test('one, two and three threads give the same bits, with fresh and with kept trees', async () => {
  const placed: Body = {
    id: 'placed',
    charges: columns(5000, 2),
    placement: {translate: [0.2, 0, 0.1], rotate: {axis: [1, 2, 3], degrees: 40}},
  };
  const few: Body = {id: 'few', charges: columns(300, 3)};
  const bodies = [cloud, placed, few];
  const answers: string[] = [];
  for (const engine of [twoThreads, startEngine(1), startEngine(3)]) {
    for (const isKept of [false, true]) {
      const text = await textOf(engine, request(bodies));
      const {cost, accuracy} = JSON.parse(text) as FieldAnswer;
      expect(accuracy.method).toBe('multipole');
      expect((cost.preparation?.hits ?? 0) > 0).toBe(isKept);
      answers.push(withoutCost(text));
    }
  }
  expect(answers[0].length).toBeGreaterThan(1e6);
  for (const answer of answers) expect(answer === answers[0]).toBe(true);
});

test('a body that is placed where it is gives the bits of one that is not placed', async () => {
  // Not a grid: the boxes of bodies that are not placed are aligned to it, and others are not.
  const {x, y, z} = columns(15_000, 6);
  const targets = {points: {x, y, z}};
  const plain = await answerOf(twoThreads, {...request([cloud]), targets});
  expect(plain.accuracy.method).toBe('multipole');
  const identities: Body['placement'][] = [
    {translate: [0, 0, 0]},
    {rotate: {axis: [0, 0, 1], degrees: 0}},
    {matrix: [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1]},
  ];
  for (const placement of identities) {
    const answer = await answerOf(twoThreads, {...request([{...cloud, placement}]), targets});
    expect(answer.resultDigest).toBe(plain.resultDigest);
    // Its tree is the same one.
    expect(answer.cost.preparation?.misses).toBe(0);
  }
});

test('a body that is given twice gives twice the bits', async () => {
  const once = await answerOf(twoThreads, request([cloud]));
  const twice = await answerOf(twoThreads, request([cloud, {...cloud, id: 'again'}]));
  expect(twice.accuracy.method).toBe('multipole');
  for (const [name, values] of Object.entries(once.columns)) {
    const doubled = (values as number[]).map(value => 2 * value);
    expect((twice.columns as Record<string, unknown>)[name]).toEqual(doubled);
  }
});

test('the blocks of a phase give the same bits in any order', () => {
  const workshop = createWorkshop();
  const doubles = (seed: number) => {
    const {x, y, z, charge} = columns(20_000, seed);
    return {
      x: Float64Array.from(x),
      y: Float64Array.from(y),
      z: Float64Array.from(z),
      charge: Float64Array.from(charge),
    };
  };
  for (const tolerance of [1e-4, 1e-8]) {
    const asked = {charges: doubles(4), targets: doubles(5), tolerance};
    const forwards = workshop.compute(asked);
    const backwards = workshop.compute({...asked, isReversed: true});
    expect(forwards.method).toBe('multipole');
    expect(backwards.columns).toEqual(forwards.columns);
  }
});
