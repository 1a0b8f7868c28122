import {gaussLegendre} from './gauss-legendre.ts';
import {harmonicCount, harmonicIndex, irregularHarmonics, regularHarmonics} from './harmonics.ts';

/** Square matrices over the harmonics of degree ≤ p, row by row. */

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
  const far = complexHarmonics(2 * p, irregularHarmonics(2 * p, shift[0], shift[1], shift[2]));
  const norms = normalisations(2 * p);
  for (let l = 0; l <= p; l++) {
    for (let k = 0; k <= l; k++) {
      for (let m = 0; m <= l; m++) addColumns(out, n, far, norms, l, m, k);
    }
  }
  // ι_lm is ρ_lm(∇) of 1/r but for a factor, so to exchange source and target is to turn ∇ round.
  for (let i = 0, l = 0; i < n; i++) {
    if (i === (l + 1) ** 2) l++;
    for (let j = 0, k = 0; j < l * l; j++) {
      if (j === (k + 1) ** 2) k++;
      out[n * i + j] = (l + k) % 2 === 1 ? -out[n * j + i] : out[n * j + i];
    }
  }
  return out;
}

/** Entries of the rows of degree k and the columns (l, m) and (l, −m). */
function addColumns(
  out: Float64Array,
  n: number,
  {re, im}: ComplexHarmonics,
  norms: Float64Array,
  l: number,
  m: number,
  k: number,
): void {
  const both = m > 0 ? Math.SQRT2 : 1;
  const scale = (k % 2 === 1 ? -both : both) / norms[harmonicIndex(l, m)];
  const cosine = harmonicIndex(l, m);
  const sine = harmonicIndex(l, -m);
  for (let q = 0; q <= k; q++) {
    // The factor of the conjugate of the complex ρ_kq in the complex ι_lm.
    const own = scale / norms[harmonicIndex(k, q)];
    const at = harmonicIndex(l + k, m + q);
    const a = own * norms[at] * re[at];
    const b = own * norms[at] * im[at];
    const row = n * harmonicIndex(k, q);
    if (q === 0) {
      out[row + cosine] = a;
      if (m > 0) out[row + sine] = b;
      continue;
    }
    const opposite = harmonicIndex(l + k, m - q);
    const signed = (q % 2 === 1 ? -own : own) * norms[opposite];
    const c = signed * re[opposite];
    const d = signed * im[opposite];
    const sineRow = n * harmonicIndex(k, -q);
    out[row + cosine] = (a + c) * Math.SQRT1_2;
    out[sineRow + cosine] = (b - d) * Math.SQRT1_2;
    if (m === 0) continue;
    out[row + sine] = (b + d) * Math.SQRT1_2;
    out[sineRow + sine] = (c - a) * Math.SQRT1_2;
  }
}

/** Complex harmonics with the phase (−1)^m, by the numbers of the real ones. */
interface ComplexHarmonics {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

function complexHarmonics(p: number, real: Float64Array): ComplexHarmonics {
  const re = new Float64Array(real.length);
  const im = new Float64Array(real.length);
  for (let l = 0; l <= p; l++) {
    re[harmonicIndex(l, 0)] = real[harmonicIndex(l, 0)];
    for (let m = 1; m <= l; m++) {
      const plus = harmonicIndex(l, m);
      const minus = harmonicIndex(l, -m);
      const sign = m % 2 === 1 ? -1 : 1;
      re[plus] = real[plus] * Math.SQRT1_2;
      im[plus] = real[minus] * Math.SQRT1_2;
      re[minus] = sign * re[plus];
      im[minus] = -sign * im[plus];
    }
  }
  return {re, im};
}

/** √((l − m)! (l + m)!) by the numbers of the harmonics. */
function normalisations(p: number): Float64Array {
  const factorials = [1];
  for (let i = 1; i <= 2 * p; i++) factorials.push(i * factorials[i - 1]);
  const roots = factorials.map(Math.sqrt);
  const out = new Float64Array(harmonicCount(p));
  for (let l = 0; l <= p; l++) {
    for (let m = -l; m <= l; m++) out[harmonicIndex(l, m)] = roots[l - m] * roots[l + m];
  }
  return out;
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
function addOuter(out: Float64Array, a: Float64Array, b: Float64Array, factor: number): void {
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
