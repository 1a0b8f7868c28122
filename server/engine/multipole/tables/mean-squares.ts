import {gaussLegendre} from './gauss-legendre.ts';
import {byParity, harmonicCount, regularHarmonics} from './harmonics.ts';
import {derivativeTerms} from './translations.ts';

// Square matrices over the harmonics of degree ≤ p, row by row, for the box of size 1 around the
// origin. Harmonics of different parities are orthogonal there.

/** Means of ρ_i ρ_j. */
export function meanSquares(p: number): Float64Array {
  const n = harmonicCount(p);
  const out = new Float64Array(n * n);
  const classes = byParity(p);
  const {nodes, weights} = gaussLegendre(p + 1);
  const middle = p / 2;
  // Nodes come as pairs ±x, and products of one parity are even: one of each pair will do.
  const half = nodes.flatMap((node, k) =>
    k > middle ? [] : [{at: node / 2, weight: k === middle ? weights[k] / 2 : weights[k]}],
  );
  for (const x of half) {
    for (const y of half) {
      for (const z of half) {
        const harmonics = regularHarmonics(p, x.at, y.at, z.at);
        const weight = x.weight * y.weight * z.weight;
        for (const own of classes) {
          for (let a = 0; a < own.length; a++) {
            const scaled = weight * harmonics[own[a]];
            const row = n * own[a];
            for (let b = 0; b <= a; b++) out[row + own[b]] += scaled * harmonics[own[b]];
          }
        }
      }
    }
  }
  for (const own of classes) {
    for (const i of own) for (const j of own) if (j < i) out[n * j + i] = out[n * i + j];
  }
  return out;
}

/** Means of ∇ρ_i · ∇ρ_j, from those of ρ_i ρ_j. */
export function meanSquaresOfGradient(p: number, covariance: Float64Array): Float64Array {
  const n = harmonicCount(p);
  const out = new Float64Array(n * n);
  const terms = derivativeTerms(p);
  for (const axis of [0, 1, 2]) {
    const own = terms.filter(term => term.axis === axis);
    for (const a of own) {
      for (const b of own) {
        const mean = covariance[n * a.to + b.to];
        if (mean !== 0) out[n * a.from + b.from] += a.factor * b.factor * mean;
      }
    }
  }
  // Both halves have the same terms, added in different orders.
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < i; j++) out[n * j + i] = out[n * i + j];
  }
  return out;
}
