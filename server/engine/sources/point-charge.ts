import {sumError} from '../exact.ts';
import {
  BLOCK,
  CARRIED,
  SUMS,
  SUMS_AT,
  TARGET_NEAREST,
  TARGET_X,
  TARGET_Y,
  TARGET_Z,
} from '../kernels/layout.ts';
import type {SumKernel} from '../kernels/sum-kernels.ts';
import type {TargetBatch} from '../kernels/target-batch.ts';
import type {ChargeColumns} from './charge-columns.ts';

/**
 * Point charges, without the factor 1/(4π ε₀ ε_r):
 *
 *     V = Σ q / r      E = Σ q d / r³      ∂E_i/∂x_j = Σ q (δ_ij − 3 n_i n_j) / r³
 *
 * with d from charge to target, r = |d|, n = d / r. OpenStax, University Physics 2, §5.4 and §7.3;
 * J. D. Jackson, Classical Electrodynamics, 3rd ed., eqs. 1.5 and 1.17.
 *
 * Sums run in blocks of BLOCK charges, counted from `from`. Within a block the charges in even and
 * those in odd places are summed plainly, in the order of the columns; the sum of the two partial
 * sums is added to the total with the rounding error of that addition carried along (T. Ogita,
 * S. M. Rump, S. Oishi, SIAM J. Sci. Comput. 26 (2005), Sum2). So what a target gets depends on
 * nothing but its sources. The kernels of WebAssembly do the same in two lanes and give the same
 * bits (0 ulps); these are the definition, and what is used where there is no WebAssembly.
 *
 * Rows of sums hold V, Eₓ, E_y, E_z, G_xx, G_xy, G_xz, G_yy, G_yz, G_zz, and at CARRIED from each
 * its carried error. A charge at no distance makes them infinite or NaN: see TARGET_NEAREST.
 */
export const addPotential: SumKernel = (charges, from, to, batch, first, last) =>
  overTargets(potentialAt, charges, from, to, batch, first, last);

export const addField: SumKernel = (charges, from, to, batch, first, last) =>
  overTargets(fieldAt, charges, from, to, batch, first, last);

export const addFieldGradient: SumKernel = (charges, from, to, batch, first, last) =>
  overTargets(gradientAt, charges, from, to, batch, first, last);

/** Adds to the row of sums at `row` of `out`; returns the nearest squared distance so far [m²]. */
type TargetKernel = (
  charges: ChargeColumns,
  from: number,
  to: number,
  x: number,
  y: number,
  z: number,
  nearest: number,
  out: Float64Array,
  row: number,
) => number;

function overTargets(
  kernel: TargetKernel,
  charges: ChargeColumns,
  from: number,
  to: number,
  {values, capacity}: TargetBatch,
  first: number,
  last: number,
): void {
  for (let i = first; i < last; i++) {
    const x = values[TARGET_X * capacity + i];
    const y = values[TARGET_Y * capacity + i];
    const z = values[TARGET_Z * capacity + i];
    const place = TARGET_NEAREST * capacity + i;
    const row = SUMS_AT * capacity + SUMS * i;
    values[place] = kernel(charges, from, to, x, y, z, values[place], values, row);
  }
}

/** Adds `term` to the sum at `index`, carrying the rounding error. */
function carry(sums: Float64Array, index: number, term: number): void {
  const before = sums[index];
  const after = before + term;
  sums[index] = after;
  sums[index + CARRIED] += sumError(before, term, after);
}

const potentialAt: TargetKernel = (charges, from, to, x, y, z, nearest, out, row) => {
  const {x: sx, y: sy, z: sz, q} = charges;
  let near = nearest;
  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    let vBlock = 0;
    for (let lane = 0; lane < 2; lane++) {
      let v = 0;
      for (let j = start + lane; j < end; j += 2) {
        const dx = x - sx[j];
        const dy = y - sy[j];
        const dz = z - sz[j];
        const square = dx * dx + dy * dy + dz * dz;
        near = Math.min(near, square);
        v += q[j] * (1 / Math.sqrt(square));
      }
      vBlock += v;
    }
    carry(out, row, vBlock);
  }
  return near;
};

const fieldAt: TargetKernel = (charges, from, to, x, y, z, nearest, out, row) => {
  const {x: sx, y: sy, z: sz, q} = charges;
  let near = nearest;
  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    let vBlock = 0;
    let exBlock = 0;
    let eyBlock = 0;
    let ezBlock = 0;
    for (let lane = 0; lane < 2; lane++) {
      let v = 0;
      let ex = 0;
      let ey = 0;
      let ez = 0;
      for (let j = start + lane; j < end; j += 2) {
        const dx = x - sx[j];
        const dy = y - sy[j];
        const dz = z - sz[j];
        const square = dx * dx + dy * dy + dz * dz;
        near = Math.min(near, square);
        const inverse = 1 / Math.sqrt(square);
        const potential = q[j] * inverse;
        const strength = potential * (inverse * inverse);
        v += potential;
        ex += strength * dx;
        ey += strength * dy;
        ez += strength * dz;
      }
      vBlock += v;
      exBlock += ex;
      eyBlock += ey;
      ezBlock += ez;
    }
    carry(out, row, vBlock);
    carry(out, row + 1, exBlock);
    carry(out, row + 2, eyBlock);
    carry(out, row + 3, ezBlock);
  }
  return near;
};

const gradientAt: TargetKernel = (charges, from, to, x, y, z, nearest, out, row) => {
  const {x: sx, y: sy, z: sz, q} = charges;
  const block = new Float64Array(CARRIED);
  let near = nearest;
  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    block.fill(0);
    for (let lane = 0; lane < 2; lane++) {
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
      for (let j = start + lane; j < end; j += 2) {
        const dx = x - sx[j];
        const dy = y - sy[j];
        const dz = z - sz[j];
        const square = dx * dx + dy * dy + dz * dz;
        near = Math.min(near, square);
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
      block[0] += v;
      block[1] += ex;
      block[2] += ey;
      block[3] += ez;
      block[4] += xx;
      block[5] += xy;
      block[6] += xz;
      block[7] += yy;
      block[8] += yz;
      block[9] += zz;
    }
    for (let n = 0; n < CARRIED; n++) carry(out, row + n, block[n]);
  }
  return near;
};
