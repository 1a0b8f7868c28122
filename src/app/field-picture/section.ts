import type {Body, EchoedUnits, FieldColumns, Grid} from '../../../shared/api';
import {fixed, plain, significant} from '../format/numbers';
import {placedCharges} from './placed-charges';
import {axisOf, cross, dot, length, minus, plus, times, type Vector} from './vector';

export interface Axis {
  readonly name: string;
  readonly direction: Vector;
}

export interface SectionCharge {
  readonly u: number;
  readonly v: number;
  readonly charge: number;
  readonly name: string;
}

/**
 * A plane of grid values ready to be drawn. Grid point (i, j) lies at
 * u = `origin.u` + i · `iStep.u` + j · `jStep.u` on the axis that runs to the right, and likewise v upwards.
 */
export interface Section {
  readonly counts: readonly [number, number];
  readonly origin: {readonly u: number; readonly v: number};
  readonly iStep: {readonly u: number; readonly v: number};
  readonly jStep: {readonly u: number; readonly v: number};
  readonly axes: readonly [Axis, Axis];
  readonly name: string;
  /** Value of point (i, j) at i + j · counts[0]; NaN where masked; null where not asked for. */
  readonly potential: Float64Array | null;
  readonly strength: Float64Array | null;
  readonly fieldU: Float64Array | null;
  readonly fieldV: Float64Array | null;
  readonly charges: readonly SectionCharge[];
  readonly chargesInAll: number;
  /** How far from the plane a charge may lie to be drawn. */
  readonly thickness: number;
  readonly units: EchoedUnits;
}

/** The two directions with more than one point, or null if the grid is not a section. */
function directionsOf({steps, counts}: Grid): [number, number] | null {
  const long = [0, 1, 2].filter(index => counts[index] > 1);
  if (long.length !== 2) return null;
  const [first, second] = long;
  const across = cross(steps[first], steps[second]);
  return length(across) > 1e-9 * length(steps[first]) * length(steps[second])
    ? [first, second]
    : null;
}

const UNIT: Readonly<Record<'x' | 'y' | 'z', Vector>> = {x: [1, 0, 0], y: [0, 1, 0], z: [0, 0, 1]};

/** Axes by the direction of the steps: x before y before z to the right; s and t where they are oblique. */
function axesOf(first: Vector, second: Vector): readonly [Axis, Axis] {
  const [a, b] = [axisOf(first), axisOf(second)];
  if (a && b) {
    const [right, up] = a < b ? [a, b] : [b, a];
    return [
      {name: right, direction: UNIT[right]},
      {name: up, direction: UNIT[up]},
    ];
  }
  const right = a ? UNIT[a] : times(first, 1 / length(first));
  const rest = minus(second, times(right, dot(second, right)));
  const upwards = times(rest, 1 / length(rest));
  const up = axisOf(upwards);
  return [
    {name: a ?? 's', direction: right},
    {name: up ?? 't', direction: up ? UNIT[up] : upwards},
  ];
}

const listed = (vector: Vector, digits: number): string =>
  `(${vector.map(part => plain(fixed(part, digits))).join(', ')})`;

function nameOf(axes: readonly [Axis, Axis], origin: Vector, unit: string): string {
  const normal = cross(axes[0].direction, axes[1].direction);
  const letter = axisOf(normal);
  if (letter) return `Section ${letter} = ${plain(shortest(dot(UNIT[letter], origin)))} ${unit}`;
  const along = axes
    .filter(axis => axis.name === 's' || axis.name === 't')
    .map(axis => `${axis.name} along ${listed(axis.direction, 3)}`);
  return `Section from ${listed(origin, 1)} ${unit}, ${along.join(', ')}`;
}

function shortest(value: number): {digits: string; exponent: number | null} {
  const written = significant(value, 4);
  return {
    ...written,
    digits: written.digits.includes('.') ? written.digits.replace(/\.?0+$/, '') : written.digits,
  };
}

function numbers(column: readonly (number | null)[] | undefined): Float64Array | null {
  return column ? Float64Array.from(column, value => value ?? NaN) : null;
}

export function sectionOf(
  grid: Grid,
  bodies: readonly Body[],
  columns: FieldColumns,
  units: EchoedUnits,
): Section | null {
  const directions = directionsOf(grid);
  if (directions === null) return null;
  const [first, second] = directions.map(index => grid.steps[index] as Vector);
  const counts = [grid.counts[directions[0]], grid.counts[directions[1]]] as const;
  const axes = axesOf(first, second);
  const corner: Vector = grid.origin;
  const zero: Vector = [0, 0, 0];
  const [right, up] = axes.map(
    axis => (vector: Vector, from: Vector) =>
      dot(axis.name === 's' || axis.name === 't' ? minus(vector, from) : vector, axis.direction),
  );
  const place = (point: Vector): {u: number; v: number} => ({
    u: right(point, corner),
    v: up(point, corner),
  });
  const step = (vector: Vector): {u: number; v: number} => ({
    u: right(vector, zero),
    v: up(vector, zero),
  });

  const normal = cross(axes[0].direction, axes[1].direction);
  const thickness = 0.5 * Math.min(length(first), length(second));
  const charges = placedCharges(bodies);
  const shown = charges
    .filter(({at, charge}) => charge !== 0 && Math.abs(dot(minus(at, corner), normal)) <= thickness)
    .map(({at, charge, body, index}) => ({...place(at), charge, name: `${body}, charge ${index}`}));

  const [ex, ey, ez] = [columns.fieldX, columns.fieldY, columns.fieldZ].map(numbers);
  const along = (axis: Axis): Float64Array | null =>
    ex && ey && ez ? ex.map((value, k) => dot([value, ey[k], ez[k]], axis.direction)) : null;
  return {
    counts,
    origin: place(corner),
    iStep: step(first),
    jStep: step(second),
    axes,
    name: nameOf(axes, corner, units.length),
    potential: numbers(columns.potential),
    strength:
      numbers(columns.fieldMagnitude) ??
      (ex && ey && ez ? ex.map((value, k) => length([value, ey[k], ez[k]])) : null),
    fieldU: along(axes[0]),
    fieldV: along(axes[1]),
    charges: shown,
    chargesInAll: charges.length,
    thickness,
    units,
  };
}

/** The corners of the section, for its frame. */
export function extent({origin, iStep, jStep, counts}: Section): {
  readonly u: readonly [number, number];
  readonly v: readonly [number, number];
} {
  const [i, j] = [counts[0] - 1, counts[1] - 1];
  const us = [0, i * iStep.u, j * jStep.u, i * iStep.u + j * jStep.u].map(part => origin.u + part);
  const vs = [0, i * iStep.v, j * jStep.v, i * iStep.v + j * jStep.v].map(part => origin.v + part);
  return {u: [Math.min(...us), Math.max(...us)], v: [Math.min(...vs), Math.max(...vs)]};
}

/** The 3-D position of a grid point. */
export function positionOf(grid: Grid, index: number): Vector {
  const [nx, ny] = grid.counts;
  const [i, j, k] = [index % nx, Math.floor(index / nx) % ny, Math.floor(index / (nx * ny))];
  return plus(
    plus(plus(grid.origin, times(grid.steps[0], i)), times(grid.steps[1], j)),
    times(grid.steps[2], k),
  );
}
