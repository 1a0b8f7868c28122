import {describe, expect, test} from 'vitest';

import {operationById} from '../../server/contract/document.ts';
import type {
  FieldAnswer,
  FieldRequest,
  ForceAnswer,
  ForceRequest,
  MomentAnswer,
  OperationId,
  PotentialRequest,
} from '../../shared/api.ts';
import {describedAnswer} from '../support/contract.ts';

// Coulomb's law written out once more, apart from the engine. CODATA 2022, "vacuum electric
// permittivity": 8.854 187 8188(14)e-12 F/m.
const K = 1 / (4 * Math.PI * 8.8541878188e-12);
const MILLI = 1e-3;
const NANO = 1e-9;
// The sums have few terms, so a correct program is within some 1e-15 of them; the uncertainty of
// the constant, 1.6e-10, is the same on both sides.
const TOLERANCE = 1e-13;

type Vector = readonly [number, number, number];
interface Charge {
  readonly at: Vector;
  readonly charge: number;
}

const requestOf = (id: OperationId): unknown =>
  operationById(id).object.requestBody?.content['application/json'].example;
const answerOf = (id: OperationId): unknown =>
  describedAnswer(id, 200)?.content['application/json'].example;

/** The charges of a body in metres and coulombs, turned about z and moved. */
function chargesOf(body: FieldRequest['bodies'][number]): Charge[] {
  const {x, y, z, charge} = body.charges;
  const {translate = [0, 0, 0], rotate} = body.placement ?? {};
  if (rotate) expect(rotate.axis).toEqual([0, 0, 1]);
  const angle = ((rotate?.degrees ?? 0) * Math.PI) / 180;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  return charge.map((q, i) => ({
    at: [
      (cos * x[i] - sin * y[i] + translate[0]) * MILLI,
      (sin * x[i] + cos * y[i] + translate[1]) * MILLI,
      (z[i] + translate[2]) * MILLI,
    ],
    charge: q * NANO,
  }));
}

function potentialAndField(charges: readonly Charge[], at: Vector): [number, Vector] {
  let v = 0;
  const e = [0, 0, 0];
  for (const source of charges) {
    const d = at.map((value, axis) => value - source.at[axis]);
    const r = Math.hypot(...d);
    v += (K * source.charge) / r;
    d.forEach((value, axis) => (e[axis] += (K * source.charge * value) / r ** 3));
  }
  return [v, e as unknown as Vector];
}

function expectClose(actual: number | null, expected: number): void {
  expect(actual).not.toBeNull();
  expect(Math.abs((actual ?? 0) - expected)).toBeLessThanOrEqual(TOLERANCE * Math.abs(expected));
}

test.each(['createPotentials', 'createFields'] as const)(
  'the numbers in the example of %s are those of Coulomb’s law',
  id => {
    const {bodies, targets, units} = requestOf(id) as PotentialRequest;
    expect(units).toMatchObject({length: 'mm', charge: 'nC'});
    const charges = bodies.flatMap(chargesOf);
    const {columns, coincident} = answerOf(id) as FieldAnswer;
    const {x, y, z} = targets.points ?? {x: [], y: [], z: []};
    let checked = 0;
    x.forEach((_x, i) => {
      const at: Vector = [x[i] * MILLI, y[i] * MILLI, z[i] * MILLI];
      const isOnCharge = charges.some(source => source.at.every((value, a) => value === at[a]));
      expect(coincident.some(({target}) => target === i)).toBe(isOnCharge);
      const columnsHere = Object.values(columns).map(column => column[i]);
      if (isOnCharge) {
        expect(columnsHere.every(value => value === null)).toBe(true);
        return;
      }
      const [v, e] = potentialAndField(charges, at);
      checked++;
      expectClose(columns.potential?.[i] ?? null, v);
      if (!columns.fieldX) return;
      expectClose(columns.fieldX[i], e[0] / 1000); // kV/m
      expectClose(columns.fieldY?.[i] ?? null, e[1] / 1000);
      expectClose(columns.fieldZ?.[i] ?? null, e[2] / 1000);
      expectClose(columns.fieldMagnitude?.[i] ?? null, Math.hypot(...e) / 1000);
    });
    expect(checked).toBeGreaterThan(0);
  },
);

describe('the numbers in the example of createForces', () => {
  const {bodies} = requestOf('createForces') as ForceRequest;
  const answer = answerOf('createForces') as ForceAnswer;
  const [first, second] = bodies.map(body => chargesOf(body)[0]);
  const [, field] = potentialAndField([second], first.at);
  const force = field.map(component => component * first.charge * 1000); // mN

  test('are the forces and the torques about the origin that Coulomb’s law gives', () => {
    const [ofFirst, ofSecond] = answer.bodies;
    for (const [axis, name] of (['x', 'y', 'z'] as const).entries()) {
      expectClose(ofFirst.force[name], force[axis]);
      expectClose(ofSecond.force[name], -force[axis]);
    }
    // M = r × F, in µN·m.
    const [x, , z] = first.at;
    expectClose(ofFirst.torque.y, (z * force[0] - x * force[2]) * 1000);
    expect([ofFirst.torque.x, ofFirst.torque.z]).toEqual([0, 0]);
  });

  test('are the energy of the two, for the assembly and for the interaction', () => {
    const [v] = potentialAndField([second], first.at);
    expectClose(answer.energy, v * first.charge * 1e6); // µJ
    expect(answer.interactions?.[0]).toMatchObject({
      of: 'bell',
      on: 'bracket',
      energy: answer.energy,
      force: answer.bodies[1].force,
    });
  });
});

test('the numbers in the example of createMoments are the sums that define them', () => {
  const {bodies} = requestOf('createMoments') as ForceRequest;
  const {x, y, z, charge} = bodies[0].charges;
  const {assembly} = answerOf('createMoments') as MomentAnswer;
  const sum = (of: (i: number) => number): number =>
    charge.reduce((total, q, i) => total + q * of(i), 0);
  expect(assembly.charge).toBe(sum(() => 1));
  expect(assembly.dipole).toEqual({x: sum(i => x[i]), y: sum(i => y[i]), z: sum(i => z[i])});
  const square = (i: number): number => x[i] ** 2 + y[i] ** 2 + z[i] ** 2;
  expect(assembly.quadrupole.zz).toBe(sum(i => 3 * z[i] ** 2 - square(i)));
  expect(assembly.quadrupole.xx).toBe(sum(i => 3 * x[i] ** 2 - square(i)));
});
