import {expect, test} from 'vitest';

import type {ForceRequest, Placement} from '../../shared/api.ts';
import type {Job} from '../../server/engine/jobs.ts';
import {rotationAbout} from '../../server/engine/rotation.ts';
import {compute, numbers} from './compute.ts';
import {fixed, root, size, times, toNumber} from './fixed-point.ts';
import {exactCharges, exactField, exactForce, toSI, type Vector} from './oracle.ts';
import {randomSet, type RandomSet} from './random-sets.ts';
import {randomNumbers} from './random.ts';

// The exact values come from oracle.ts: 60 digits, and nothing of the engine's.

const median = (values: number[]): number =>
  values.sort((a, b) => a - b)[Math.floor(values.length / 2)];

const length = (v: readonly bigint[]): bigint => root(v.reduce((sum, c) => sum + times(c, c), 0n));

const distance = (values: readonly number[], exact: readonly bigint[]): bigint =>
  length(exact.map((each, n) => each - fixed(values[n])));

class Comparison {
  readonly ratios: number[] = [];
  readonly #name: string;

  constructor(name: string) {
    this.#name = name;
  }

  /** Checks that an error does not exceed its bound; notes their ratio unless the error is zero. */
  check(error: bigint, bound: number, place: string): void {
    const isWithin = error <= fixed(bound);
    expect(isWithin, `${this.#name} of ${place}: ${toNumber(error)} over ${bound}`).toBe(true);
    if (error > 0n) this.ratios.push(bound / toNumber(error));
  }

  get median(): number {
    return median(this.ratios);
  }
}

/** Holds V, E and |E| of a set against exact values; returns how many targets there were. */
function compareSet(
  {request, count}: RandomSet,
  name: string,
  potential: Comparison,
  field: Comparison,
  change?: (job: Job) => Job,
): number {
  const {filled, answer} = compute('fields', request, change);
  const charges = exactCharges(filled).flat();
  const unit = filled.units.length ?? 'm';
  const {points} = filled.targets ?? {};
  if (!points) throw new Error('expected points');
  const {columns} = answer;
  let compared = 0;
  for (let i = 0; i < answer.count; i++) {
    if (columns.potential?.[i] === null) continue;
    const place = `set ${name} (${count} charges, ${unit}), target ${i}`;
    const target: Vector = [
      toSI(points.x[i], unit),
      toSI(points.y[i], unit),
      toSI(points.z[i], unit),
    ];
    const exact = exactField(filled, charges, target);
    const at = (column: readonly (number | null)[] | undefined): number => column?.[i] ?? NaN;
    const v = size(exact.potential - fixed(at(columns.potential)));
    potential.check(v, at(columns.potentialBound), place);
    const e = [at(columns.fieldX), at(columns.fieldY), at(columns.fieldZ)];
    field.check(distance(e, exact.field), at(columns.fieldBound), place);
    const magnitude = size(length(exact.field) - fixed(at(columns.fieldMagnitude)));
    expect(magnitude <= fixed(at(columns.fieldBound)), `|E| of ${place}`).toBe(true);
    compared++;
  }
  return compared;
}

test('no potential or field of 1,000 random sets is off by more than its bound, and bounds are near', () => {
  const potential = new Comparison('V');
  const field = new Comparison('E');
  let compared = 0;
  for (let seed = 0; seed < 1000; seed++) {
    compared += compareSet(randomSet(seed), `${seed}`, potential, field);
  }
  expect(compared).toBeGreaterThan(1900);
  console.log(
    `bound / error, median: V ${potential.median.toFixed(2)}, E ${field.median.toFixed(2)}`,
  );
  // 100 is the figure promised to callers.
  expect(potential.median).toBeLessThan(100);
  expect(field.median).toBeLessThan(100);
}, 120_000);

test('bounds are near for 10,000 charges too', () => {
  const potential = new Comparison('V');
  const field = new Comparison('E');
  for (let seed = 2000; seed < 2015; seed++) {
    const set = randomSet(seed, {exactly: 10_000, targets: 1});
    compareSet(set, `${seed}`, potential, field);
  }
  expect(potential.median).toBeLessThan(100);
  expect(field.median).toBeLessThan(100);
}, 60_000);

test('the worst-case bounds of very large calls hold as well', () => {
  const potential = new Comparison('V');
  const field = new Comparison('E');
  const withWorstCases = (job: Job): Job =>
    job.kind === 'field' ? {...job, bounds: 'magnitudes'} : job;
  for (let seed = 3000; seed < 3150; seed++) {
    const set = randomSet(seed, {atMost: 300});
    compareSet(set, `${seed}`, potential, field, withWorstCases);
  }
}, 60_000);

test('bounds hold where a target is hardly further from a charge than rounding', () => {
  const potential = new Comparison('V');
  const field = new Comparison('E');
  const random = randomNumbers(7);
  let compared = 0;
  for (let seed = 0; seed < 300; seed++) {
    // 1 m away, in mm: positions are off by up to 2e-16 m, gaps are 1e-16 … 1e-12 m.
    const at = [0, 1, 2].map(() => 1000 * (0.5 + random()));
    const gap = 10 ** (-13 + 4 * random());
    const request = {
      units: {length: 'mm', charge: 'nC'},
      bodies: [
        {charges: {x: [at[0], 5], y: [at[1], 7], z: [at[2], 11], charge: [random() - 0.5, 1]}},
      ],
      targets: {points: {x: [at[0] + gap], y: [at[1] + gap * random()], z: [at[2] - gap]}},
      quantities: ['potential', 'field', 'magnitude'],
      accuracy: {bounds: true},
    } as const;
    for (const bounds of ['errors', 'magnitudes'] as const) {
      const change = (job: Job): Job => (job.kind === 'field' ? {...job, bounds} : job);
      compared += compareSet({request, count: 2}, `near ${seed}`, potential, field, change);
    }
  }
  expect(compared).toBeGreaterThan(300);
});

test('bounds hold for bodies placed by a matrix, which is taken as it is echoed', () => {
  const potential = new Comparison('V');
  const field = new Comparison('E');
  for (let seed = 1; seed < 300; seed += 3) {
    const {request, count} = randomSet(seed, {atMost: 30});
    const [{charges, placement}] = request.bodies;
    const {rotate, translate = [0, 0, 0]} = placement ?? {};
    const {matrix} = rotationAbout(rotate?.axis ?? [], rotate?.degrees ?? NaN);
    const [a, b, c, d, e, f, g, h, i] = matrix.map(Math.fround);
    const [tx, ty, tz] = translate;
    const given: Placement = {matrix: [a, b, c, tx, d, e, f, ty, g, h, i, tz, 0, 0, 0, 1]};
    const [{matrix: used} = given] =
      compute('fields', {...request, bodies: [{charges, placement: given}]}).answer.placements ??
      [];
    // The echoed matrix is orthonormal to rounding, so it is used as it is.
    const echoed = {...request, bodies: [{charges, placement: {matrix: used}}]};
    compareSet({request: echoed, count}, `${seed}`, potential, field);
  }
});

test('no gradient is off by more than its bound', () => {
  const gradient = new Comparison('gradient');
  for (let seed = 0; seed < 150; seed++) {
    const {request} = randomSet(seed, {atMost: 100, targets: 1});
    const {filled, answer} = compute('fields', {
      ...request,
      quantities: ['fieldGradient'],
      units: {...request.units, fieldGradient: 'V/mm²'},
    });
    const {columns} = answer;
    const names = ['XX', 'XY', 'XZ', 'YY', 'YZ', 'ZZ'] as const;
    const [xx, xy, xz, yy, yz, zz] = names.map(n => numbers(columns[`fieldGradient${n}`])[0]);
    const unit = filled.units.length ?? 'm';
    const {points} = filled.targets ?? {};
    if (!points) throw new Error('expected points');
    const target: Vector = [
      toSI(points.x[0], unit),
      toSI(points.y[0], unit),
      toSI(points.z[0], unit),
    ];
    const exact = exactField(filled, exactCharges(filled).flat(), target, true).gradient;
    const [exx, exy, exz, eyy, eyz, ezz] = exact;
    const error = distance(
      [xx, xy, xz, xy, yy, yz, xz, yz, zz],
      [exx, exy, exz, exy, eyy, eyz, exz, eyz, ezz],
    );
    gradient.check(error, numbers(columns.fieldGradientBound)[0], `set ${seed}`);
    // ∇ · E = 0 away from charge.
    const trace = Math.abs(xx + yy + zz);
    expect(trace).toBeLessThanOrEqual(2 * numbers(columns.fieldGradientBound)[0]);
  }
}, 60_000);

test('no force is off by more than its bound', () => {
  const force = new Comparison('force');
  for (let seed = 0; seed < 60; seed++) {
    const bodies = [0, 1, 2].flatMap(n => {
      const {request} = randomSet(3 * seed + n, {atMost: 20, targets: 1, unit: seed});
      return request.bodies.map(body => ({...body, id: `${n}`}));
    });
    const {length: unit, charge} = randomSet(0, {unit: seed}).request.units ?? {};
    const request: ForceRequest = {
      units: {length: unit, charge, force: 'µN'},
      medium: {relativePermittivity: 3},
      bodies,
      accuracy: {bounds: true},
    };
    const {filled, answer} = compute('forces', request);
    const exact = exactCharges(filled);
    answer.bodies.forEach(({force: {x, y, z}, forceBound = NaN}, body) => {
      const error = distance([x, y, z], exactForce(filled, exact, body));
      force.check(error, forceBound, `body ${body} of set ${seed}`);
    });
  }
});
