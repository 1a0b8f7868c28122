import {
  CHARGE_Q,
  CHARGE_Q_REMAINDER,
  CHARGE_RADIUS,
  CHARGE_X_REMAINDER,
  CHARGE_Y_REMAINDER,
  CHARGE_Z_REMAINDER,
} from '../layout';
import {fold, HALVES, ONES, pairWithNothing, sumError, upperHalf} from './sums';

/** 8 u, what η must not be above, and what stands in for it there; see the kernel in TypeScript. */
const ROUNDINGS: usize = memory.data<f64>([8.8817841970012523e-16, 8.8817841970012523e-16]);
const TRUSTED: usize = memory.data<f64>([1e-3, 1e-3]);
const MOST: usize = memory.data<f64>([0.51, 0.51]);
const EIGHTHS: usize = memory.data<f64>([0.125, 0.125]);

/** `addFieldErrors` of sources/point-charge-errors.ts for one block. */
// @ts-ignore: decorator
@inline
export function errorsBlock(
  tx: v128,
  ty: v128,
  tz: v128,
  txRemainder: v128,
  tyRemainder: v128,
  tzRemainder: v128,
  targetRadius: v128,
  first: usize,
  stride: usize,
  count: i32,
  sums: usize,
  carried: usize,
  errors: usize,
  spare: usize,
): void {
  const one = v128.load(ONES);
  const half = v128.load(HALVES);
  let v = f64x2.splat(0);
  let ex = f64x2.splat(0);
  let ey = f64x2.splat(0);
  let ez = f64x2.splat(0);
  let vError = f64x2.splat(0);
  let exError = f64x2.splat(0);
  let eyError = f64x2.splat(0);
  let ezError = f64x2.splat(0);
  let vRest = f64x2.splat(0);
  let eRest = f64x2.splat(0);
  let at = first;
  let step = stride;
  let end = at + (<usize>(count >> 1) << 4);
  let isOdd = count & 1;
  while (true) {
    for (; at < end; at += 16) {
      const sx = v128.load(at);
      const sy = v128.load(at + step);
      const sz = v128.load(at + 2 * step);
      const dx = f64x2.sub(tx, sx);
      const dy = f64x2.sub(ty, sy);
      const dz = f64x2.sub(tz, sz);
      const xr = f64x2.sub(txRemainder, v128.load(at + step * CHARGE_X_REMAINDER));
      const yr = f64x2.sub(tyRemainder, v128.load(at + step * CHARGE_Y_REMAINDER));
      const zr = f64x2.sub(tzRemainder, v128.load(at + step * CHARGE_Z_REMAINDER));
      const cx = f64x2.add(sumError(tx, f64x2.neg(sx), dx), xr);
      const cy = f64x2.add(sumError(ty, f64x2.neg(sy), dy), yr);
      const cz = f64x2.add(sumError(tz, f64x2.neg(sz), dz), zr);

      const xx = f64x2.mul(dx, dx);
      const yy = f64x2.mul(dy, dy);
      const zz = f64x2.mul(dz, dz);
      const xy = f64x2.add(xx, yy);
      const square = f64x2.add(xy, zz);
      const dxu = upperHalf(dx);
      const dyu = upperHalf(dy);
      const dzu = upperHalf(dz);
      const dxl = f64x2.sub(dx, dxu);
      const dyl = f64x2.sub(dy, dyu);
      const dzl = f64x2.sub(dz, dzu);
      const moved = f64x2.add(
        f64x2.add(f64x2.mul(dx, cx), f64x2.mul(dy, cy)),
        f64x2.mul(dz, cz),
      );
      const squareError = f64x2.add(
        f64x2.add(
          f64x2.add(
            f64x2.add(squareErrorOf(dx, dxu, dxl, xx), squareErrorOf(dy, dyu, dyl, yy)),
            squareErrorOf(dz, dzu, dzl, zz),
          ),
          f64x2.add(sumError(xx, yy, xy), sumError(xy, zz, square)),
        ),
        f64x2.add(moved, moved),
      );

      const root = f64x2.sqrt(square);
      const inverse = f64x2.div(one, root);
      const inverse2 = f64x2.mul(inverse, inverse);
      const ru = upperHalf(root);
      const rl = f64x2.sub(root, ru);
      const iu = upperHalf(inverse);
      const il = f64x2.sub(inverse, iu);
      const rootRest = f64x2.sub(
        f64x2.sub(square, f64x2.mul(ru, ru)),
        f64x2.mul(rl, f64x2.add(ru, root)),
      );
      const inverseRest = f64x2.sub(
        f64x2.sub(one, f64x2.mul(ru, iu)),
        f64x2.add(f64x2.mul(ru, il), f64x2.mul(rl, inverse)),
      );
      const epsilon = f64x2.sub(
        inverseRest,
        f64x2.mul(f64x2.mul(half, f64x2.add(rootRest, squareError)), inverse2),
      );

      const charge = v128.load(at + step * CHARGE_Q);
      const t = f64x2.mul(charge, inverse);
      const qu = upperHalf(charge);
      const ql = f64x2.sub(charge, qu);
      const tau = f64x2.add(
        f64x2.add(
          f64x2.sub(f64x2.mul(qu, iu), t),
          f64x2.add(f64x2.mul(qu, il), f64x2.mul(ql, inverse)),
        ),
        f64x2.mul(v128.load(at + step * CHARGE_Q_REMAINDER), inverse),
      );
      const vDelta = f64x2.add(tau, f64x2.mul(t, epsilon));

      const inverse2Error = squareErrorOf(inverse, iu, il, inverse2);
      const g = f64x2.mul(t, inverse2);
      const tu = upperHalf(t);
      const tl = f64x2.sub(t, tu);
      const ju = upperHalf(inverse2);
      const jl = f64x2.sub(inverse2, ju);
      const gamma = f64x2.add(
        f64x2.sub(f64x2.mul(tu, ju), g),
        f64x2.add(f64x2.mul(tu, jl), f64x2.mul(tl, inverse2)),
      );
      const g3 = f64x2.add(g, f64x2.add(g, g));
      const gDelta = f64x2.add(
        f64x2.add(
          f64x2.add(gamma, f64x2.mul(tau, inverse2)),
          f64x2.mul(t, inverse2Error),
        ),
        f64x2.mul(g3, epsilon),
      );
      const gu = upperHalf(g);
      const gl = f64x2.sub(g, gu);
      const fx = f64x2.mul(g, dx);
      const fy = f64x2.mul(g, dy);
      const fz = f64x2.mul(g, dz);

      const radius = f64x2.add(v128.load(at + step * CHARGE_RADIUS), targetRadius);
      const eta = f64x2.add(f64x2.mul(radius, inverse), v128.load(ROUNDINGS));
      const eta2 = f64x2.mul(eta, eta);
      const size = f64x2.abs(t);
      const isTrusted = f64x2.le(eta, v128.load(TRUSTED));
      // Zeros where the first order is not trusted: they leave the bits of a sum alone.
      const onX = forceError(g, gu, gl, dx, dxu, dxl, fx, gDelta, cx);
      const onY = forceError(g, gu, gl, dy, dyu, dyl, fy, gDelta, cy);
      const onZ = forceError(g, gu, gl, dz, dzu, dzl, fz, gDelta, cz);
      vError = f64x2.add(vError, v128.and(vDelta, isTrusted));
      exError = f64x2.add(exError, v128.and(onX, isTrusted));
      eyError = f64x2.add(eyError, v128.and(onY, isTrusted));
      ezError = f64x2.add(ezError, v128.and(onZ, isTrusted));
      vRest = f64x2.add(vRest, v128.and(f64x2.mul(size, eta2), isTrusted));
      const eSize = f64x2.mul(size, inverse);
      eRest = f64x2.add(eRest, v128.and(f64x2.mul(eSize, eta2), isTrusted));
      if (!i64x2.all_true(isTrusted)) {
        const eighth = v128.load(EIGHTHS);
        const some = f64x2.add(f64x2.mul(half, eta), v128.load(ROUNDINGS));
        const part = f64x2.pmin(v128.load(MOST), some);
        const left = f64x2.sub(one, part);
        const cube = f64x2.mul(f64x2.mul(left, left), left);
        const vMost = f64x2.mul(f64x2.div(f64x2.mul(size, part), left), eighth);
        const twice = f64x2.add(eSize, eSize);
        const eMost = f64x2.mul(f64x2.div(f64x2.mul(twice, part), cube), eighth);
        vRest = f64x2.add(vRest, v128.andnot(vMost, isTrusted));
        eRest = f64x2.add(eRest, v128.andnot(eMost, isTrusted));
      }

      const vSum = f64x2.add(v, t);
      const exSum = f64x2.add(ex, fx);
      const eySum = f64x2.add(ey, fy);
      const ezSum = f64x2.add(ez, fz);
      vError = f64x2.add(vError, sumError(v, t, vSum));
      exError = f64x2.add(exError, sumError(ex, fx, exSum));
      eyError = f64x2.add(eyError, sumError(ey, fy, eySum));
      ezError = f64x2.add(ezError, sumError(ez, fz, ezSum));
      v = vSum;
      ex = exSum;
      ey = eySum;
      ez = ezSum;
    }
    if (!isOdd) break;
    isOdd = 0;
    pairWithNothing(at, step, spare);
    at = spare;
    step = 16;
    end = spare + 16;
  }
  addFolded(sums, carried, errors, v, ex, vError, exError);
  addFolded(sums + 16, carried + 16, errors + 16, ey, ez, eyError, ezError);
  v128.store(errors, f64x2.add(v128.load(errors, 32), fold(vRest, eRest)), 32);
}

/** a · a − square, of which the halves are known. */
// @ts-ignore: decorator
@inline
function squareErrorOf(a: v128, upper: v128, lower: v128, square: v128): v128 {
  return f64x2.add(
    f64x2.sub(f64x2.mul(upper, upper), square),
    f64x2.mul(lower, f64x2.add(upper, a)),
  );
}

/** What the force g d lacks: the error of the product, of g and of d. */
// @ts-ignore: decorator
@inline
function forceError(
  g: v128,
  gu: v128,
  gl: v128,
  d: v128,
  du: v128,
  dl: v128,
  f: v128,
  gDelta: v128,
  c: v128,
): v128 {
  const product = f64x2.add(
    f64x2.sub(f64x2.mul(gu, du), f),
    f64x2.add(f64x2.mul(gu, dl), f64x2.mul(gl, d)),
  );
  return f64x2.add(f64x2.add(product, f64x2.mul(gDelta, d)), f64x2.mul(g, c));
}

/** Folds and carries two sums, and adds to their errors what the block and the two additions lose. */
// @ts-ignore: decorator
@inline
function addFolded(
  sums: usize,
  carried: usize,
  errors: usize,
  a: v128,
  b: v128,
  aError: v128,
  bError: v128,
): void {
  const first = v128.shuffle<f64>(a, b, 0, 2);
  const second = v128.shuffle<f64>(a, b, 1, 3);
  const term = f64x2.add(first, second);
  const before = v128.load(sums);
  const after = f64x2.add(before, term);
  const error = sumError(before, term, after);
  const carriedBefore = v128.load(carried);
  const carriedAfter = f64x2.add(carriedBefore, error);
  const lost = f64x2.add(
    sumError(first, second, term),
    sumError(carriedBefore, error, carriedAfter),
  );
  const all = f64x2.add(fold(aError, bError), lost);
  v128.store(sums, after);
  v128.store(carried, carriedAfter);
  v128.store(errors, f64x2.add(v128.load(errors), all));
}
