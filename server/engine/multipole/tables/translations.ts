import {gaussLegendre} from './gauss-legendre.ts';
import {harmonicCount, harmonicIndex, irregularHarmonics, regularHarmonics} from './harmonics.ts';

/** Square matrices over the harmonics of degree ≤ p, row by row. */

type Complex = readonly [number, number];

/**
 * From the multipoles of a box to the local expansion of another of the same size, `shift` box sizes
 * away:  ι_j(shift + x) = Σ_i T_ij ρ_i(x).
 *
 * The addition theorem of the irregular solid harmonics (C. A. White, M. Head-Gordon, J. Chem. Phys.
 * 101 (1994), eq. 12), taken from complex harmonics to real ones.
 */
export function multipoleToLocal(p: number, shift: readonly number[]): Float64Array {
  const n = harmonicCount(p);
  const out = new Float64Array(n * n);
  const far = irregularHarmonics(2 * p, shift[0], shift[1], shift[2]);
  for (let l = 0; l <= p; l++) {
    for (let k = 0; k <= p; k++) {
      for (let m = 0; m <= l; m++) addColumns(out, n, far, l, m, k);
    }
  }
  return out;
}

/** Entries of the rows of degree k and the columns (l, m) and (l, −m). */
function addColumns(
  out: Float64Array,
  n: number,
  far: Float64Array,
  l: number,
  m: number,
  k: number,
): void {
  const scale = m > 0 ? Math.SQRT2 : 1;
  const cosine = harmonicIndex(l, m);
  const sine = harmonicIndex(l, -m);
  for (let q = 0; q <= k; q++) {
    const plus = coefficient(far, l, m, k, q);
    let cosineRow: Complex = plus;
    let sineRow: Complex = [0, 0];
    if (q > 0) {
      const sign = q % 2 === 1 ? -1 : 1;
      const minus = coefficient(far, l, m, k, -q);
      const [a, b] = plus;
      const [c, d] = [sign * minus[0], sign * minus[1]];
      cosineRow = [(a + c) / Math.SQRT2, (b + d) / Math.SQRT2];
      sineRow = [(b - d) / Math.SQRT2, (c - a) / Math.SQRT2];
    }
    const row = n * harmonicIndex(k, q);
    out[row + cosine] = scale * cosineRow[0];
    if (m > 0) out[row + sine] = scale * cosineRow[1];
    if (q === 0) continue;
    const sineStart = n * harmonicIndex(k, -q);
    out[sineStart + cosine] = scale * sineRow[0];
    if (m > 0) out[sineStart + sine] = scale * sineRow[1];
  }
}

/** The factor of the conjugate of the complex ρ_kq in the complex ι_lm, normalised. */
function coefficient(far: Float64Array, l: number, m: number, k: number, q: number): Complex {
  const ratio = normalisation(l + k, m + q) / (normalisation(l, m) * normalisation(k, q));
  const factor = k % 2 === 1 ? -ratio : ratio;
  const [re, im] = complexHarmonic(far, l + k, m + q);
  return [factor * re, factor * im];
}

function complexHarmonic(real: Float64Array, l: number, m: number): Complex {
  if (m === 0) return [real[harmonicIndex(l, 0)], 0];
  const order = Math.abs(m);
  const re = real[harmonicIndex(l, order)] / Math.SQRT2;
  const im = real[harmonicIndex(l, -order)] / Math.SQRT2;
  if (m > 0) return [re, im];
  const sign = order % 2 === 1 ? -1 : 1;
  return [sign * re, -sign * im];
}

const factorials = [1];

/** √((l − m)! (l + m)!) */
function normalisation(l: number, m: number): number {
  for (let i = factorials.length; i <= l + Math.abs(m); i++) factorials[i] = i * factorials[i - 1];
  return Math.sqrt(factorials[l - m]) * Math.sqrt(factorials[l + m]);
}

/**
 * From the coordinates of a child box to those of its parent: ρ_i(u/2 + shift) = Σ_j X_ij ρ_j(u).
 * By quadrature over the unit sphere, exact for these polynomials.
 */
export function childToParent(p: number, shift: readonly number[]): Float64Array {
  const n = harmonicCount(p);
  const out = new Float64Array(n * n);
  const {nodes, weights} = gaussLegendre(p + 1);
  const turns = 2 * p + 2;
  for (let a = 0; a <= p; a++) {
    const ring = Math.sqrt(1 - nodes[a] ** 2);
    for (let b = 0; b < turns; b++) {
      const angle = (2 * Math.PI * b) / turns;
      const u = [ring * Math.cos(angle), ring * Math.sin(angle), nodes[a]];
      const own = regularHarmonics(p, u[0], u[1], u[2]);
      const [x, y, z] = u.map((value, axis) => value / 2 + shift[axis]);
      const wanted = regularHarmonics(p, x, y, z);
      addOuter(out, wanted, own, weights[a] / (2 * turns));
    }
  }
  // ∮ S_j² = 4π/(2l + 1); the weights above are those of the mean over the sphere.
  for (let i = 0; i < n; i++) {
    for (let l = 0, j = 0; l <= p; l++) {
      for (let m = -l; m <= l; m++, j++) out[n * i + j] *= 2 * l + 1;
    }
  }
  return out;
}

/** out += factor · a bᵀ */
export function addOuter(
  out: Float64Array,
  a: Float64Array,
  b: Float64Array,
  factor: number,
): void {
  const n = a.length;
  for (let i = 0; i < n; i++) {
    const scaled = factor * a[i];
    for (let j = 0; j < n; j++) out[n * i + j] += scaled * b[j];
  }
}

/** One term of a derivative: ∂ρ_from has factor · ρ_to in it. */
export interface DerivativeTerm {
  readonly axis: 0 | 1 | 2;
  readonly from: number;
  readonly to: number;
  readonly factor: number;
}

/**
 * ∂ρ/∂x, ∂ρ/∂y and ∂ρ/∂z in terms of ρ of one degree less. From (∂x − i∂y) C_l^m = √((l+m)(l+m−1))
 * C_(l−1)^(m−1), (∂x + i∂y) C_l^m = −√((l−m)(l−m−1)) C_(l−1)^(m+1) and ∂z C_l^m = √(l²−m²) C_(l−1)^m.
 */
export function derivativeTerms(p: number): DerivativeTerm[] {
  const terms: DerivativeTerm[] = [];
  const add = (axis: 0 | 1 | 2, from: number, l: number, m: number, factor: number): void => {
    if (factor !== 0 && Math.abs(m) <= l) terms.push({axis, from, to: harmonicIndex(l, m), factor});
  };
  for (let l = 1; l <= p; l++) {
    for (let m = -l; m <= l; m++) {
      const order = Math.abs(m);
      const from = harmonicIndex(l, m);
      add(2, from, l - 1, m, Math.sqrt(l * l - m * m));
      const down = Math.sqrt((l + order) * (l + order - 1)) / 2;
      const up = Math.sqrt((l - order) * (l - order - 1)) / 2;
      if (m === 0) {
        // C_(l−1)^(−1) is minus the conjugate of C_(l−1)^1, so both terms are one.
        add(0, from, l - 1, 1, -(up + down) / Math.SQRT2);
        add(1, from, l - 1, -1, -(up + down) / Math.SQRT2);
        continue;
      }
      // ρ_l0 lacks the √2 of the others.
      const low = order === 1 ? Math.SQRT2 : 1;
      if (m > 0) {
        add(0, from, l - 1, order - 1, low * down);
        add(0, from, l - 1, order + 1, -up);
        if (order > 1) add(1, from, l - 1, 1 - order, -down);
        add(1, from, l - 1, -order - 1, -up);
      } else {
        if (order > 1) add(0, from, l - 1, 1 - order, down);
        add(0, from, l - 1, -order - 1, -up);
        add(1, from, l - 1, order - 1, low * down);
        add(1, from, l - 1, order + 1, up);
      }
    }
  }
  return terms;
}
