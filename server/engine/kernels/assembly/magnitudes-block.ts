import {CHARGE_Q, CHARGE_RADIUS} from '../layout';
import {fold, HALVES, ONES, pairWithNothing, ROOT_SIX} from './sums';

/** `addMagnitudes` of sources/point-charge-magnitudes.ts for one block. */
// @ts-ignore: decorator
@inline
export function magnitudesBlock(
  tx: v128,
  ty: v128,
  tz: v128,
  targetRadius: v128,
  first: usize,
  stride: usize,
  count: i32,
  out: usize,
  spare: usize,
): void {
  const one = v128.load(ONES);
  const half = v128.load(HALVES);
  let v = f64x2.splat(0);
  let e = f64x2.splat(0);
  let g = f64x2.splat(0);
  let vMoved = f64x2.splat(0);
  let eMoved = f64x2.splat(0);
  let gMoved = f64x2.splat(0);
  let at = first;
  let step = stride;
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
      const inverse = f64x2.div(one, f64x2.sqrt(square));
      const radius = f64x2.add(v128.load(at + step * CHARGE_RADIUS), targetRadius);
      const eta = f64x2.mul(f64x2.mul(half, radius), inverse);
      const near = f64x2.add(one, f64x2.add(eta, eta));
      const near2 = f64x2.mul(near, near);
      const first = f64x2.mul(f64x2.abs(v128.load(at + step * CHARGE_Q)), inverse);
      const second = f64x2.mul(first, inverse);
      const third = f64x2.mul(second, inverse);
      v = f64x2.add(v, first);
      e = f64x2.add(e, second);
      g = f64x2.add(g, third);
      vMoved = f64x2.add(vMoved, f64x2.mul(first, f64x2.mul(eta, near)));
      eMoved = f64x2.add(eMoved, f64x2.mul(second, f64x2.mul(f64x2.mul(eta, near), near2)));
      gMoved = f64x2.add(gMoved, f64x2.mul(third, f64x2.mul(eta, f64x2.mul(near2, near2))));
    }
    if (!isOdd) break;
    isOdd = 0;
    pairWithNothing(at, step, spare);
    at = spare;
    step = 16;
    end = spare + 16;
  }
  v128.store(out, f64x2.add(v128.load(out), fold(v, e)));
  v128.store(out, f64x2.add(v128.load(out, 16), fold(g, vMoved)), 16);
  const moved = fold(f64x2.add(eMoved, eMoved), f64x2.mul(v128.load(ROOT_SIX), gMoved));
  v128.store(out, f64x2.add(v128.load(out, 32), moved), 32);
}
