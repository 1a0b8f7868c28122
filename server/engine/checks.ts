import type {Grid, Path, Placement} from '../../shared/api.ts';
import type {Columns, FilledRequest} from './filled-request.ts';
import type {Issues} from './issues.ts';
import {departure} from './rotation.ts';

/** What |RᵀR − 1| may be: CAD exports matrices in single precision. */
const ORTHOGONALITY = 1e-6;

/** Shorter is zero: its square would vanish. */
const SHORTEST_AXIS = 1e-150;

/** Checks the meaning of a request: all that its schema cannot say and that needs no arithmetic. */
export function checkRequest(request: FilledRequest, issues: Issues): void {
  const seen = new Map<string, number>();
  request.bodies.forEach((body, index) => {
    const at = `/bodies/${index}`;
    const earlier = seen.get(body.id);
    if (earlier !== undefined) {
      const detail = `The id ${JSON.stringify(body.id)} is that of body ${earlier} already; give each body its own.`;
      issues.add(`${at}/id`, 'duplicate-id', detail);
    }
    seen.set(body.id, index);
    checkColumns(body.charges, `${at}/charges`, issues);
    if (body.placement) checkPlacement(body.placement, `${at}/placement`, issues);
  });
  if (request.probes) checkColumns(request.probes, '/probes', issues);
  const {points, grid, path} = request.targets ?? {};
  if (points) checkColumns(points, '/targets/points', issues);
  if (grid) checkGrid(grid, issues);
  if (path) checkPath(path, issues);
}

function checkColumns(
  columns: Omit<Columns, 'charge'> & Partial<Columns>,
  at: string,
  issues: Issues,
): void {
  const expected = columns.x.length;
  for (const name of ['y', 'z', 'charge'] as const) {
    const found = columns[name]?.length ?? expected;
    if (found === expected) continue;
    const detail = `Column ${name} has ${found} values and x has ${expected}; all columns need one length.`;
    issues.add(`${at}/${name}`, 'unequal-columns', detail);
  }
}

function checkPlacement(placement: Placement, at: string, issues: Issues): void {
  const {matrix, rotate, translate} = placement;
  if (matrix && (rotate || translate)) {
    issues.add(
      at,
      'conflicting-members',
      'A placement is either a matrix or translate and rotate, not both.',
    );
    return;
  }
  if (rotate && Math.max(...rotate.axis.map(Math.abs)) < SHORTEST_AXIS) {
    issues.add(
      `${at}/rotate/axis`,
      'zero-length-axis',
      `The axis is [${rotate.axis.join(', ')}]; it needs a direction, its length does not matter.`,
    );
  }
  if (matrix) checkMatrix(matrix, `${at}/matrix`, issues);
}

function checkMatrix(matrix: readonly number[], at: string, issues: Issues): void {
  const [a, b, c, d] = matrix.slice(12);
  if (a !== 0 || b !== 0 || c !== 0 || d !== 1) {
    const detail = `The last row is [${[a, b, c, d].join(', ')}] and must be [0, 0, 0, 1]; matrices are row-major, for column vectors.`;
    issues.add(at, 'not-a-rotation', detail);
    return;
  }
  const {orthogonality, determinant} = departure(linearPart(matrix));
  if (!(orthogonality <= ORTHOGONALITY)) {
    const detail = `RᵀR differs from 1 by ${orthogonality.toExponential(2)}, more than 1e-6: the matrix scales or shears; only rotations and translations are taken.`;
    issues.add(at, 'not-a-rotation', detail);
  } else if (determinant < 0) {
    const detail = `The determinant is ${determinant.toFixed(6)}: the matrix mirrors; only rotations and translations are taken.`;
    issues.add(at, 'not-a-rotation', detail);
  }
}

/** R of a row-major 4 × 4 matrix, row-major. */
export const linearPart = (matrix: readonly number[]): number[] => [
  ...matrix.slice(0, 3),
  ...matrix.slice(4, 7),
  ...matrix.slice(8, 11),
];

const isZero = (vector: readonly number[]): boolean => vector.every(component => component === 0);

function checkGrid(grid: Grid, issues: Issues): void {
  grid.steps.forEach((step, axis) => {
    if (grid.counts[axis] > 1 && isZero(step)) {
      const detail = `Step ${axis} is zero and its count is ${grid.counts[axis]}; only a count of 1 may have a zero step.`;
      issues.add(`/targets/grid/steps/${axis}`, 'zero-length-step', detail);
    }
  });
}

function checkPath(path: Path, issues: Issues): void {
  const [first] = path.vertices;
  const hasLength = path.vertices.some(vertex =>
    vertex.some((value, axis) => value !== first[axis]),
  );
  if (!hasLength) {
    issues.add(
      '/targets/path/vertices',
      'zero-length-step',
      'All vertices are the same point; a path needs a length.',
    );
  }
}
