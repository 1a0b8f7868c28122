import {describe, expect, test} from 'vitest';

import type {FilledRequest} from '../../server/engine/filled-request.ts';
import {efforts} from '../../server/engine/multipole/effort.ts';
import {createWorkshop, type Charges, type Done, type Points} from '../support/workshop.ts';
import {compensatedField, COULOMB, type Field} from './compensated-field.ts';
import {fixed, toNumber} from './fixed-point.ts';
import {families} from './multipole-families.ts';
import {exactCharges, exactField} from './oracle.ts';
import {randomNumbers} from './random.ts';

const workshop = createWorkshop();
const TOLERANCES = [1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-9];
/** Of V and of E. */
const VECTORS = {potential: [0], field: [1, 2, 3]} as const;
/** What doubles cannot tell from nothing, relative to a norm over thousands of targets. */
const ROUNDING = 1e-13;

/** ‖Δ‖₂ ÷ ‖exact‖₂ over the targets that are not masked, as the tolerance is defined. */
function relativeError(found: Done, exact: Field, columns: readonly number[]): number {
  let error = 0;
  let norm = 0;
  for (const column of columns) {
    exact.indices.forEach((target, n) => {
      const value = exact.columns[column][n];
      if (Number.isNaN(value)) return;
      error += (found.columns[column][target] - value) ** 2;
      norm += value ** 2;
    });
  }
  return error === 0 ? 0 : Math.sqrt(error / norm);
}

function estimatesOf({job}: Done): {potential: number; field?: number} | undefined {
  return job.kind === 'multipole' ? job.estimated : undefined;
}

/** The reference against 77 digits at one target, where no charge lies. */
function expectExact({charges, targets}: {charges: Charges; targets: Points}, exact: Field): void {
  const n = exact.columns[0].findIndex(value => !Number.isNaN(value));
  // Where a target lies on a charge of zero, there is nothing to divide.
  const isThere = (_: number, index: number): boolean => charges.charge[index] !== 0;
  const of = (values: Float64Array): number[] => [...values].filter(isThere);
  const columns = {
    x: of(charges.x),
    y: of(charges.y),
    z: of(charges.z),
    charge: of(charges.charge),
  };
  const request = {units: {}, bodies: [{id: 'all', charges: columns}]} as unknown as FilledRequest;
  const {x, y, z} = targets;
  const target = exact.indices[n];
  const at = [fixed(x[target]), fixed(y[target]), fixed(z[target])] as const;
  const {potential, field} = exactField(request, exactCharges(request).flat(), at);
  const squares = exact.columns.map(column =>
    column.reduce((sum, value) => sum + (Number.isNaN(value) ? 0 : value ** 2 / column.length), 0),
  );
  [potential, ...field].forEach((value, column) => {
    const off = Math.abs(exact.columns[column][n] - toNumber(value));
    expect(off).toBeLessThanOrEqual(1e-12 * Math.sqrt(squares[column]));
  });
}

describe('no tolerance is exceeded, and what was reached is told to a factor of 3, with', () => {
  test.each(families(2200))('$name', family => {
    const {charges, targets} = family;
    const exact = compensatedField(charges, targets);
    expectExact(family, exact);
    for (const tolerance of TOLERANCES) {
      const done = workshop.compute({charges, targets, tolerance});
      // Masked are the same targets.
      for (const [column, values] of exact.columns.entries()) {
        const isMasked = (value: number): boolean => Number.isNaN(value);
        expect([...done.columns[column]].map(isMasked)).toEqual([...values].map(isMasked));
      }
      for (const quantity of ['potential', 'field'] as const) {
        const error = relativeError(done, exact, VECTORS[quantity]);
        const where = `${quantity} at ${tolerance}: ${error}, ${done.method}`;
        expect(error, where).toBeLessThanOrEqual(tolerance);
        const estimated = estimatesOf(done)?.[quantity];
        if (estimated === undefined || Math.max(error, estimated) < ROUNDING) continue;
        expect(estimated, where).toBeGreaterThan(error / 3);
        expect(estimated, where).toBeLessThan(3 * error);
      }
    }
  });
});

const column = (length: number, value: (n: number) => number): Float64Array =>
  Float64Array.from({length}, (_, n) => value(n));

function cloud(count: number, seed: number, charge: (n: number) => number): Charges {
  const random = randomNumbers(seed);
  const [x, y, z] = [1, 2, 3].map(() => column(count, random));
  return {x, y, z, charge: column(count, charge)};
}

const alternating = (n: number): number => (n % 2 ? 1e-9 : -1e-9);

test('with deep trees, many targets and samples of them, no tolerance is exceeded', () => {
  const charges = cloud(30_000, 1, alternating);
  const targets = cloud(30_000, 2, alternating);
  const indices = Int32Array.from({length: 200}, (_, n) => 150 * n + 7);
  const exact = compensatedField(charges, targets, indices);
  for (const tolerance of [1e-3, 1e-5, 1e-7, 1e-9]) {
    const done = workshop.compute({charges, targets, tolerance});
    expect(done.method).toBe('multipole');
    for (const columns of Object.values(VECTORS)) {
      // Of a sample, and so not quite that of all.
      expect(relativeError(done, exact, columns)).toBeLessThanOrEqual(tolerance);
    }
  }
});

test('a few targets that make most of the norm are among those that are looked at', () => {
  // One of 1,500 is in a neutral cloud, all others are where nearly nothing is left of its field.
  const random = randomNumbers(3);
  const charges = cloud(20_000, 4, alternating);
  const count = 45_000;
  const isInside = (n: number): boolean => n % 1500 === 17;
  const coordinate = (n: number): number =>
    isInside(n) ? random() : (random() < 0.5 ? 1 : -1) * (100 + 1000 * random());
  const [x, y, z] = [0, 1, 2].map(() => column(count, coordinate));
  const inside = Int32Array.from({length: count / 1500}, (_, n) => 1500 * n + 17);
  const exact = compensatedField(charges, {x, y, z}, inside);
  for (const tolerance of [1e-4, 1e-6]) {
    const done = workshop.compute({charges, targets: {x, y, z}, tolerance});
    expect(done.method).toBe('multipole');
    for (const quantity of ['potential', 'field'] as const) {
      // Of the others there is less than that: the norm is that of those inside.
      const error = relativeError(done, exact, VECTORS[quantity]);
      expect(error).toBeLessThanOrEqual(tolerance);
      expect(estimatesOf(done)?.[quantity]).toBeGreaterThan(error / 3);
    }
  }
});

test('charges too small to be squared are held to the tolerance as all others are', () => {
  for (const size of [1e-170, 1e-290]) {
    const charges = cloud(2500, 5, n => size * (n % 3 ? 1 : -1.5));
    const targets = cloud(2500, 6, () => 0);
    const exact = compensatedField(
      {...charges, charge: charges.charge.map(q => q / size)},
      targets,
    );
    const done = workshop.compute({charges, targets, tolerance: 1e-6});
    const raised = {...done, columns: done.columns.map(values => values.map(v => v / size))};
    for (const columns of Object.values(VECTORS)) {
      expect(relativeError(raised, exact, columns)).toBeLessThanOrEqual(1e-6);
    }
    expect(estimatesOf(done)?.potential).toBeGreaterThan(0);
  }
});

test('the potential alone is the same as with the field, to the tolerance', () => {
  const charges = cloud(4000, 7, alternating);
  const targets = cloud(4000, 8, alternating);
  const exact = compensatedField(charges, targets);
  for (const tolerance of [1e-3, 1e-6, 1e-9]) {
    const done = workshop.compute({charges, targets, tolerance, isField: false});
    expect(done.columns.length).toBe(1);
    expect(relativeError(done, exact, VECTORS.potential)).toBeLessThanOrEqual(tolerance);
    expect(estimatesOf(done)).not.toHaveProperty('field');
  }
});

test('the magnitude of a charge changes no digit of what is summed by powers of two', () => {
  const charges = cloud(3000, 9, alternating);
  const targets = cloud(3000, 10, alternating);
  const times = (factor: number): Done =>
    workshop.compute({
      charges: {...charges, charge: charges.charge.map(q => q * factor)},
      targets,
      tolerance: 1e-5,
    });
  const plain = times(1);
  const raised = times(2 ** 40);
  expect(plain.method).toBe('multipole');
  raised.columns.forEach((values, n) => {
    expect(values.map(value => value / 2 ** 40)).toEqual(plain.columns[n]);
  });
});

test('the far part of every level is about as good as is expected of it', () => {
  const random = randomNumbers(13);
  const charges = cloud(20_000, 11, () => (random() < 0.5 ? 1e-9 : -1e-9));
  const targets = cloud(20_000, 12, alternating);
  const indices = Int32Array.from({length: 400}, (_, n) => 50 * n + 3);
  const exact = compensatedField(charges, targets, indices);
  efforts.forEach(({level, potentialError, fieldError}, effort) => {
    const farError = (isField: boolean, columns: readonly number[]): number => {
      const changes = {effort, leastEffort: effort};
      const done = workshop.compute({charges, targets, isField, tolerance: 1, changes});
      expect(done.job).toMatchObject({kind: 'multipole', effort});
      let error = 0;
      let norm = 0;
      columns.forEach((which, place) => {
        indices.forEach((target, n) => {
          const value = exact.columns[which][n];
          error += (done.columns[which][target] - value) ** 2;
          norm += (value - COULOMB * done.near[place][target]) ** 2;
        });
      });
      return Math.sqrt(error / norm);
    };
    const errors = [
      {expected: potentialError, found: farError(false, VECTORS.potential)},
      {expected: fieldError, found: farError(true, VECTORS.field)},
    ];
    for (const {expected, found} of errors) {
      const share = found / expected;
      // Sets differ by their net charge, which makes the more of the far part the larger it is.
      expect(share, `${level.name}: ${found}`).toBeLessThan(1.6);
      expect(share, `${level.name}: ${found}`).toBeGreaterThan(0.4);
    }
  });
});
