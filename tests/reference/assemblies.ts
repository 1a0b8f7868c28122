import type {Body, ChargeColumns} from '../../shared/api.ts';

export type Point = readonly [number, number, number];

/** Columns of charges at points; all of `charge`, or one each. */
export function columns(
  points: readonly Point[],
  charge: number | readonly number[] = 1,
): ChargeColumns {
  return {
    x: points.map(p => p[0]),
    y: points.map(p => p[1]),
    z: points.map(p => p[2]),
    charge: points.map((_, i) => (typeof charge === 'number' ? charge : charge[i])),
  };
}

/** A body for every charge, so that all energies are interactions. */
export const singles = ({x, y, z, charge}: ChargeColumns): Body[] =>
  x.map((_, i) => ({charges: {x: [x[i]], y: [y[i]], z: [z[i]], charge: [charge[i]]}}));

export const polygon = (corners: number): Point[] =>
  Array.from({length: corners}, (_, i) => {
    const angle = (2 * Math.PI * i) / corners;
    return [Math.cos(angle), Math.sin(angle), 0];
  });

const third = Math.sqrt(1 / 3);

/** Positions of the lowest energy of N equal charges on the unit sphere, where they are known. */
export const thomsonPoints: Readonly<Record<number, readonly Point[]>> = {
  2: [
    [0, 0, 1],
    [0, 0, -1],
  ],
  3: polygon(3),
  4: [
    [third, third, third],
    [third, -third, -third],
    [-third, third, -third],
    [-third, -third, third],
  ],
  5: [...polygon(3), [0, 0, 1], [0, 0, -1]],
  6: [
    [1, 0, 0],
    [-1, 0, 0],
    [0, 1, 0],
    [0, -1, 0],
    [0, 0, 1],
    [0, 0, -1],
  ],
};

/** Rock salt around an ion, to `reach` neighbours each way, without that ion; unit spacing. */
export function rockSalt(
  reach: number,
  weight: (point: Point) => number,
): {points: Point[]; charges: number[]} {
  const points: Point[] = [];
  const charges: number[] = [];
  for (let i = -reach; i <= reach; i++) {
    for (let j = -reach; j <= reach; j++) {
      for (let k = -reach; k <= reach; k++) {
        if (i === 0 && j === 0 && k === 0) continue;
        points.push([i, j, k]);
        // Signs such that the potential at the origin is positive: nearest neighbours are.
        charges.push(((i + j + k) % 2 === 0 ? -1 : 1) * weight([i, j, k]));
      }
    }
  }
  return {points, charges};
}

/** n × n × n ions of alternating sign at the integer points from 0 on. */
export function rockSaltCluster(n: number): {points: Point[]; charges: number[]} {
  const points: Point[] = [];
  const charges: number[] = [];
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      for (let k = 0; k < n; k++) {
        points.push([i, j, k]);
        charges.push((i + j + k) % 2 === 0 ? 1 : -1);
      }
    }
  }
  return {points, charges};
}
