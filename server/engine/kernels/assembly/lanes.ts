// Vectors of two f64 or four f32: what both precisions share.

/** Numbers in a vector. */
// @ts-ignore: decorator
@inline
export function lanes<T>(): i32 {
  return 16 / sizeof<T>();
}

/** Four or two points of a column as they lie in a box: (value − centre) · scale. */
// @ts-ignore: decorator
@inline
export function local<T>(column: usize, at: i32, centre: f64, scale: f64): v128 {
  const c = f64x2.splat(centre);
  const s = f64x2.splat(scale);
  const first = f64x2.mul(f64x2.sub(v128.load(column + (<usize>at << 3)), c), s);
  if (sizeof<T>() == 8) return first;
  const second = f64x2.mul(f64x2.sub(v128.load(column + (<usize>at << 3), 16), c), s);
  return single(first, second);
}

/** Four numbers in single precision. */
// @ts-ignore: decorator
@inline
export function single(first: v128, second: v128): v128 {
  return v128.shuffle<f32>(
    f32x4.demote_f64x2_zero(first),
    f32x4.demote_f64x2_zero(second),
    0,
    1,
    4,
    5,
  );
}

/** The two upper numbers of four, in double precision. */
// @ts-ignore: decorator
@inline
export function upper(value: v128): v128 {
  return f64x2.promote_low_f32x4(v128.shuffle<f32>(value, value, 2, 3, 2, 3));
}

/** The sum of the numbers of a vector. */
// @ts-ignore: decorator
@inline
export function total<T>(value: v128): T {
  if (sizeof<T>() == 8) {
    return <T>(f64x2.extract_lane(value, 0) + f64x2.extract_lane(value, 1));
  }
  return <T>(
    (f32x4.extract_lane(value, 0) +
      f32x4.extract_lane(value, 1) +
      (f32x4.extract_lane(value, 2) + f32x4.extract_lane(value, 3)))
  );
}

/** out[at …] += value · scale, in double precision. */
// @ts-ignore: decorator
@inline
function addScaled<T>(out: usize, at: i32, value: v128, scale: f64): void {
  const s = f64x2.splat(scale);
  const place = out + (<usize>at << 3);
  if (sizeof<T>() == 8) {
    v128.store(place, f64x2.add(v128.load(place), f64x2.mul(value, s)));
    return;
  }
  v128.store(place, f64x2.add(v128.load(place), f64x2.mul(f64x2.promote_low_f32x4(value), s)));
  v128.store(place, f64x2.add(v128.load(place, 16), f64x2.mul(upper(value), s)), 16);
}

/** Adds a vector to the one at an address. */
// @ts-ignore: decorator
@inline
export function addTo<T>(place: usize, value: v128): void {
  v128.store(place, v128.add<T>(v128.load(place), value));
}

/** Adds to the places of `out` that lie before `to`: what comes after is of another box. */
// @ts-ignore: decorator
@inline
export function addPart<T>(out: usize, at: i32, to: i32, value: v128, scale: f64): void {
  if (at + lanes<T>() <= to) {
    addScaled<T>(out, at, value, scale);
    return;
  }
  let rest = value;
  for (let i = at; i < to; i++) {
    const place = out + (<usize>i << 3);
    if (sizeof<T>() == 8) {
      store<f64>(place, load<f64>(place) + f64x2.extract_lane(rest, 0) * scale);
    } else {
      store<f64>(place, load<f64>(place) + <f64>f32x4.extract_lane(rest, 0) * scale);
      rest = v128.shuffle<f32>(rest, rest, 1, 2, 3, 3);
    }
  }
}
