import {
  BLOCK,
  MAGNITUDES,
  MAGNITUDES_AT,
  TARGET_RADIUS,
  TARGET_X,
  TARGET_Y,
  TARGET_Z,
} from '../kernels/layout.ts';
import type {SumKernel} from '../kernels/sum-kernels.ts';

const ROOT = 3 * Math.sqrt(6);

/**
 * Sums of absolute terms, which worst-case bounds are made of; cancellation does not make them
 * small. Adds to the row of MAGNITUDES of every target
 *
 *     Σ |q|/r,  Σ |q|/r²,  Σ |q|/r³                                       [C/m, C/m², C/m³]
 *     Σ η m |q|/r,  Σ 2 η m³ |q|/r²,  Σ 3√6 η m⁴ |q|/r³                    the same
 *
 * where η = ½ (radius of charge and target) / r covers the displacement of either by rounding, and
 * m = 1 + 2η ≥ 1/(1 − η) for η ≤ ½, which holds for all pairs that are not coincident. The last
 * three bound what such a displacement e changes: e/r² of V, 2e/r³ of E, and 3√6 e/r⁴ of the
 * gradient in the Frobenius norm (6 e/r⁴ in the spectral norm), each at the distance r − e. η² and
 * higher are thus included.
 *
 * The order is that of point-charge.ts, but the blocks are added plainly.
 */
export const addMagnitudes: SumKernel = (charges, from, to, batch, first, last) => {
  const {x: sx, y: sy, z: sz, q, radius} = charges;
  const {values, capacity} = batch;
  for (let i = first; i < last; i++) {
    const x = values[TARGET_X * capacity + i];
    const y = values[TARGET_Y * capacity + i];
    const z = values[TARGET_Z * capacity + i];
    const targetRadius = values[TARGET_RADIUS * capacity + i];
    const row = MAGNITUDES_AT * capacity + MAGNITUDES * i;
    for (let start = from; start < to; start += BLOCK) {
      const end = Math.min(start + BLOCK, to);
      let vBlock = 0;
      let eBlock = 0;
      let gBlock = 0;
      let vMovedBlock = 0;
      let eMovedBlock = 0;
      let gMovedBlock = 0;
      for (let lane = 0; lane < 2; lane++) {
        let v = 0;
        let e = 0;
        let g = 0;
        let vMoved = 0;
        let eMoved = 0;
        let gMoved = 0;
        for (let j = start + lane; j < end; j += 2) {
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
        vBlock += v;
        eBlock += e;
        gBlock += g;
        vMovedBlock += vMoved;
        eMovedBlock += 2 * eMoved;
        gMovedBlock += ROOT * gMoved;
      }
      values[row] += vBlock;
      values[row + 1] += eBlock;
      values[row + 2] += gBlock;
      values[row + 3] += vMovedBlock;
      values[row + 4] += eMovedBlock;
      values[row + 5] += gMovedBlock;
    }
  }
};
