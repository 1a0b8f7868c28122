/**
 * Real solid harmonics with Schmidt's semi-normalisation, up to degree p:
 *
 *     ρ_lm(r) = |r|^l S_lm(r/|r|)        ι_lm(r) = S_lm(r/|r|) / |r|^(l+1)
 *     1/|r − a| = Σ_lm ρ_lm(a) ι_lm(r)   for |a| < |r|
 *
 * m > 0 holds cos mφ, m < 0 sin |m|φ. Number l² + l + m of (p + 1)². J. D. Jackson, Classical
 * Electrodynamics, 3rd ed., eq. 3.70, in the real form; recurrences as M. J. Caola, J. Phys. A 11
 * (1978), and J. M. Pérez-Jordá, W. Yang, J. Chem. Phys. 104 (1996), give them.
 */
export const harmonicCount = (p: number): number => (p + 1) ** 2;

export const harmonicIndex = (l: number, m: number): number => l * l + l + m;

/** ρ at x, y, z. */
export function regularHarmonics(p: number, x: number, y: number, z: number): Float64Array {
  return recurrence(p, x, y, z, x * x + y * y + z * z, 1);
}

/** ι at x, y, z: ρ of the inverted point, since ι_lm(r) = ρ_lm(r/|r|²)/|r|. */
export function irregularHarmonics(p: number, x: number, y: number, z: number): Float64Array {
  const inverse2 = 1 / (x * x + y * y + z * z);
  return recurrence(p, x * inverse2, y * inverse2, z * inverse2, inverse2, Math.sqrt(inverse2));
}

/** ρ_mm over ρ_(m−1)(m−1), without x and y. */
export const sectoralFactor = (m: number): number =>
  m === 1 ? 1 : Math.sqrt((2 * m - 1) / (2 * m));

/** The factors of z ρ_(l−1)m and of −r² ρ_(l−2)m in ρ_lm. */
export function degreeFactors(l: number, m: number): {z: number; square: number} {
  const root = Math.sqrt(l * l - m * m);
  return {z: (2 * l - 1) / root, square: Math.sqrt((l - 1) ** 2 - m * m) / root};
}

function recurrence(
  p: number,
  x: number,
  y: number,
  z: number,
  square: number,
  first: number,
): Float64Array {
  const out = new Float64Array(harmonicCount(p));
  out[0] = first;
  for (let m = 0; m <= p; m++) {
    if (m > 0) {
      const cosine = out[harmonicIndex(m - 1, m - 1)];
      const sine = m > 1 ? out[harmonicIndex(m - 1, 1 - m)] : 0;
      const factor = sectoralFactor(m);
      out[harmonicIndex(m, m)] = factor * (x * cosine - y * sine);
      out[harmonicIndex(m, -m)] = factor * (x * sine + y * cosine);
    }
    for (let l = m + 1; l <= p; l++) {
      const factors = degreeFactors(l, m);
      for (const order of m === 0 ? [0] : [m, -m]) {
        const before = out[harmonicIndex(l - 1, order)];
        const earlier = l - 2 >= m ? out[harmonicIndex(l - 2, order)] : 0;
        out[harmonicIndex(l, order)] = factors.z * z * before - factors.square * square * earlier;
      }
    }
  }
  return out;
}

/** Which of the reflections of x (1), y (2) and z (4) change the sign of ρ_lm. */
export function parityOf(l: number, m: number): number {
  const order = Math.abs(m);
  const isOddInX = (m >= 0 ? order : order + 1) % 2 === 1;
  const isOddInZ = (l - order) % 2 === 1;
  return Number(isOddInX) + (m < 0 ? 2 : 0) + (isOddInZ ? 4 : 0);
}

/** Numbers of the harmonics of degree ≤ p, by parity, each by degree. */
export function byParity(p: number): number[][] {
  const classes: number[][] = Array.from({length: 8}, () => []);
  for (let l = 0; l <= p; l++) {
    for (let m = -l; m <= l; m++) classes[parityOf(l, m)].push(harmonicIndex(l, m));
  }
  return classes;
}
