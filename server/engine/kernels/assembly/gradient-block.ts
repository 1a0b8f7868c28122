import {CARRIED} from '../layout';
import {carry, fold, ONES, pairWithNothing, THREES} from './sums';

/** `addFieldGradient` of sources/point-charge.ts for one block; returns the nearest squares so far. */
// @ts-ignore: decorator
@inline
export function gradientBlock(
  nearest: v128,
  tx: v128,
  ty: v128,
  tz: v128,
  at: usize,
  step: usize,
  count: i32,
  sums: usize,
  spare: usize,
): v128 {
  const one = v128.load(ONES);
  const three = v128.load(THREES);
  let near = nearest;
  let v = f64x2.splat(0);
  let ex = f64x2.splat(0);
  let ey = f64x2.splat(0);
  let ez = f64x2.splat(0);
  let xx = f64x2.splat(0);
  let xy = f64x2.splat(0);
  let xz = f64x2.splat(0);
  let yy = f64x2.splat(0);
  let yz = f64x2.splat(0);
  let zz = f64x2.splat(0);
  let end = at + (<usize>(count >> 1) << 4);
  let isOdd = count & 1;
  while (true) {
    for (; at < end; at += 16) {
      const dx = f64x2.sub(tx, v128.load(at));
      const dy = f64x2.sub(ty, v128.load(at + step));
      const dz = f64x2.sub(tz, v128.load(at + 2 * step));
      const square = f64x2.add(
        f64x2.add(f64x2.mul(dx, dx), f64x2.mul(dy, dy)),
        f64x2.mul(dz, dz),
      );
      near = f64x2.pmin(near, square);
      const inverse = f64x2.div(one, f64x2.sqrt(square));
      const term = f64x2.mul(v128.load(at + 3 * step), inverse);
      const strength = f64x2.mul(term, f64x2.mul(inverse, inverse));
      v = f64x2.add(v, term);
      ex = f64x2.add(ex, f64x2.mul(strength, dx));
      ey = f64x2.add(ey, f64x2.mul(strength, dy));
      ez = f64x2.add(ez, f64x2.mul(strength, dz));
      const nx = f64x2.mul(dx, inverse);
      const ny = f64x2.mul(dy, inverse);
      const nz = f64x2.mul(dz, inverse);
      const triple = f64x2.mul(three, strength);
      xx = f64x2.add(xx, f64x2.sub(strength, f64x2.mul(triple, f64x2.mul(nx, nx))));
      xy = f64x2.sub(xy, f64x2.mul(triple, f64x2.mul(nx, ny)));
      xz = f64x2.sub(xz, f64x2.mul(triple, f64x2.mul(nx, nz)));
      yy = f64x2.add(yy, f64x2.sub(strength, f64x2.mul(triple, f64x2.mul(ny, ny))));
      yz = f64x2.sub(yz, f64x2.mul(triple, f64x2.mul(ny, nz)));
      zz = f64x2.add(zz, f64x2.sub(strength, f64x2.mul(triple, f64x2.mul(nz, nz))));
    }
    if (!isOdd) break;
    isOdd = 0;
    pairWithNothing(at, step, spare);
    at = spare;
    step = 16;
    end = spare + 16;
  }
  const carried = sums + (CARRIED << 3);
  carry(sums, carried, fold(v, ex));
  carry(sums + 16, carried + 16, fold(ey, ez));
  carry(sums + 32, carried + 32, fold(xx, xy));
  carry(sums + 48, carried + 48, fold(xz, yy));
  carry(sums + 64, carried + 64, fold(yz, zz));
  return near;
}
