import {Decimal} from 'decimal.js';
import {expect, test} from 'vitest';

import {COULOMB_CONSTANT, physicalConstants} from '../../shared/physical-constants.ts';
import {record} from '../reference/records.ts';

// CODATA 2022 as read in scipy 1.17.1 and the records' other sources; see records.json.

test('constants are those of CODATA 2022, to the last digit', () => {
  expect(physicalConstants.vacuumPermittivity.value).toBe(record('CON-001').value);
  expect(physicalConstants.bohrRadius.value).toBe(record('CON-008').value);
  expect(physicalConstants.electronMass.value).toBe(record('CON-009').value);
});

test('the uncertainty of the permittivity is that of CODATA 2022', () => {
  // "standard uncertainty 1.4e-21 F/m", record CON-001.
  expect(physicalConstants.vacuumPermittivity.uncertainty).toBe(1.4e-21);
});

test('the Coulomb constant is the double nearest to 1/(4π ε₀)', () => {
  const precise = Decimal.clone({precision: 40});
  const epsilon = new precise('8.8541878188e-12');
  const exact = new precise(1).div(precise.acos(-1).times(4).times(epsilon));
  // Record CON-004 gives 25 digits: 8987551786.1707986…
  expect(exact.toFixed(7)).toBe('8987551786.1707987');
  expect(COULOMB_CONSTANT).toBe(exact.toNumber());
  expect(COULOMB_CONSTANT).toBe(record('CON-004').value);
});

test('one elementary charge at one Bohr radius gives the atomic unit of field', () => {
  const {elementaryCharge, bohrRadius} = physicalConstants;
  const field = (COULOMB_CONSTANT * elementaryCharge.value) / bohrRadius.value ** 2;
  const of = record('CON-014');
  // Three measured constants of 1.6e-10 each go in, and the record is known to 2e-10.
  expect(Math.abs(field - of.value) / of.value).toBeLessThan(of.relTol + 3 * 1.6e-10);
});

test('an elementary charge times an ångström is the debye figure of the records', () => {
  const {elementaryCharge} = physicalConstants;
  const debye = (elementaryCharge.value * 1e-10) / record('CON-011').value;
  expect(Math.abs(debye - record('CON-012').value)).toBeLessThan(1e-12 * debye);
});
