import {afterAll, beforeAll, expect, test} from 'vitest';

import type {FieldAnswer, ForceAnswer, MomentAnswer} from '../../shared/api.ts';
import {startService, type TestService} from '../support/service.ts';
import {
  columns,
  polygon,
  rockSalt,
  rockSaltCluster,
  singles,
  thomsonPoints,
  type Point,
} from './assemblies.ts';
import {k_e, record, recordsLike, toleranceOf, type PublishedRecord} from './records.ts';

// Every value was published or computed elsewhere: records.json names the source of each and how it
// was read. All calls go through the public API. The tolerance is that of the record, but no less
// than 1e-12; the bounds that the service answers are far below that.

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

/** Checks a number against a record; `unit` is what the record's unit is in the number's. */
function expectPublished(found: number, of: PublishedRecord, unit = 1): void {
  const expected = of.value * unit;
  const difference = Math.abs(found - expected) / Math.abs(expected);
  const text = `${of.id}, ${of.quantity}: ${found} for ${expected} (${of.source})`;
  expect(difference, text).toBeLessThanOrEqual(toleranceOf(of));
}

const only = (column: readonly (number | null)[] | undefined): number => column?.[0] ?? NaN;

async function fieldAt(
  charges: readonly {q: number; pos: Point}[],
  point: Point,
): Promise<{potential: number; magnitude: number}> {
  const answer = await service.call<FieldAnswer>('fields', {
    bodies: [
      {
        charges: columns(
          charges.map(({pos}) => pos),
          charges.map(({q}) => q),
        ),
      },
    ],
    targets: {points: {x: [point[0]], y: [point[1]], z: [point[2]]}},
    quantities: ['potential', 'magnitude'],
  });
  const {potential, fieldMagnitude} = answer.columns;
  return {potential: only(potential), magnitude: only(fieldMagnitude)};
}

/** Energy [k_e C²/m] of charges that come one by one from infinity. */
async function energyOf(
  points: readonly Point[],
  charges: number | readonly number[] = 1,
): Promise<number> {
  const all = columns(points, charges);
  const {energy} = await service.call<ForceAnswer>('forces', {bodies: singles(all)});
  // The same energy, as the internal one of a single body.
  const one = await service.call<ForceAnswer>('forces', {
    bodies: [{charges: all}],
    include: ['internalEnergy'],
  });
  const internal = one.bodies[0].internalEnergy ?? NaN;
  expect(Math.abs(internal - energy)).toBeLessThanOrEqual(1e-13 * Math.abs(energy));
  return energy / k_e;
}

for (const of of recordsLike(/of a point charge$|^physical dipole|^linear quadrupole/)) {
  test(`${of.id}: ${of.quantity}`, async () => {
    const {charges = [], point = [0, 0, 0]} = of.inputs;
    const found = await fieldAt(charges, point);
    const value = of.quantity.includes('potential') ? found.potential : found.magnitude;
    expectPublished(value, of, of.unit.startsWith('k_e') ? k_e : 1);
  });
}

test('TXT-002, TXT-003: two charges pull a third with the printed force and direction', async () => {
  const {charges = [], test: third} = record('TXT-002').inputs;
  if (!third) throw new Error('expected a test charge');
  const bodyOf = ({q, pos}: {q: number; pos: Point}) => ({charges: columns([pos], q)});
  const {bodies} = await service.call<ForceAnswer>('forces', {
    bodies: [bodyOf(third), ...charges.map(bodyOf)],
  });
  const {x, y} = bodies[0].force;
  expectPublished(Math.hypot(x, y), record('TXT-002'));
  expectPublished((Math.atan2(y, x) * 180) / Math.PI, record('TXT-003'));
});

test('TXT-004: the field of a helium nucleus at the electron', async () => {
  const {r = NaN} = record('TXT-004').inputs;
  const {magnitude} = await fieldAt([{q: 2 * 1.6e-19, pos: [0, 0, 0]}], [r, 0, 0]);
  expectPublished(magnitude, record('TXT-004'));
});

test('TXT-007, TXT-008: the work to bring four charges to a square', async () => {
  const {charges = []} = record('TXT-008').inputs;
  const {energy} = await service.call<ForceAnswer>('forces', {
    bodies: charges.map(({q, pos}) => ({charges: columns([pos], q)})),
  });
  expectPublished(energy, record('TXT-007'));
  expectPublished(energy, record('TXT-008'));
});

test('TXT-012, TXT-013, TXT-016, TXT-018, TXT-019: potentials as the textbook prints them', async () => {
  const {q = NaN, a = NaN, b = NaN} = record('TXT-012').inputs;
  const near = await fieldAt([{q, pos: [0, 0, 0]}], [a, 0, 0]);
  const far = await fieldAt([{q, pos: [0, 0, 0]}], [b, 0, 0]);
  expectPublished(near.potential - far.potential, record('TXT-012'));

  const sphere = record('TXT-013').inputs;
  const outside = await fieldAt([{q: sphere.q ?? NaN, pos: [0, 0, 0]}], [0, sphere.r ?? NaN, 0]);
  expectPublished(outside.potential, record('TXT-013'));

  for (const id of ['TXT-016', 'TXT-018']) {
    const {charges = [], point = [0, 0, 0]} = record(id).inputs;
    expectPublished((await fieldAt(charges, point)).potential, record(id));
  }

  // V falls as 1/r, so the radius of 100 V follows from the potential at the printed one.
  const surface = record('TXT-019');
  const at = await fieldAt([{q: surface.inputs.q ?? NaN, pos: [0, 0, 0]}], [surface.value, 0, 0]);
  expectPublished((at.potential / (surface.inputs.V ?? NaN)) * surface.value, surface);
});

for (const of of recordsLike(/^Evjen sum/)) {
  test(`${of.id}: Evjen's sum for rock salt, half-width ${of.inputs.n}`, async () => {
    const {n = 0} = of.inputs;
    // Ions on a face count a half, on an edge a quarter, at a corner an eighth.
    const {points, charges} = rockSalt(n, p => 0.5 ** p.filter(c => Math.abs(c) === n).length);
    const {potential} = await fieldAt(
      points.map((pos, i) => ({pos, q: charges[i]})),
      [0, 0, 0],
    );
    expectPublished(potential, of, k_e);
  });
}

for (const of of recordsLike(/^plain cube sum/)) {
  test(`${of.id}: the plain sum over a cube of rock salt, half-width ${of.inputs.n}`, async () => {
    const {points, charges} = rockSalt(of.inputs.n ?? 0, () => 1);
    const {potential} = await fieldAt(
      points.map((pos, i) => ({pos, q: charges[i]})),
      [0, 0, 0],
    );
    expectPublished(Math.abs(potential), of, k_e);
  });
}

for (const of of recordsLike(/^total energy of an n x n x n NaCl cluster/)) {
  test(`${of.id}: the energy of ${of.inputs.n}³ ions of rock salt`, async () => {
    const {points, charges} = rockSaltCluster(of.inputs.n ?? 0);
    expectPublished(await energyOf(points, charges), of);
  });
}

for (const of of recordsLike(/vertices of a regular polygon/)) {
  test(`${of.id}: the energy of a regular polygon of ${of.inputs.N} charges`, async () => {
    expectPublished(await energyOf(polygon(of.inputs.N ?? 0)), of);
  });
}

for (const of of recordsLike(/vertices of a regular (octahedron|icosahedron|dodecahedron)/)) {
  test(`${of.id}: ${of.quantity}`, async () => {
    expectPublished(await energyOf(of.inputs.positions ?? []), of);
  });
}

for (const of of recordsLike(/^Thomson (problem|N=5)/)) {
  test(`${of.id}: the lowest energy of ${of.inputs.N} charges on a sphere, at their known places`, async () => {
    const {N = 0} = of.inputs;
    const points = N === 12 ? record('MBD-030').inputs.positions : thomsonPoints[N];
    expectPublished(await energyOf(points ?? []), of);
  });
}

/** Length of the dipole moment [D] of a water model: hydrogens at their angle, −2 qH on `centre`. */
async function waterDipole(of: PublishedRecord): Promise<number> {
  const {r_OH_A = NaN, HOH_deg = NaN, qH_e = NaN, r_OM_A = 0} = of.inputs;
  const half = (HOH_deg * Math.PI) / 360;
  const [x, z] = [r_OH_A * Math.sin(half), r_OH_A * Math.cos(half)];
  const {assembly} = await service.call<MomentAnswer>('moments', {
    units: {length: 'angstrom', charge: 'e'},
    bodies: [
      {
        charges: columns(
          [
            [0, 0, r_OM_A],
            [x, 0, z],
            [-x, 0, z],
          ],
          [-2 * qH_e, qH_e, qH_e],
        ),
      },
    ],
  });
  const {dipole} = assembly;
  // CON-012: one e Å in debye.
  return Math.hypot(dipole.x, dipole.y, dipole.z) * record('CON-012').value;
}

for (const id of ['MOL-007', 'MOL-009', 'MOL-010']) {
  const of = record(id);
  test(`${id}: ${of.quantity}`, async () => {
    expectPublished(await waterDipole(of), of);
  });
}

for (const of of recordsLike(/^TIP3P water: potential/)) {
  test(`${of.id}: ${of.quantity}, in e and Å`, async () => {
    const {charges_e_angstrom: sites = [], point_A: point = [0, 0, 0]} = of.inputs;
    // The model's charge and geometry are records too.
    expect(sites[0][0]).toBe(record('MOL-001').value);
    const answer = await service.call<FieldAnswer>('potentials', {
      units: {length: 'angstrom', charge: 'e'},
      bodies: [
        {
          charges: columns(
            sites.map(([, x, y, z]) => [x, y, z]),
            sites.map(([q]) => q),
          ),
        },
      ],
      targets: {points: {x: [point[0]], y: [point[1]], z: [point[2]]}},
    });
    expectPublished(only(answer.columns.potential), of);
  });
}

test('MOL-015: the energy of an ion pair of rock salt in eV', async () => {
  const of = record('MOL-015');
  const {energy} = await service.call<ForceAnswer>('forces', {
    units: {length: 'angstrom', charge: 'e', energy: 'eV'},
    bodies: singles(
      columns(
        [
          [0, 0, 0],
          [of.inputs.r_A ?? NaN, 0, 0],
        ],
        [1, -1],
      ),
    ),
  });
  expectPublished(energy, of);
});

/**
 * Checks that the field vanishes at a published place. A place that is off by the part t of itself
 * changes the field of each charge at distance r by at most 2 t s / r of its own, s being the place.
 */
async function expectNull(
  charges: readonly {q: number; pos: Point}[],
  place: Point,
  published: PublishedRecord,
): Promise<void> {
  const {magnitude} = await fieldAt(charges, place);
  let tolerance = 0;
  for (const {q, pos} of charges) {
    const r = Math.hypot(place[0] - pos[0], place[1] - pos[1], place[2] - pos[2]);
    const change = (2 * toleranceOf(published) * published.value) / r;
    tolerance += (k_e * Math.abs(q) * change) / r ** 2;
  }
  expect(magnitude, `${published.id} (${published.source})`).toBeLessThanOrEqual(tolerance);
}

for (const of of recordsLike(/^field null/)) {
  test(`${of.id}: ${of.quantity}`, async () => {
    const {charges = []} = of.inputs;
    const isBeyond = of.quantity.includes('beyond');
    await expectNull(charges, [isBeyond ? 1 + of.value : of.value, 0, 0], of);
  });
}

test('NUL-014: four equal charges have a null off the centre, toward the middle of a side', async () => {
  const of = record('NUL-014');
  const charges = polygon(4).map(pos => ({q: 1, pos}));
  const along = of.value * Math.SQRT1_2;
  await expectNull(charges, [along, along, 0], of);
  expect((await fieldAt(charges, [0, 0, 0])).magnitude).toBeLessThan(1e-15 * k_e);
});
