import {expect, test} from 'vitest';

import type {Body, ForceAnswer, ForceRequest} from '../../shared/api.ts';
import {ServiceError} from '../../server/errors.ts';
import {compute} from './compute.ts';
import {randomNumbers} from './random.ts';

type Xyz = ForceAnswer['bodies'][number]['force'];

function randomBodies(seed: number, sizes: readonly number[]): Body[] {
  const random = randomNumbers(seed);
  const column = (n: number, middle: number): number[] =>
    Array.from({length: n}, () => middle + random() - 0.5);
  return sizes.map((size, b) => ({
    id: `body ${b}`,
    charges: {
      x: column(size, 1.5 * b),
      y: column(size, 0),
      z: column(size, 0.3 * b),
      charge: column(size, 0).map(q => q * 1e-6),
    },
  }));
}

const sumOf = (vectors: readonly Xyz[]): Xyz =>
  vectors.reduce((sum, v) => ({x: sum.x + v.x, y: sum.y + v.y, z: sum.z + v.z}));
const lengthOf = ({x, y, z}: Xyz): number => Math.hypot(x, y, z);

test('forces and torques about one point add up to nothing (Newton’s third law)', () => {
  const bodies = randomBodies(1, [7, 1, 20, 3]);
  const {answer} = compute('forces', {bodies, about: [0.1, 0.2, 0.3], accuracy: {bounds: true}});
  const bound = answer.bodies.reduce((sum, each) => sum + (each.forceBound ?? NaN), 0);
  expect(lengthOf(sumOf(answer.bodies.map(({force}) => force)))).toBeLessThan(2 * bound);
  // The lever arms are below 6 m.
  expect(lengthOf(sumOf(answer.bodies.map(({torque}) => torque)))).toBeLessThan(12 * bound);
});

test('the torque is that of the force on every charge about the point answered', () => {
  const bodies = randomBodies(2, [5, 4]);
  const placed: Body[] = [bodies[0], {...bodies[1], placement: {translate: [0.5, 2, -1]}}];
  const {answer} = compute('forces', {bodies: placed, include: ['charges']});
  expect(answer.bodies[0].about).toEqual({x: 0, y: 0, z: 0});
  expect(answer.bodies[1].about).toEqual({x: 0.5, y: 2, z: -1});
  const {forceX = [], forceY = [], forceZ = []} = answer.charges ?? {};
  const torque = {x: 0, y: 0, z: 0};
  const force = {x: 0, y: 0, z: 0};
  const {x, y, z} = bodies[1].charges;
  for (let i = 0; i < 4; i++) {
    // About the placed origin, so the arms are those of the body's own frame.
    const f = {x: forceX[5 + i], y: forceY[5 + i], z: forceZ[5 + i]};
    torque.x += y[i] * f.z - z[i] * f.y;
    torque.y += z[i] * f.x - x[i] * f.z;
    torque.z += x[i] * f.y - y[i] * f.x;
    force.x += f.x;
    force.y += f.y;
    force.z += f.z;
  }
  for (const axis of ['x', 'y', 'z'] as const) {
    const {torque: t, force: f} = answer.bodies[1];
    expect(Math.abs(t[axis] - torque[axis])).toBeLessThan(1e-13 * lengthOf(t));
    expect(Math.abs(f[axis] - force[axis])).toBeLessThan(1e-13 * lengthOf(f));
  }
});

test('the force is what the energy loses along a small shift', () => {
  const bodies = randomBodies(3, [6, 5]);
  const energyAt = (shift: number): number =>
    compute('forces', {bodies: [bodies[0], {...bodies[1], placement: {translate: [shift, 0, 0]}}]})
      .answer.energy;
  const {force} = compute('forces', {bodies}).answer.bodies[1];
  const h = 1e-4;
  const slope = (energyAt(h) - energyAt(-h)) / (2 * h);
  // A central difference is off by h² and by rounding over h: 1e-8 and 1e-12 of the scale.
  expect(Math.abs(force.x + slope)).toBeLessThan(1e-6 * lengthOf(force));
});

test('interactions add up to energy and force, and the earlier body acts', () => {
  const bodies = randomBodies(4, [3, 2, 4]);
  const {answer} = compute('forces', {bodies});
  const {interactions = []} = answer;
  expect(interactions.map(({of, on}) => [of, on])).toEqual([
    ['body 0', 'body 1'],
    ['body 0', 'body 2'],
    ['body 1', 'body 2'],
  ]);
  const energy = interactions.reduce((sum, each) => sum + each.energy, 0);
  expect(Math.abs(energy - answer.energy)).toBeLessThan(1e-13 * Math.abs(energy));
  const last = sumOf(interactions.filter(({on}) => on === 'body 2').map(({force}) => force));
  for (const axis of ['x', 'y', 'z'] as const) {
    const {force} = answer.bodies[2];
    expect(Math.abs(force[axis] - last[axis])).toBeLessThan(1e-13 * lengthOf(force));
  }
});

test('above 50 bodies interactions are answered on request only, and change no force by more than rounding', () => {
  const bodies = randomBodies(5, Array<number>(51).fill(2));
  const plain = compute('forces', {bodies}).answer;
  expect(plain.interactions).toBeUndefined();
  const full = compute('forces', {bodies, include: ['interactions']}).answer;
  expect(full.interactions?.length).toBe((51 * 50) / 2);
  expect(Math.abs(full.energy - plain.energy)).toBeLessThan(1e-12 * Math.abs(plain.energy));
  full.bodies.forEach(({force}, b) => {
    const other = plain.bodies[b].force;
    expect(Math.abs(force.x - other.x)).toBeLessThan(1e-12 * lengthOf(force));
  });
});

test('the medium divides forces and energies', () => {
  const bodies = randomBodies(6, [3, 2]);
  const vacuum = compute('forces', {bodies}).answer;
  const oil = compute('forces', {bodies, medium: {relativePermittivity: 2}}).answer;
  // Halving is exact in double precision.
  expect(oil.energy).toBe(vacuum.energy / 2);
  expect(oil.bodies[0].force.x).toBe(vacuum.bodies[0].force.x / 2);
});

test('probes feel all bodies and act on none', () => {
  const bodies = randomBodies(7, [3, 2]);
  const probes = {x: [0.2, 3], y: [2, 0], z: [0, -2], charge: [1e-6, -2e-6]};
  const {answer} = compute('forces', {bodies, probes});
  const without = compute('forces', {bodies}).answer;
  expect(answer.bodies).toEqual(without.bodies);
  expect(answer.energy).toBe(without.energy);
  const {x, y, z} = probes;
  const {columns} = compute('fields', {bodies, targets: {points: {x, y, z}}}).answer;
  probes.charge.forEach((q, i) => {
    const expected = q * (columns.fieldX?.[i] ?? NaN);
    const found = answer.probes?.forceX[i] ?? NaN;
    expect(Math.abs(found - expected)).toBeLessThanOrEqual(1e-15 * Math.abs(expected));
  });
});

function refusalOf(request: ForceRequest): ServiceError {
  try {
    compute('forces', request);
  } catch (error) {
    // The refusal that is expected.
    if (error instanceof ServiceError) return error;
    throw error;
  }
  throw new Error('expected a refusal');
}

test('overlapping charges are refused where their interaction is asked for, and both are named', () => {
  const one = {id: 'one', charges: {x: [0, 1], y: [0, 0], z: [0, 0], charge: [1, 1]}};
  const two = {id: 'two', charges: {x: [5, 1], y: [0, 0], z: [0, 0], charge: [1, 1]}};
  const {code, errors} = refusalOf({bodies: [one, two]});
  expect(code).toBe('overlapping-charges');
  expect(errors.map(({pointer}) => pointer)).toEqual([
    '/bodies/0/charges/x/1',
    '/bodies/1/charges/x/1',
  ]);

  const stacked = {id: 'stacked', charges: {x: [7, 7], y: [0, 0], z: [0, 0], charge: [1, 2]}};
  expect(compute('forces', {bodies: [stacked, two]}).answer.bodies.length).toBe(2);
  const internal = refusalOf({bodies: [stacked, two], include: ['internalEnergy']});
  expect(internal.errors.map(({pointer}) => pointer)).toEqual([
    '/bodies/0/charges/x/0',
    '/bodies/0/charges/x/1',
  ]);

  const probes = {x: [5], y: [0], z: [0], charge: [1]};
  expect(refusalOf({bodies: [two], probes}).errors.map(({pointer}) => pointer)).toEqual([
    '/probes/x/0',
    '/bodies/0/charges/x/0',
  ]);
});

test('a charge of zero overlaps with nothing', () => {
  const one = {charges: {x: [0, 1], y: [0, 0], z: [0, 0], charge: [1e-6, 0]}};
  const two = {charges: {x: [5, 1], y: [0, 0], z: [0, 0], charge: [1e-6, 1e-6]}};
  const {answer} = compute('forces', {bodies: [one, two]});
  expect(answer.bodies[0].force.x).toBeLessThan(0);
});
