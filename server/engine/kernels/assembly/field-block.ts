import {CARRIED} from '../layout';
import {carry, fold, ONES, pairWithNothing} from './sums';

/** `addField` of sources/point-charge.ts for one block; returns the nearest squares so far. */
// @ts-ignore: decorator
@inline
export function fieldBlock(
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
  let near = nearest;
  let v = f64x2.splat(0);
  let ex = f64x2.splat(0);
  let ey = f64x2.splat(0);
  let ez = f64x2.splat(0);
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
  return near;
}
