import {CholeskyDecomposition, Matrix} from 'ml-matrix';

import {
  dense,
  product,
  squareSum,
  submatrix,
  timesTransposed,
  transposed,
  type Dense,
} from './dense.ts';
import {byParity, harmonicCount} from './harmonics.ts';
import {meanSquares, meanSquaresOfGradient} from './mean-squares.ts';
import {offsetClasses, reflectionsOf, signCount} from './offsets.ts';
import {StackedRows} from './singular-vectors.ts';
import {multipoleToLocal} from './translations.ts';

/**
 * Bases in which the far interactions of boxes need the fewest numbers.
 *
 * Translations from multipoles to local expansions, weighted by how often they occur, are
 * decomposed into singular values at once (W. Fong, E. Darve, J. Comput. Phys. 228 (2009), §3), in
 * the norms that count here: charges spread evenly over a box as sources; potential and field, in
 * least squares over a box, as targets. A box is symmetric under the reflections of each axis, so
 * the bases of the eight parities are found one by one.
 */
export interface Compression {
  /** By parity: from compressed to harmonics and back, for sources and for targets. */
  readonly sources: readonly Basis[];
  readonly targets: readonly Basis[];
  /** Σ over the nearest of the far boxes of the squared norm of the translations. */
  readonly nearest: number;
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
  let nearest = 0;
  for (const offset of offsetClasses(separation)) {
    // The nearest of the far boxes need every direction that the others need.
    if (Math.max(...offset) > separation + 1) continue;
    const mask = reflectionsOf(offset);
    const weight = signCount(mask);
    const matrix = multipoleToLocal(degree, offset);
    forBlocks(mask, (a, b) => {
      const block = submatrix(matrix, n, parities[a], parities[b]);
      const half = timesTransposed(transposed(targetRoots[a]), transposed(block));
      const weighted = product(half, sourceRoots[b]);
      nearest += weight * squareSum(weighted);
      stacks[a].targets.add(transposed(weighted), Math.sqrt(weight));
      stacks[b].sources.add(weighted, Math.sqrt(weight));
    });
  }
  const bases = stacks.map(({targets, sources}) => ({
    left: targets.singular(),
    right: sources.singular(),
  }));
  return {
    nearest,
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

/** Calls with the parities of rows and columns whose blocks are not zero by symmetry. */
export function forBlocks(mask: number, visit: (a: number, b: number) => void): void {
  for (let a = 0; a < 8; a++) {
    for (let b = 0; b < 8; b++) if (((a ^ b) & ~mask) === 0) visit(a, b);
  }
}

/** The lower triangle L of L Lᵀ. */
function choleskyRoot({rows, columns, values}: Dense): Dense {
  const decomposition = new CholeskyDecomposition(Matrix.from1DArray(rows, columns, values));
  if (!decomposition.isPositiveDefinite()) throw new RangeError('expected independent harmonics');
  const out = dense(rows, columns);
  out.values.set(decomposition.lowerTriangularMatrix.to1DArray());
  return out;
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
