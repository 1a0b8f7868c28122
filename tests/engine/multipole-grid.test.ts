import {describe, expect, test} from 'vitest';

import type {Grid} from '../../shared/api.ts';
import {createWorkshop, type Charges, type Points} from '../support/workshop.ts';
import {compensatedField} from './compensated-field.ts';
import {randomNumbers} from './random.ts';

// Boxes are aligned to grids of equal steps along the axes, and whole boxes of their nodes are
// evaluated at once.

const workshop = createWorkshop();
const TOLERANCES = [1e-3, 1e-5, 1e-7, 1e-9];

const random = randomNumbers(21);
const column = (count: number): Float64Array => Float64Array.from({length: count}, random);
const cloud: Charges = {
  x: column(2500),
  y: column(2500),
  z: column(2500),
  charge: column(2500).map(value => 1e-9 * (value - 0.5)),
};

function gridOf(
  origin: [number, number, number],
  steps: [number, number, number],
  counts: [number, number, number],
): Grid {
  const [a, b, c] = steps;
  return {
    origin,
    steps: [
      [a, 0, 0],
      [0, b, 0],
      [0, 0, c],
    ],
    counts,
  };
}

const nodesOf = ({origin, steps, counts: [nx, ny, nz]}: Grid): Points => {
  const [x, y, z] = [0, 1, 2].map(axis =>
    Float64Array.from({length: nx * ny * nz}, (_, n) => {
      const index = [n % nx, Math.floor(n / nx) % ny, Math.floor(n / (nx * ny))];
      return origin[axis] + index[axis] * steps[axis][axis];
    }),
  );
  return {x, y, z};
};

const cube = gridOf([0.01, 0.02, 0.03], [0.06, 0.06, 0.06], [16, 16, 16]);
const onNodes = nodesOf(gridOf([0, 0, 0], [1, 1, 1], [12, 12, 12]));

interface Case {
  readonly name: string;
  readonly charges: Charges;
  readonly grid: Grid;
}

const cases: readonly Case[] = [
  {name: 'through the charges', charges: cloud, grid: cube},
  {
    name: 'with nodes that descend',
    charges: cloud,
    grid: gridOf([0.99, 0.02, 0.98], [-0.06, 0.06, -0.06], [16, 17, 15]),
  },
  {name: 'of one layer', charges: cloud, grid: gridOf([0, 0, 0.5], [0.016, 0.016, 0], [63, 65, 1])},
  {name: 'of one row', charges: cloud, grid: gridOf([0, 0.4, 0.6], [3e-4, 0, 0], [3500, 1, 1])},
  {
    name: 'half beside the charges',
    charges: cloud,
    grid: gridOf([0.5, -0.3, 0.2], [0.1, 0.1, 0.1], [16, 16, 16]),
  },
  {
    name: 'far from the charges',
    charges: cloud,
    grid: gridOf([40, -30, 20], [0.1, 0.1, 0.1], [16, 16, 16]),
  },
  {
    name: 'twenty times as large as the charges',
    charges: cloud,
    grid: gridOf([-10, -10, -10], [1.3, 1.3, 1.3], [16, 16, 16]),
  },
  {
    name: 'of unequal steps',
    charges: cloud,
    grid: gridOf([0, 0, 0], [0.06, 0.05, 0.07], [16, 16, 16]),
  },
  {
    name: 'with charges at its nodes',
    charges: {...onNodes, charge: column(12 ** 3).map((v, n) => (n % 3 ? 1e-9 * (v - 0.5) : 0))},
    grid: gridOf([-2, -2, -2], [1, 1, 1], [16, 16, 16]),
  },
];

describe('no tolerance is exceeded on a grid', () => {
  test.each(cases)('$name', ({charges, grid}) => {
    const exact = compensatedField(charges, nodesOf(grid));
    const [v] = exact.columns;
    for (const tolerance of TOLERANCES) {
      const done = workshop.compute({charges, targets: grid, tolerance});
      for (const columns of [[0], [1, 2, 3]]) {
        let error = 0;
        let norm = 0;
        const wrong: number[] = [];
        for (const which of columns) {
          v.forEach((_, n) => {
            const value = exact.columns[which][n];
            if (Number.isNaN(done.columns[which][n]) !== Number.isNaN(value)) wrong.push(n);
            if (Number.isNaN(value)) return;
            error += (done.columns[which][n] - value) ** 2;
            norm += value ** 2;
          });
        }
        expect(wrong).toEqual([]);
        expect(Math.sqrt(error / norm), `${tolerance}`).toBeLessThanOrEqual(tolerance);
      }
    }
  });
});
