import {expect, test} from 'vitest';

import {compute} from './compute.ts';

// Definitions: J. D. Jackson, Classical Electrodynamics, 3rd ed., §4.1. The numbers are worked out by
// hand from them; in the request's own units whole numbers stay whole.

test('a pair of opposite charges has a dipole and no centre', () => {
  const {answer} = compute('moments', {
    units: {length: 'mm', charge: 'nC'},
    bodies: [{id: 'pair', charges: {x: [0, 0], y: [0, 0], z: [-1, 1], charge: [-2, 2]}}],
  });
  const moments = {
    charge: 0,
    centre: null,
    dipole: {x: 0, y: 0, z: 4},
    quadrupole: {xx: 0, xy: 0, xz: 0, yy: 0, yz: 0, zz: 0},
  };
  expect(answer.bodies).toEqual([{id: 'pair', ...moments}]);
  expect(answer.assembly).toEqual(moments);
  expect(answer.units).toEqual({
    length: 'mm',
    charge: 'nC',
    dipole: 'nC·mm',
    quadrupole: 'nC·mm²',
  });
});

test('the linear quadrupole q, −2q, q at distance d has Q_zz = 4 q d², Q_xx = Q_yy = −2 q d²', () => {
  const {answer} = compute('moments', {
    bodies: [{charges: {x: [0, 0, 0], y: [0, 0, 0], z: [3, 0, -3], charge: [5, -10, 5]}}],
  });
  const {dipole, quadrupole} = answer.assembly;
  expect(dipole).toEqual({x: 0, y: 0, z: 0});
  expect(quadrupole).toEqual({xx: -90, xy: 0, xz: 0, yy: -90, yz: 0, zz: 180});
});

test('moments are those of the placed bodies, about the point asked for, and add up', () => {
  const charges = {x: [1], y: [0], z: [0], charge: [2]};
  const {answer} = compute('moments', {
    about: [0, 0, 1],
    bodies: [
      {id: 'still', charges},
      {
        id: 'turned',
        charges,
        placement: {translate: [0, 0, 3], rotate: {axis: [0, 0, 1], degrees: 90}},
      },
    ],
  });
  const [still, turned] = answer.bodies;
  expect(still.centre).toEqual({x: 1, y: 0, z: 0});
  expect(still.dipole).toEqual({x: 2, y: 0, z: -2});
  // Turned: 2 at (0, 1, 3), so s = (0, 1, 2).
  expect(turned.centre).toEqual({x: 0, y: 1, z: 3});
  expect(turned.dipole).toEqual({x: 0, y: 2, z: 4});
  expect(turned.quadrupole).toEqual({xx: -10, xy: 0, xz: 0, yy: -4, yz: 12, zz: 14});
  expect(answer.assembly.charge).toBe(4);
  expect(answer.assembly.centre).toEqual({x: 0.5, y: 0.5, z: 1.5});
  expect(answer.assembly.dipole).toEqual({x: 2, y: 2, z: 2});
  expect(answer.about).toEqual({x: 0, y: 0, z: 1});
});

test('charges that cancel in decimals have no centre, though their doubles leave a rest', () => {
  const {answer} = compute('moments', {
    bodies: [{charges: {x: [1, 2, 3], y: [0, 0, 0], z: [0, 0, 0], charge: [0.1, 0.2, -0.3]}}],
  });
  expect(answer.assembly.centre).toBeNull();
});
