import {afterAll, describe, expect, test} from 'vitest';

import type {Body, FieldAnswer, FieldRequest} from '../../shared/api.ts';
import {createEngine} from '../../server/engine/pool.ts';
import {compute} from './compute.ts';
import {size, toNumber} from './fixed-point.ts';
import {exactCharges, exactField, toSI, type Vector} from './oracle.ts';
import {randomNumbers} from './random.ts';

const engine = createEngine({threads: 2});
afterAll(() => engine.close());

const random = randomNumbers(41);
const columns = (count: number, coordinate: () => number, charge: (n: number) => number) => ({
  x: Array.from({length: count}, coordinate),
  y: Array.from({length: count}, coordinate),
  z: Array.from({length: count}, coordinate),
  charge: Array.from({length: count}, (_, n) => charge(n)),
});
const points = (count: number, coordinate: () => number) => {
  const {x, y, z} = columns(count, coordinate, () => 0);
  return {points: {x, y, z}};
};
const alternating = (n: number): number => (n % 2 ? 1e-9 : -1e-9);

async function answerOf(
  body: FieldRequest,
  signal = new AbortController().signal,
): Promise<FieldAnswer> {
  const prepared = await engine.prepare('fields', Buffer.from(JSON.stringify(body), 'utf8'));
  const {bytes} = await engine.run(prepared, {signal});
  return JSON.parse(Buffer.from(bytes).toString('utf8')) as FieldAnswer;
}

/** ‖Δ‖ ÷ ‖direct‖ of V, and whether the same rows are masked. */
function compared(
  found: FieldAnswer,
  direct: FieldAnswer,
): {error: number; isMaskedAlike: boolean} {
  const pairs = (direct.columns.potential ?? []).map(
    (exact, n) => [exact, found.columns.potential?.[n] ?? null] as const,
  );
  const largest = Math.max(...pairs.map(([exact]) => Math.abs(exact ?? 0)));
  let error = 0;
  let norm = 0;
  for (const [exact, value] of pairs) {
    if (exact === null || value === null) continue;
    error += ((value - exact) / largest) ** 2;
    norm += (exact / largest) ** 2;
  }
  return {
    error: largest === 0 ? 0 : Math.sqrt(error / norm),
    isMaskedAlike: pairs.every(([exact, value]) => (exact === null) === (value === null)),
  };
}

const SOURCES = 4000;
const TARGETS = 6000;
const one = (value: number) => (): number => value;
const within = (size: number) => (): number => size * (random() - 0.5);
/** From 1e-150 to 1e24, of either sign. */
const ofAnySize = (): number => (random() < 0.5 ? -1 : 1) * 10 ** (174 * random() - 150);

interface Extreme {
  readonly name: string;
  readonly sources: () => number;
  readonly targets: () => number;
  readonly charge?: (n: number) => number;
  readonly more?: Partial<FieldRequest>;
}
const extremes: readonly Extreme[] = [
  {name: 'coordinates up to 1e24 m', sources: within(2e24), targets: within(2e24)},
  {name: 'coordinates below 1e-30 m', sources: within(1e-30), targets: within(1e-30)},
  {name: 'coordinates from 1e-150 to 1e24 m', sources: ofAnySize, targets: ofAnySize},
  {
    name: 'targets that are one place to their charges',
    sources: within(1e24),
    targets: within(1e-150),
  },
  {name: 'everything at one place', sources: one(0.5), targets: one(0.5)},
  {
    name: 'charges at the edge of what doubles hold',
    sources: within(1),
    targets: within(1),
    charge: n => (n % 2 ? 1e-310 : 3e-310),
  },
  {
    name: 'a coincidence distance as large as all there is',
    sources: within(1),
    targets: within(1),
    more: {coincidenceDistance: 0.3},
  },
];

describe('with a tolerance the answer is that of the direct sum, for', () => {
  test.each(extremes)('$name', async ({sources, targets, charge = alternating, more}) => {
    const request: FieldRequest = {
      bodies: [{charges: columns(SOURCES, sources, charge)}],
      targets: points(TARGETS, targets),
      quantities: ['potential', 'field'],
      ...more,
    };
    const direct = await answerOf(request);
    const tolerance = 1e-6;
    const found = await answerOf({...request, accuracy: {tolerance}});
    const {error, isMaskedAlike} = compared(found, direct);
    expect(isMaskedAlike).toBe(true);
    expect(error).toBeLessThanOrEqual(tolerance);
    expect(found.coincidentCount).toBe(direct.coincidentCount);
    expect(found.coincident).toEqual(direct.coincident);
  });
});

test('where charges cancel to less than rounding, a direct sum says what it is within', () => {
  const count = 40;
  const near = (n: number, gap: number): number => 1 + n / count + gap;
  const charges: Body['charges'] = {
    x: Array.from({length: count}, (_, n) => near(n >> 1, n % 2 ? 2 ** -48 : 0)),
    y: Array.from({length: count}, (_, n) => near((7 * (n >> 1)) % count, 0)),
    z: Array.from({length: count}, (_, n) => near((11 * (n >> 1)) % count, 0)),
    charge: Array.from({length: count}, (_, n) => alternating(n)),
  };
  const tolerance = 1e-9;
  const {filled, answer} = compute('fields', {
    bodies: [{charges}],
    targets: points(30, () => 3 + random()),
    accuracy: {tolerance},
  });
  const {reached = NaN, method} = answer.accuracy;
  expect(method).toBe('direct');
  expect(reached).toBeGreaterThan(tolerance);
  let error = 0;
  let norm = 0;
  const {x, y, z} = filled.targets?.points ?? {x: [], y: [], z: []};
  const all = exactCharges(filled).flat();
  x.forEach((_, n) => {
    const target: Vector = [toSI(x[n], 'm'), toSI(y[n], 'm'), toSI(z[n], 'm')];
    const {potential} = exactField(filled, all, target);
    const exact = toNumber(size(potential)) * (potential < 0n ? -1 : 1);
    error += ((answer.columns.potential?.[n] ?? NaN) - exact) ** 2;
    norm += exact ** 2;
  });
  const relative = Math.sqrt(error / norm);
  expect(relative).toBeLessThanOrEqual(reached);
  // It says so for a reason: the tolerance is not kept.
  expect(relative).toBeGreaterThan(tolerance);
});

test('a sum of charges as small as doubles are says that rounding leaves nothing of the tolerance', () => {
  const {answer} = compute('potentials', {
    bodies: [{charges: columns(20, within(1), () => 5e-324)}],
    targets: points(20, within(1)),
    accuracy: {tolerance: 1e-3},
  });
  expect(answer.accuracy.reached).toBeGreaterThan(1e-3);
});

// A figure of the service, measured on a machine that others use too: it may be tried again.
test(
  'a large call of the multipole method stops within 250 ms, whatever it is doing',
  {retry: 3},
  async () => {
    const request: FieldRequest = {
      bodies: [{charges: columns(40_000, () => Math.round(1e4 * random()) / 1e4, alternating)}],
      targets: {
        grid: {
          origin: [0, 0, 0],
          steps: [
            [0.02, 0, 0],
            [0, 0.02, 0],
            [0, 0, 0.013],
          ],
          counts: [50, 50, 80],
        },
      },
      quantities: ['potential', 'field'],
      accuracy: {tolerance: 1e-6},
    };
    const prepared = await engine.prepare('fields', Buffer.from(JSON.stringify(request), 'utf8'));
    for (const wait of [30, 150, 300, 600]) {
      const controller = new AbortController();
      const running = engine.run(prepared, {signal: controller.signal});
      const gone = expect(running).rejects.toThrow('the client has gone');
      await new Promise(resolve => setTimeout(resolve, wait));
      expect(engine.memory().allocated).toBeGreaterThan(0);
      const before = process.cpuUsage();
      controller.abort(new Error('the client has gone'));
      await gone;
      // The memory of a call is given back when the last of its tasks has come back.
      while (engine.memory().allocated > 0) await new Promise(resolve => setTimeout(resolve, 1));
      const {user, system} = process.cpuUsage(before);
      // Of two threads, in microseconds.
      expect((user + system) / 1000).toBeLessThan(2 * 250);
    }
  },
);

test('too many near pairs are refused at the member that makes them, before any is summed', async () => {
  // As small as the limits allow: 5,000 × 5,000 all near, where the call is charged 1e7 pairs.
  const small = createEngine({threads: 1, limits: {synchronousPairs: 1e7}});
  try {
    const body: FieldRequest = {
      bodies: [{charges: columns(5000, within(1), alternating)}],
      targets: points(5000, within(1)),
      coincidenceDistance: 1,
      accuracy: {tolerance: 1e-3},
    };
    const prepared = await small.prepare('fields', Buffer.from(JSON.stringify(body), 'utf8'));
    const refusal = small.run(prepared, {signal: new AbortController().signal});
    await expect(refusal).rejects.toMatchObject({
      code: 'too-large-for-synchronous',
      errors: [{pointer: '/coincidenceDistance', code: 'too-large-for-synchronous'}],
    });
    expect(small.memory().allocated).toBe(0);
  } finally {
    await small.close();
  }
});
