import {sumError} from '../exact.ts';
import type {ChargeColumns} from './charge-columns.ts';

/**
 * Point charges, without the factor 1/(4π ε₀ ε_r):
 *
 *     V = Σ q / r      E = Σ q d / r³      ∂E_i/∂x_j = Σ q (δ_ij − 3 n_i n_j) / r³
 *
 * with d from charge to target, r = |d|, n = d / r. OpenStax, University Physics 2, §5.4 and §7.3;
 * J. D. Jackson, Classical Electrodynamics, 3rd ed., eqs. 1.5 and 1.17.
 *
 * Sums run in the order of the columns: plainly within blocks of BLOCK charges, and from block to
 * block with the rounding error of every addition carried along (T. Ogita, S. M. Rump, S. Oishi,
 * SIAM J. Sci. Comput. 26 (2005), Sum2), so what a target gets depends on nothing but its sources.
 *
 * Each kernel adds the charges `from` … `to` − 1 to `sums`, pairs of (sum, carried error) in the
 * order V, Eₓ, E_y, E_z, G_xx, G_xy, G_xz, G_yy, G_yz, G_zz. It stops at the first charge whose
 * squared distance is not above `limit` [m²] and returns its index, else −1.
 */
export type PointChargeKernel = (
  charges: ChargeColumns,
  from: number,
  to: number,
  x: number,
  y: number,
  z: number,
  limit: number,
  sums: Float64Array,
) => number;

/** Short enough that plain additions inside lose little, long enough that folding costs nothing. */
export const BLOCK = 64;

/** Places in `sums`: one pair for V, three for E, six for the gradient. */
export const SUMS = 20;

/** Adds `term` to the pair at `index`, carrying the rounding error. */
export function carry(sums: Float64Array, index: number, term: number): void {
  const before = sums[index];
  const after = before + term;
  sums[index] = after;
  sums[index + 1] += sumError(before, term, after);
}

export const addPotential: PointChargeKernel = (charges, from, to, x, y, z, limit, sums) => {
  const {x: sx, y: sy, z: sz, q} = charges;
  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    let v = 0;
    for (let j = start; j < end; j++) {
      const dx = x - sx[j];
      const dy = y - sy[j];
      const dz = z - sz[j];
      const square = dx * dx + dy * dy + dz * dz;
      if (square <= limit) return j;
      v += q[j] * (1 / Math.sqrt(square));
    }
    carry(sums, 0, v);
  }
  return -1;
};

export const addField: PointChargeKernel = (charges, from, to, x, y, z, limit, sums) => {
  const {x: sx, y: sy, z: sz, q} = charges;
  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    let v = 0;
    let ex = 0;
    let ey = 0;
    let ez = 0;
    for (let j = start; j < end; j++) {
      const dx = x - sx[j];
      const dy = y - sy[j];
      const dz = z - sz[j];
      const square = dx * dx + dy * dy + dz * dz;
      if (square <= limit) return j;
      const inverse = 1 / Math.sqrt(square);
      const potential = q[j] * inverse;
      const strength = potential * (inverse * inverse);
      v += potential;
      ex += strength * dx;
      ey += strength * dy;
      ez += strength * dz;
    }
    carry(sums, 0, v);
    carry(sums, 2, ex);
    carry(sums, 4, ey);
    carry(sums, 6, ez);
  }
  return -1;
};

export const addFieldGradient: PointChargeKernel = (charges, from, to, x, y, z, limit, sums) => {
  const {x: sx, y: sy, z: sz, q} = charges;
  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    let v = 0;
    let ex = 0;
    let ey = 0;
    let ez = 0;
    let xx = 0;
    let xy = 0;
    let xz = 0;
    let yy = 0;
    let yz = 0;
    let zz = 0;
    for (let j = start; j < end; j++) {
      const dx = x - sx[j];
      const dy = y - sy[j];
      const dz = z - sz[j];
      const square = dx * dx + dy * dy + dz * dz;
      if (square <= limit) return j;
      const inverse = 1 / Math.sqrt(square);
      const potential = q[j] * inverse;
      const strength = potential * (inverse * inverse);
      v += potential;
      ex += strength * dx;
      ey += strength * dy;
      ez += strength * dz;
      const nx = dx * inverse;
      const ny = dy * inverse;
      const nz = dz * inverse;
      const triple = 3 * strength;
      xx += strength - triple * (nx * nx);
      xy -= triple * (nx * ny);
      xz -= triple * (nx * nz);
      yy += strength - triple * (ny * ny);
      yz -= triple * (ny * nz);
      zz += strength - triple * (nz * nz);
    }
    carry(sums, 0, v);
    carry(sums, 2, ex);
    carry(sums, 4, ey);
    carry(sums, 6, ez);
    carry(sums, 8, xx);
    carry(sums, 10, xy);
    carry(sums, 12, xz);
    carry(sums, 14, yy);
    carry(sums, 16, yz);
    carry(sums, 18, zz);
  }
  return -1;
};
