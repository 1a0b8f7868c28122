import type {ChargeColumns} from './charge-columns.ts';

/** Places in `out` of `addMagnitudes`. */
export const MAGNITUDES = 6;

/**
 * Sums of absolute terms, which worst-case bounds are made of; cancellation does not make them
 * small. Adds to `out`
 *
 *     Σ |q|/r,  Σ |q|/r²,  Σ |q|/r³                                       [C/m, C/m², C/m³]
 *     Σ η m |q|/r,  Σ 2 η m³ |q|/r²,  Σ 3√6 η m⁴ |q|/r³                    the same
 *
 * where η = ½ (radius of charge and target) / r covers the displacement of either by rounding, and
 * m = 1 + 2η ≥ 1/(1 − η) for η ≤ ½, which holds for all pairs that are not coincident. The last
 * three bound what such a displacement e changes: e/r² of V, 2e/r³ of E, and 3√6 e/r⁴ of the
 * gradient in the Frobenius norm (6 e/r⁴ in the spectral norm), each at the distance r − e. η² and
 * higher are thus included.
 */
export function addMagnitudes(
  charges: ChargeColumns,
  from: number,
  to: number,
  x: number,
  y: number,
  z: number,
  targetRadius: number,
  out: Float64Array,
): void {
  const {x: sx, y: sy, z: sz, q, radius} = charges;
  let v = 0;
  let e = 0;
  let g = 0;
  let vMoved = 0;
  let eMoved = 0;
  let gMoved = 0;
  for (let j = from; j < to; j++) {
    const dx = x - sx[j];
    const dy = y - sy[j];
    const dz = z - sz[j];
    const inverse = 1 / Math.sqrt(dx * dx + dy * dy + dz * dz);
    const eta = 0.5 * (radius[j] + targetRadius) * inverse;
    const near = 1 + 2 * eta;
    const near2 = near * near;
    const first = Math.abs(q[j]) * inverse;
    const second = first * inverse;
    const third = second * inverse;
    v += first;
    e += second;
    g += third;
    vMoved += first * (eta * near);
    eMoved += second * (eta * near * near2);
    gMoved += third * (eta * (near2 * near2));
  }
  out[0] += v;
  out[1] += e;
  out[2] += g;
  out[3] += vMoved;
  out[4] += 2 * eMoved;
  out[5] += 3 * Math.sqrt(6) * gMoved;
}
