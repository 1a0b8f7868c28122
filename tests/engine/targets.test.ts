import {expect, test} from 'vitest';

import {unitOf} from '../../shared/units.ts';
import {gridNodes, packGrid, type PackedGrid} from '../../server/engine/grid.ts';
import {packPath, pathSample} from '../../server/engine/path.ts';
import {POSITION_COLUMNS} from '../../server/engine/kernels/layout.ts';
import {
  position,
  positionColumns,
  type Position,
  type PositionColumns,
} from '../../server/engine/positions.ts';
import {fixed, over, root, times, toNumber} from './fixed-point.ts';
import {toSI} from './oracle.ts';
import {randomNumbers} from './random.ts';

type Vector = [number, number, number];

/** How far an exact position is from what the engine says: with its remainders, and without. */
function distances(found: Position, exact: readonly bigint[]): {corrected: number; plain: number} {
  const off = (parts: readonly (readonly number[])[]): number => {
    const squares = exact.map((value, n) => {
      const rest = parts[n].reduce((sum, part) => sum - fixed(part), value);
      return times(rest, rest);
    });
    return toNumber(root(squares.reduce((sum, square) => sum + square, 0n)));
  };
  return {
    corrected: off([
      [found.x, found.xRemainder],
      [found.y, found.yRemainder],
      [found.z, found.zRemainder],
    ]),
    plain: off([[found.x], [found.y], [found.z]]),
  };
}

/** One node of a grid, by itself. */
function nodeOf(grid: PackedGrid, index: number, at: Position): void {
  const {x, y, z, xRemainder, yRemainder, zRemainder, radius} = nodesOf(grid, index, 1);
  [at.x, at.y, at.z, at.radius] = [x[0], y[0], z[0], radius[0]];
  [at.xRemainder, at.yRemainder, at.zRemainder] = [xRemainder[0], yRemainder[0], zRemainder[0]];
}

function nodesOf(grid: PackedGrid, from: number, count: number): PositionColumns {
  const columns = positionColumns(new Float64Array(POSITION_COLUMNS * count), count);
  gridNodes(grid, from, count, columns);
  return columns;
}

const columnsOf = (nodes: PositionColumns): number[][] =>
  Object.values(nodes).map((column: Float64Array) => [...column]);

test('grid points are the same whichever of them are asked for together', () => {
  const random = randomNumbers(6);
  const vector = (): Vector => [random() - 0.5, random() - 0.5, random() - 0.5];
  const grid = packGrid(
    {origin: vector(), steps: [vector(), vector(), vector()], counts: [7, 5, 3]},
    unitOf('length', 'in'),
  );
  const all = columnsOf(nodesOf(grid, 0, 105));
  expect(new Set(all[0]).size).toBeGreaterThan(50);
  for (const [from, count] of [
    [0, 1],
    [3, 60],
    [34, 71],
    [104, 1],
  ]) {
    const some = columnsOf(nodesOf(grid, from, count));
    expect(some).toEqual(all.map(column => column.slice(from, from + count)));
  }
});

test('grid points: the first step varies fastest', () => {
  const grid = packGrid(
    {
      origin: [1, 2, 3],
      steps: [
        [0.5, 0, 0],
        [0, 0.25, 0],
        [0, 0, 2],
      ],
      counts: [2, 3, 2],
    },
    unitOf('length', 'm'),
  );
  const at = position();
  const nodes = Array.from({length: 12}, (_, index) => {
    nodeOf(grid, index, at);
    return [at.x, at.y, at.z];
  });
  expect(nodes[0]).toEqual([1, 2, 3]);
  expect(nodes[1]).toEqual([1.5, 2, 3]);
  expect(nodes[2]).toEqual([1, 2.25, 3]);
  expect(nodes[6]).toEqual([1, 2, 5]);
  expect(nodes[11]).toEqual([1.5, 2.5, 5]);
  expect(at.radius).toBe(0);
});

test('grid points know what rounding took away from them', () => {
  const random = randomNumbers(5);
  const vector = (): Vector => [random() - 0.5, random() - 0.5, random() - 0.5];
  for (const symbol of ['m', 'mm', 'in', 'µm']) {
    const grid = {
      origin: vector(),
      steps: [vector(), vector(), vector()] as [Vector, Vector, Vector],
    };
    const counts: Vector = [7, 5, 3];
    const packed = packGrid({...grid, counts}, unitOf('length', symbol));
    const at = position();
    for (let index = 0; index < 105; index++) {
      nodeOf(packed, index, at);
      const [i, j, k] = [index % 7, Math.floor(index / 7) % 5, Math.floor(index / 35)];
      const exact = [0, 1, 2].map(axis => {
        const along = (n: number): bigint => toSI(grid.steps[n][axis], symbol);
        return (
          toSI(grid.origin[axis], symbol) +
          BigInt(i) * along(0) +
          BigInt(j) * along(1) +
          BigInt(k) * along(2)
        );
      });
      const {corrected, plain} = distances(at, exact);
      const scale = Math.hypot(at.x, at.y, at.z) + unitOf('length', symbol).toSI(1);
      expect(corrected).toBeLessThan(20 * 2 ** -106 * 10 * scale);
      // The radius is twice what rounding can be.
      expect(2 * plain).toBeLessThanOrEqual(at.radius);
    }
  }
});

test('path samples are at equal arc length, corners included', () => {
  const vertices: Vector[] = [
    [0, 0, 0],
    [3, 0, 0],
    [3, 4, 0],
    [3, 4, 0],
    [3, 4, 5],
  ];
  const path = packPath({vertices, samples: 13}, unitOf('length', 'm'));
  const at = position();
  const points = Array.from({length: 13}, (_, index) => {
    pathSample(path, index, at);
    return [at.x, at.y, at.z];
  });
  expect(points[0]).toEqual([0, 0, 0]);
  expect(points[2]).toEqual([2, 0, 0]);
  expect(points[3]).toEqual([3, 0, 0]);
  expect(points[5]).toEqual([3, 2, 0]);
  expect(points[8]).toEqual([3, 4, 1]);
  expect(points[12]).toEqual([3, 4, 5]);
});

test('path samples know what rounding took away from them', () => {
  const random = randomNumbers(6);
  for (const symbol of ['m', 'mm', 'ft']) {
    const vertices = Array.from({length: 6}, (): Vector => [
      random() - 0.5,
      random() - 0.5,
      random() - 0.5,
    ]);
    const samples = 41;
    const packed = packPath({vertices, samples}, unitOf('length', symbol));
    const exact = vertices.map(vertex => vertex.map(value => toSI(value, symbol)));
    const lengths = [0n];
    for (let n = 1; n < exact.length; n++) {
      const squares = exact[n].map((end, axis) => {
        const step = end - exact[n - 1][axis];
        return times(step, step);
      });
      lengths.push(lengths[n - 1] + root(squares.reduce((sum, square) => sum + square, 0n)));
    }
    const at = position();
    for (let index = 0; index < samples; index++) {
      pathSample(packed, index, at);
      const along = (lengths[lengths.length - 1] * BigInt(index)) / BigInt(samples - 1);
      let n = 1;
      while (lengths[n] < along) n++;
      const part = over(along - lengths[n - 1], lengths[n] - lengths[n - 1]);
      const point = exact[n - 1].map((start, axis) => start + times(part, exact[n][axis] - start));
      const {corrected, plain} = distances(at, point);
      const scale = unitOf('length', symbol).toSI(1);
      expect(corrected).toBeLessThan(1e-30 * scale);
      expect(2 * plain).toBeLessThanOrEqual(at.radius * (1 + 1e-12) + 1e-30 * scale);
    }
  }
});
