import {addPart, single, upper} from './lanes';
import {Sources, Targets} from './multipole-structs';

// Direct sums over the charges near a box. In single precision positions are taken from the centre
// of the box of the targets, in its size; pairs that are so close that this loses digits which count
// are summed in double precision one by one.

/** Charges taken at once, and how often sums in single precision are passed on to double. */
const CAPACITY = 2048;
const PART = 128;
/** Bytes of one charge: x, y, z, q in single and in double precision. */
const SINGLE = 16;
const DOUBLE = 32;
/** Bytes of a note of a charge that is close to some of four targets. */
const NOTE = 8;
/** [box sizes²] Nearer pairs are summed in double precision. */
const CLOSE: f32 = 0.0625;

/** Sums in double precision of four targets: V, Eₓ, E_y, E_z, each two vectors. */
const SUMS = 128;

/** The runs of charges near a box and its ancestors, one after the other. */
// @ts-ignore: decorator
@unmanaged
class Runs {
  /** Box whose runs these are, or −1 behind the last. */
  box: i32;
  /** Which of its runs, which charge of it, and where it ends. */
  entry: i32;
  at: i32;
  end: i32;
}

function begin(runs: Runs, targets: Targets, box: i32): void {
  runs.box = box;
  runs.entry = load<i32>(targets.nearStarts + (<usize>box << 2));
  runs.at = 0;
  runs.end = 0;
}

/** Whether there is another charge; then it is `runs.at`. */
function hasNext(runs: Runs, targets: Targets): bool {
  while (runs.at >= runs.end) {
    if (runs.box < 0) return false;
    const last = load<i32>(targets.nearStarts + (<usize>runs.box << 2), 4);
    if (runs.entry >= last) {
      runs.box = load<i32>(targets.parents + (<usize>runs.box << 2));
      if (runs.box >= 0) runs.entry = load<i32>(targets.nearStarts + (<usize>runs.box << 2));
      continue;
    }
    const entry = targets.nearEntries + (<usize>runs.entry << 3);
    runs.at = load<i32>(entry);
    runs.end = load<i32>(entry, 4);
    runs.entry++;
  }
  return true;
}

/**
 * Takes up to CAPACITY charges from the centre of a box, in its size, in single precision, and notes
 * where each came from; returns how many.
 */
function take(
  runs: Runs,
  sources: Sources,
  targets: Targets,
  box: usize,
  scale: f64,
  to: usize,
  origins: usize,
): i32 {
  const centre = v128.load(box);
  const z = f64x2.replace_lane(f64x2.splat(0), 0, load<f64>(box, 16));
  const xyScale = f64x2.splat(scale);
  const zScale = f64x2.replace_lane(f64x2.splat(1), 0, scale);
  let count = 0;
  while (count < CAPACITY && hasNext(runs, targets)) {
    const end = min(runs.end, runs.at + CAPACITY - count);
    let place = to + <usize>count * SINGLE;
    let origin = origins + (<usize>count << 2);
    count += end - runs.at;
    const last = sources.charges + <usize>end * DOUBLE;
    for (let from = sources.charges + <usize>runs.at * DOUBLE; from < last; from += DOUBLE) {
      const xy = f64x2.mul(f64x2.sub(v128.load(from), centre), xyScale);
      const zq = f64x2.mul(f64x2.sub(v128.load(from, 16), z), zScale);
      v128.store(place, single(xy, zq));
      store<usize>(origin, from);
      place += SINGLE;
      origin += 4;
    }
    runs.at = end;
  }
  return count;
}

// @ts-ignore: decorator
@inline
function pass(sums: usize, value: v128): void {
  v128.store(sums, f64x2.add(v128.load(sums), f64x2.promote_low_f32x4(value)));
  v128.store(sums, f64x2.add(v128.load(sums, 16), upper(value)), 16);
}

/** Four positions of targets in single precision, from the centre of their box. */
// @ts-ignore: decorator
@inline
function four(column: usize, centre: f64, scale: f64): v128 {
  const c = f64x2.splat(centre);
  const s = f64x2.splat(scale);
  return single(
    f64x2.mul(f64x2.sub(v128.load(column), c), s),
    f64x2.mul(f64x2.sub(v128.load(column, 16), c), s),
  );
}

/** Adds one charge to the sums of those of four targets that `mask` says are close to it. */
function addClose(
  targets: Targets,
  first: i32,
  to: i32,
  mask: i32,
  charge: usize,
  scale: f64,
  limit: f64,
  sums: usize,
): void {
  for (let lane = 0; lane < 4; lane++) {
    const i = first + lane;
    if (((mask >> lane) & 1) == 0 || i >= to) continue;
    const at = <usize>i << 3;
    const dx = load<f64>(targets.x + at) - load<f64>(charge);
    const dy = load<f64>(targets.y + at) - load<f64>(charge, 8);
    const dz = load<f64>(targets.z + at) - load<f64>(charge, 16);
    const square = dx * dx + dy * dy + dz * dz;
    // Whatever is not above the limit, a NaN among it.
    if (!(square > limit)) {
      store<u8>(targets.flags + i, 1);
      continue;
    }
    const inverse = 1 / (sqrt(square) * scale);
    const potential = load<f64>(charge, 24) * inverse;
    const strength = potential * inverse * inverse * scale;
    const own = sums + (<usize>lane << 3);
    store<f64>(own, load<f64>(own) + potential);
    store<f64>(own, load<f64>(own, 32) + strength * dx, 32);
    store<f64>(own, load<f64>(own, 64) + strength * dy, 64);
    store<f64>(own, load<f64>(own, 96) + strength * dz, 96);
  }
}

// @ts-ignore: decorator
@inline
function nearBoxSingle(
  isField: bool,
  sources: Sources,
  targets: Targets,
  box: i32,
  reach: f64,
  scratch: usize,
): void {
  const at = targets.boxes + (<usize>box << 5);
  const cx = load<f64>(at);
  const cy = load<f64>(at, 8);
  const cz = load<f64>(at, 16);
  const scale = 1 / load<f64>(at, 24);
  const from = load<i32>(targets.ranges + (<usize>box << 3));
  const to = load<i32>(targets.ranges + (<usize>box << 3), 4);
  const limit = reach * reach;
  const close = f32x4.splat(max(CLOSE, <f32>(limit * scale * scale * 1.0001)));
  const vScale = scale / sources.chargeScale;
  const eScale = vScale * scale;
  const runs = changetype<Runs>(scratch);
  const sums = scratch + 32;
  const charges = sums + SUMS;
  const origins = charges + CAPACITY * SINGLE;
  const notes = origins + CAPACITY * 4;
  begin(runs, targets, box);
  for (;;) {
    const count = take(runs, sources, targets, at, scale, charges, origins);
    if (count == 0) return;
    const last = charges + <usize>count * SINGLE;
    for (let i = from; i < to; i += 4) {
      const place = <usize>i << 3;
      const tx = four(targets.x + place, cx, scale);
      const ty = four(targets.y + place, cy, scale);
      const tz = four(targets.z + place, cz, scale);
      // Not memory.fill, which is a call out of WebAssembly.
      const zero = f64x2.splat(0);
      for (let at = sums; at < sums + SUMS; at += 16) v128.store(at, zero);
      for (let start = charges; start < last; start += PART * SINGLE) {
        const end = min(start + PART * SINGLE, last);
        let v = f32x4.splat(0);
        let ex = v;
        let ey = v;
        let ez = v;
        let note = notes;
        for (let s = start; s < end; s += SINGLE) {
          const dx = f32x4.sub(tx, v128.load32_splat(s));
          const dy = f32x4.sub(ty, v128.load32_splat(s, 4));
          const dz = f32x4.sub(tz, v128.load32_splat(s, 8));
          const square = f32x4.add(
            f32x4.add(f32x4.mul(dx, dx), f32x4.mul(dy, dy)),
            f32x4.mul(dz, dz),
          );
          const isClose = f32x4.le(square, close);
          let inverse = f32x4.div(v128.load(ONES), f32x4.sqrt(square));
          if (v128.any_true(isClose)) {
            inverse = v128.andnot(inverse, isClose);
            // Noted for later: a call in here would keep every sum in memory.
            store<usize>(note, s);
            store<i32>(note, i32x4.bitmask(isClose), 4);
            note += NOTE;
          }
          const potential = f32x4.mul(v128.load32_splat(s, 12), inverse);
          v = f32x4.add(v, potential);
          if (isField) {
            const strength = f32x4.mul(potential, f32x4.mul(inverse, inverse));
            ex = f32x4.add(ex, f32x4.mul(strength, dx));
            ey = f32x4.add(ey, f32x4.mul(strength, dy));
            ez = f32x4.add(ez, f32x4.mul(strength, dz));
          }
        }
        for (let at = notes; at < note; at += NOTE) {
          const charge = load<usize>(origins + ((load<usize>(at) - charges) >> 2));
          addClose(targets, i, to, load<i32>(at, 4), charge, scale, limit, sums);
        }
        pass(sums, v);
        if (isField) {
          pass(sums + 32, ex);
          pass(sums + 64, ey);
          pass(sums + 96, ez);
        }
      }
      for (let n = 0; n < 2; n++) {
        const own = sums + (<usize>n << 4);
        const first = i + 2 * n;
        if (first >= to) break;
        addPart<f64>(targets.v, first, to, v128.load(own), vScale);
        if (!isField) continue;
        addPart<f64>(targets.ex, first, to, v128.load(own, 32), eScale);
        addPart<f64>(targets.ey, first, to, v128.load(own, 64), eScale);
        addPart<f64>(targets.ez, first, to, v128.load(own, 96), eScale);
      }
    }
  }
}

const ONES: usize = memory.data<f32>([1, 1, 1, 1]);
const ONES_DOUBLE: usize = memory.data<f64>([1, 1]);

// @ts-ignore: decorator
@inline
function nearBoxDouble(
  isField: bool,
  sources: Sources,
  targets: Targets,
  box: i32,
  reach: f64,
  scratch: usize,
): void {
  const from = load<i32>(targets.ranges + (<usize>box << 3));
  const to = load<i32>(targets.ranges + (<usize>box << 3), 4);
  const scale = 1 / sources.chargeScale;
  const runs = changetype<Runs>(scratch);
  begin(runs, targets, box);
  while (hasNext(runs, targets)) {
    const charges = sources.charges + <usize>runs.at * DOUBLE;
    const last = sources.charges + <usize>runs.end * DOUBLE;
    runs.at = runs.end;
    for (let i = from; i < to; i += 2) {
      const place = <usize>i << 3;
      const tx = v128.load(targets.x + place);
      const ty = v128.load(targets.y + place);
      const tz = v128.load(targets.z + place);
      let nearest = f64x2.splat(Infinity);
      let v = f64x2.splat(0);
      let ex = v;
      let ey = v;
      let ez = v;
      for (let s = charges; s < last; s += DOUBLE) {
        const dx = f64x2.sub(tx, v128.load64_splat(s));
        const dy = f64x2.sub(ty, v128.load64_splat(s, 8));
        const dz = f64x2.sub(tz, v128.load64_splat(s, 16));
        const square = f64x2.add(
          f64x2.add(f64x2.mul(dx, dx), f64x2.mul(dy, dy)),
          f64x2.mul(dz, dz),
        );
        nearest = f64x2.pmin(nearest, square);
        const inverse = f64x2.div(v128.load(ONES_DOUBLE), f64x2.sqrt(square));
        const potential = f64x2.mul(v128.load64_splat(s, 24), inverse);
        v = f64x2.add(v, potential);
        if (isField) {
          const strength = f64x2.mul(potential, f64x2.mul(inverse, inverse));
          ex = f64x2.add(ex, f64x2.mul(strength, dx));
          ey = f64x2.add(ey, f64x2.mul(strength, dy));
          ez = f64x2.add(ez, f64x2.mul(strength, dz));
        }
      }
      addPart<f64>(targets.v, i, to, v, scale);
      if (isField) {
        addPart<f64>(targets.ex, i, to, ex, scale);
        addPart<f64>(targets.ey, i, to, ey, scale);
        addPart<f64>(targets.ez, i, to, ez, scale);
      }
      const limit = reach * reach;
      if (!(f64x2.extract_lane(nearest, 0) > limit)) store<u8>(targets.flags + i, 1);
      if (i + 1 < to && !(f64x2.extract_lane(nearest, 1) > limit)) {
        store<u8>(targets.flags + i + 1, 1);
      }
    }
  }
}

function nearFieldSingle(
  sources: Sources,
  targets: Targets,
  box: i32,
  reach: f64,
  scratch: usize,
): void {
  nearBoxSingle(true, sources, targets, box, reach, scratch);
}

function nearPotentialSingle(
  sources: Sources,
  targets: Targets,
  box: i32,
  reach: f64,
  scratch: usize,
): void {
  nearBoxSingle(false, sources, targets, box, reach, scratch);
}

function nearFieldDouble(
  sources: Sources,
  targets: Targets,
  box: i32,
  reach: f64,
  scratch: usize,
): void {
  nearBoxDouble(true, sources, targets, box, reach, scratch);
}

function nearPotentialDouble(
  sources: Sources,
  targets: Targets,
  box: i32,
  reach: f64,
  scratch: usize,
): void {
  nearBoxDouble(false, sources, targets, box, reach, scratch);
}

/**
 * Adds what the charges near the boxes `list[first … last − 1]` make at their targets, and flags the
 * targets that are within `reach` [m] of one: what they got is of no use.
 */
export function nearSingle(
  sources: usize,
  targets: usize,
  list: usize,
  first: i32,
  last: i32,
  reach: f64,
  scratch: usize,
): void {
  for (let n = first; n < last; n++) {
    const box = load<i32>(list + (<usize>n << 2));
    if (changetype<Targets>(targets).ex != 0) {
      nearFieldSingle(changetype<Sources>(sources), changetype<Targets>(targets), box, reach, scratch);
    } else {
      nearPotentialSingle(changetype<Sources>(sources), changetype<Targets>(targets), box, reach, scratch);
    }
  }
}

export function nearDouble(
  sources: usize,
  targets: usize,
  list: usize,
  first: i32,
  last: i32,
  reach: f64,
  scratch: usize,
): void {
  for (let n = first; n < last; n++) {
    const box = load<i32>(list + (<usize>n << 2));
    if (changetype<Targets>(targets).ex != 0) {
      nearFieldDouble(changetype<Sources>(sources), changetype<Targets>(targets), box, reach, scratch);
    } else {
      nearPotentialDouble(changetype<Sources>(sources), changetype<Targets>(targets), box, reach, scratch);
    }
  }
}
