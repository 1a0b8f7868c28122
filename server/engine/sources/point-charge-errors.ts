import {sumError, upperHalf} from '../exact.ts';
import {
  BLOCK,
  BOUND_CARRIED,
  BOUND_SUMS,
  BOUND_SUMS_AT,
  ERRORS,
  ERRORS_AT,
  TARGET_RADIUS,
  TARGET_X,
  TARGET_X_REMAINDER,
  TARGET_Y,
  TARGET_Y_REMAINDER,
  TARGET_Z,
  TARGET_Z_REMAINDER,
} from '../kernels/layout.ts';
import type {SumKernel} from '../kernels/sum-kernels.ts';
import type {ChargeColumns} from './charge-columns.ts';

/**
 * What the sums of `addField` lack to the exact ones, to first order, with sign.
 *
 * Every operation of the kernel is repeated and its rounding error taken exactly (exact.ts), as is
 * what was rounded off positions and charges on the way in. With d = d̂ + δ, r⁻¹ = r̂⁻¹ (1 + ε):
 *
 *     q/r − t̂     = τ + t̂ ε + δq r̂⁻¹
 *     q d/r³ − f̂  = φ + (γ + (τ + δq r̂⁻¹) r̂⁻² + t̂ ι + 3 ĝ ε) d̂ + ĝ δ
 *
 * where τ, ι, γ, φ are the errors of the products t̂ = q r̂⁻¹, r̂⁻², ĝ = t̂ r̂⁻², f̂ = ĝ d̂.
 * A bound made of these is near the true error even for many charges, where a bound made of worst
 * cases is too large by the square root of their number.
 *
 * With η = (radius of charge and target) / r + 8 u, which is more than the relative size of any of
 * these, what is left out (second order, and the rounding of the errors themselves) is less than
 * 8 η² |q|/r for V and 32 η² |q|/r² for E, plus what adding n of them rounds, n/8 η² times the
 * same. Where η > 1/1000 the first order is not trusted and a worst case takes its place: a charge
 * moved by a part η of its distance changes V by at most η/(1 − η) and E by 2η/(1 − η)³ of its own.
 *
 * A row of ERRORS is added to: ΔV, ΔEₓ, ΔE_y, ΔE_z, and the two sums Σ η² |q|/r and Σ η² |q|/r²
 * (times 8, where a worst case stands in). A row of BOUND_SUMS holds V and E, summed in the order of
 * `addField`, and at BOUND_CARRIED from each its carried error.
 */
export const addFieldErrors: SumKernel = (charges, from, to, batch, first, last) => {
  for (let i = first; i < last; i++)
    addErrorsAt(charges, from, to, batch.values, batch.capacity, i);
};

function addErrorsAt(
  charges: ChargeColumns,
  from: number,
  to: number,
  values: Float64Array,
  capacity: number,
  i: number,
): void {
  const {x: sx, y: sy, z: sz, q, radius} = charges;
  const {xRemainder, yRemainder, zRemainder, qRemainder} = charges;
  const x = values[TARGET_X * capacity + i];
  const y = values[TARGET_Y * capacity + i];
  const z = values[TARGET_Z * capacity + i];
  const xr = values[TARGET_X_REMAINDER * capacity + i];
  const yr = values[TARGET_Y_REMAINDER * capacity + i];
  const zr = values[TARGET_Z_REMAINDER * capacity + i];
  const tr = values[TARGET_RADIUS * capacity + i];
  const sums = BOUND_SUMS_AT * capacity + BOUND_SUMS * i;
  const errors = ERRORS_AT * capacity + ERRORS * i;
  const block = new Float64Array(4);
  const blockErrors = new Float64Array(ERRORS);
  const foldErrors = new Float64Array(4);

  for (let start = from; start < to; start += BLOCK) {
    const end = Math.min(start + BLOCK, to);
    block.fill(0);
    blockErrors.fill(0);
    for (let lane = 0; lane < 2; lane++) {
      let v = 0;
      let ex = 0;
      let ey = 0;
      let ez = 0;
      let vError = 0;
      let exError = 0;
      let eyError = 0;
      let ezError = 0;
      let vRest = 0;
      let eRest = 0;
      for (let j = start + lane; j < end; j += 2) {
        const dx = x - sx[j];
        const dy = y - sy[j];
        const dz = z - sz[j];
        const cx = sumError(x, -sx[j], dx) + (xr - xRemainder[j]);
        const cy = sumError(y, -sy[j], dy) + (yr - yRemainder[j]);
        const cz = sumError(z, -sz[j], dz) + (zr - zRemainder[j]);

        const xx = dx * dx;
        const yy = dy * dy;
        const zz = dz * dz;
        const xy = xx + yy;
        const square = xy + zz;
        const dxu = upperHalf(dx);
        const dyu = upperHalf(dy);
        const dzu = upperHalf(dz);
        const dxl = dx - dxu;
        const dyl = dy - dyu;
        const dzl = dz - dzu;
        const squareError =
          dxu * dxu -
          xx +
          dxl * (dxu + dx) +
          (dyu * dyu - yy + dyl * (dyu + dy)) +
          (dzu * dzu - zz + dzl * (dzu + dz)) +
          (sumError(xx, yy, xy) + sumError(xy, zz, square)) +
          2 * (dx * cx + dy * cy + dz * cz);

        const root = Math.sqrt(square);
        const inverse = 1 / root;
        const inverse2 = inverse * inverse;
        const ru = upperHalf(root);
        const rl = root - ru;
        const iu = upperHalf(inverse);
        const il = inverse - iu;
        const rootRest = square - ru * ru - rl * (ru + root);
        const inverseRest = 1 - ru * iu - (ru * il + rl * inverse);
        const epsilon = inverseRest - 0.5 * (rootRest + squareError) * inverse2;

        const charge = q[j];
        const t = charge * inverse;
        const qu = upperHalf(charge);
        const ql = charge - qu;
        const tau = qu * iu - t + (qu * il + ql * inverse) + qRemainder[j] * inverse;
        const vDelta = tau + t * epsilon;

        const inverse2Error = iu * iu - inverse2 + il * (iu + inverse);
        const g = t * inverse2;
        const tu = upperHalf(t);
        const tl = t - tu;
        const ju = upperHalf(inverse2);
        const jl = inverse2 - ju;
        const gamma = tu * ju - g + (tu * jl + tl * inverse2);
        const gDelta = gamma + tau * inverse2 + t * inverse2Error + 3 * g * epsilon;
        const gu = upperHalf(g);
        const gl = g - gu;
        const fx = g * dx;
        const fy = g * dy;
        const fz = g * dz;

        const eta = (radius[j] + tr) * inverse + 8 * 2 ** -53;
        const size = Math.abs(t);
        if (eta <= 1e-3) {
          vError += vDelta;
          exError += gu * dxu - fx + (gu * dxl + gl * dx) + gDelta * dx + g * cx;
          eyError += gu * dyu - fy + (gu * dyl + gl * dy) + gDelta * dy + g * cy;
          ezError += gu * dzu - fz + (gu * dzl + gl * dz) + gDelta * dz + g * cz;
          vRest += size * (eta * eta);
          eRest += size * inverse * (eta * eta);
        } else {
          // The radius is twice the displacement, so eta / 2 < 1 / 2 here: the pair is not coincident.
          const part = Math.min(0.51, 0.5 * eta + 8 * 2 ** -53);
          const left = 1 - part;
          vRest += (size * part) / left / 8;
          eRest += (2 * size * inverse * part) / (left * left * left) / 8;
        }

        const vSum = v + t;
        const exSum = ex + fx;
        const eySum = ey + fy;
        const ezSum = ez + fz;
        vError += sumError(v, t, vSum);
        exError += sumError(ex, fx, exSum);
        eyError += sumError(ey, fy, eySum);
        ezError += sumError(ez, fz, ezSum);
        v = vSum;
        ex = exSum;
        ey = eySum;
        ez = ezSum;
      }
      fold(block, foldErrors, v, ex, ey, ez);
      blockErrors[0] += vError;
      blockErrors[1] += exError;
      blockErrors[2] += eyError;
      blockErrors[3] += ezError;
      blockErrors[4] += vRest;
      blockErrors[5] += eRest;
    }
    for (let n = 0; n < 4; n++) {
      const lost = foldErrors[n] + carryError(values, sums + n, block[n]);
      values[errors + n] += blockErrors[n] + lost;
    }
    values[errors + 4] += blockErrors[4];
    values[errors + 5] += blockErrors[5];
  }
}

/** Adds the partial sums of a lane to those of a block; notes what the last of them lose. */
function fold(
  block: Float64Array,
  errors: Float64Array,
  v: number,
  ex: number,
  ey: number,
  ez: number,
): void {
  foldOne(block, errors, 0, v);
  foldOne(block, errors, 1, ex);
  foldOne(block, errors, 2, ey);
  foldOne(block, errors, 3, ez);
}

function foldOne(block: Float64Array, errors: Float64Array, n: number, partial: number): void {
  const before = block[n];
  const after = before + partial;
  errors[n] = sumError(before, partial, after);
  block[n] = after;
}

/** Like `carry` of point-charge.ts, and returns what the carried error itself loses. */
function carryError(sums: Float64Array, index: number, term: number): number {
  const before = sums[index];
  const after = before + term;
  const error = sumError(before, term, after);
  const carried = sums[index + BOUND_CARRIED] + error;
  const lost = sumError(sums[index + BOUND_CARRIED], error, carried);
  sums[index] = after;
  sums[index + BOUND_CARRIED] = carried;
  return lost;
}
