import {
  CholeskyDecomposition,
  Matrix,
  QrDecomposition,
  SingularValueDecomposition,
} from 'ml-matrix';

import {dense, product, submatrix, transposed, type Dense} from './dense.ts';
import {gaussLegendre} from './gauss-legendre.ts';
import {byParity, harmonicCount, regularHarmonics} from './harmonics.ts';
import {offsetClasses, reflectionsOf, signCount} from './offsets.ts';
import {addOuter, derivativeTerms, multipoleToLocal} from './translations.ts';

/**
 * Bases in which the far interactions of boxes need the fewest numbers.
 *
 * All translations from multipoles to local expansions, weighted by how often they occur, are
 * decomposed into singular values at once (W. Fong, E. Darve, J. Comput. Phys. 228 (2009), §3), in
 * the norms that count here: charges spread evenly over a box as sources; potential and field, in
 * least squares over a box, as targets. A box is symmetric under the reflections of each axis, so
 * the bases of the eight parities are found one by one.
 */
export interface Compression {
  /** By parity: from compressed to harmonics and back, for sources and for targets. */
  readonly sources: readonly Basis[];
  readonly targets: readonly Basis[];
  /** Σ over all far boxes of the squared norm of the translations. */
  readonly total: number;
}

export interface Basis {
  /** Singular values, descending. */
  readonly sizes: readonly number[];
  /** Sources: multipoles → compressed. Targets: compressed → local expansion. */
  readonly transform: Dense;
  /** What a translation is multiplied by on this side to become compressed. */
  readonly factor: Dense;
}

/** What the potential weighs beside the field of a box of size 1. */
const POTENTIAL_WEIGHT = 1;

export function compress(degree: number, separation: number): Compression {
  const n = harmonicCount(degree);
  const parities = byParity(degree);
  const covariance = meanSquares(degree);
  const slopes = meanSquaresOfGradient(degree, covariance);
  for (let i = 0; i < n * n; i++) slopes[i] += POTENTIAL_WEIGHT * covariance[i];
  const sourceRoots = parities.map(own => choleskyRoot(submatrix(covariance, n, own, own)));
  const targetRoots = parities.map(own => choleskyRoot(submatrix(slopes, n, own, own)));

  const stacks = parities.map(own => ({
    targets: new StackedRows(own.length),
    sources: new StackedRows(own.length),
  }));
  let total = 0;
  for (const offset of offsetClasses(separation)) {
    const mask = reflectionsOf(offset);
    const weight = signCount(mask);
    const matrix = multipoleToLocal(degree, offset);
    // The nearest of the far boxes need every direction that the others need.
    const isNearest = Math.max(...offset) === separation + 1;
    forBlocks(mask, (a, b) => {
      const block = submatrix(matrix, n, parities[a], parities[b]);
      const weighted = product(product(transposed(targetRoots[a]), block), sourceRoots[b]);
      total += weight * squareSum(weighted);
      if (!isNearest) return;
      stacks[a].targets.add(transposed(weighted), Math.sqrt(weight));
      stacks[b].sources.add(weighted, Math.sqrt(weight));
    });
  }
  const bases = stacks.map(({targets, sources}) => ({
    left: targets.singular(),
    right: sources.singular(),
  }));
  return {
    total,
    targets: bases.map(({left}, a) => ({
      sizes: left.sizes,
      transform: product(inverseTransposed(targetRoots[a]), left.vectors),
      factor: product(targetRoots[a], left.vectors),
    })),
    sources: bases.map(({right}, b) => ({
      sizes: right.sizes,
      transform: transposed(product(inverseTransposed(sourceRoots[b]), right.vectors)),
      factor: product(sourceRoots[b], right.vectors),
    })),
  };
}

export function squareSum({values}: Dense): number {
  let sum = 0;
  // By index: an iterator over a typed array takes ten times as long.
  for (let i = 0; i < values.length; i++) sum += values[i] * values[i]; // eslint-disable-line @typescript-eslint/prefer-for-of
  return sum;
}

/** Calls with the parities of rows and columns whose blocks are not zero by symmetry. */
export function forBlocks(mask: number, visit: (a: number, b: number) => void): void {
  for (let a = 0; a < 8; a++) {
    for (let b = 0; b < 8; b++) if (((a ^ b) & ~mask) === 0) visit(a, b);
  }
}

/** Means of ρ_i ρ_j over the box of size 1 around the origin. */
function meanSquares(degree: number): Float64Array {
  const n = harmonicCount(degree);
  const out = new Float64Array(n * n);
  const {nodes, weights} = gaussLegendre(degree + 1);
  nodes.forEach((x, a) => {
    nodes.forEach((y, b) => {
      nodes.forEach((z, c) => {
        const harmonics = regularHarmonics(degree, x / 2, y / 2, z / 2);
        addOuter(out, harmonics, harmonics, (weights[a] * weights[b] * weights[c]) / 8);
      });
    });
  });
  return symmetric(out, n);
}

/** Means of ∇ρ_i · ∇ρ_j. */
function meanSquaresOfGradient(degree: number, covariance: Float64Array): Float64Array {
  const n = harmonicCount(degree);
  const out = new Float64Array(n * n);
  const terms = derivativeTerms(degree);
  for (const axis of [0, 1, 2]) {
    const own = terms.filter(term => term.axis === axis);
    for (const a of own) {
      for (const b of own) {
        out[n * a.from + b.from] += a.factor * b.factor * covariance[n * a.to + b.to];
      }
    }
  }
  return symmetric(out, n);
}

function symmetric(values: Float64Array, n: number): Float64Array {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < i; j++) {
      const mean = (values[n * i + j] + values[n * j + i]) / 2;
      values[n * i + j] = mean;
      values[n * j + i] = mean;
    }
  }
  return values;
}

const toMatrix = (a: Dense): Matrix => Matrix.from1DArray(a.rows, a.columns, a.values);

function fromMatrix(a: Matrix): Dense {
  const out = dense(a.rows, a.columns);
  out.values.set(a.to1DArray());
  return out;
}

function choleskyRoot(a: Dense): Dense {
  const decomposition = new CholeskyDecomposition(toMatrix(a));
  if (!decomposition.isPositiveDefinite()) throw new RangeError('expected independent harmonics');
  return fromMatrix(decomposition.lowerTriangularMatrix);
}

/** L⁻ᵀ for a lower triangle L. */
function inverseTransposed(lower: Dense): Dense {
  const n = lower.rows;
  const inverse = dense(n, n);
  for (let j = 0; j < n; j++) {
    for (let i = j; i < n; i++) {
      let sum = i === j ? 1 : 0;
      for (let k = j; k < i; k++) sum -= lower.values[i * n + k] * inverse.values[k * n + j];
      inverse.values[i * n + j] = sum / lower.values[i * n + i];
    }
  }
  return transposed(inverse);
}

/** Right singular vectors of a matrix of many rows, which come a few at a time. */
class StackedRows {
  readonly #columns: number;
  #waiting: number[][] = [];

  constructor(columns: number) {
    this.#columns = columns;
  }

  add(block: Dense, factor: number): void {
    for (let i = 0; i < block.rows; i++) {
      const row = block.values.subarray(i * block.columns, (i + 1) * block.columns);
      this.#waiting.push(Array.from(row, value => factor * value));
    }
    // The triangle stands for all rows so far, and small matrices stay in the cache.
    if (this.#waiting.length > 8 * this.#columns) this.#waiting = this.#triangle().to2DArray();
  }

  #triangle(): Matrix {
    return new QrDecomposition(new Matrix(this.#waiting)).upperTriangularMatrix;
  }

  /** Vectors as columns, by descending singular value. */
  singular(): {vectors: Dense; sizes: number[]} {
    const decomposition = new SingularValueDecomposition(this.#triangle());
    return {
      vectors: fromMatrix(decomposition.rightSingularVectors),
      sizes: decomposition.diagonal,
    };
  }
}
