import {addPart, lanes, local, total} from './lanes';
import {Sources, Table, Targets} from './multipole-structs';

// From charges to multipoles, and from local expansions to values. The harmonics are made by the
// recurrences of multipole/tables/harmonics.ts, order by order, for as many points at once as a
// vector holds. `factors` are, for every order m: the sectoral factor, then those of z and of r²
// for every degree above m. `places` say, in the same order, where in an expansion each number is.
// Columns of points are padded, so that the vector of the last ones may reach beyond them.

/** Adds the charges of a box to its multipoles. `scratch`: 16 bytes a number of an expansion, and 64. */
function charges<T>(sources: Sources, table: Table, box: i32, scratch: usize): void {
  const count = table.size;
  const p = table.degree;
  const at = sources.boxes + (<usize>box << 5);
  const cx = load<f64>(at);
  const cy = load<f64>(at, 8);
  const cz = load<f64>(at, 16);
  const scale = 1 / load<f64>(at, 24);
  const from = load<i32>(sources.ranges + (<usize>box << 3));
  const to = load<i32>(sources.ranges + (<usize>box << 3), 4);
  const out = sources.multipoles + <usize>box * <usize>count * sizeof<T>();
  memory.fill(scratch, 0, <usize>count << 4);
  const step = lanes<T>();
  const spare = scratch + (<usize>count << 4);
  for (let i = from; i < to; i += step) {
    // Charges lie one after the other: their numbers are turned into vectors here.
    for (let lane = 0; lane < step; lane++) {
      const charge = sources.charges + (<usize>(i + lane) << 5);
      const place = spare + <usize>lane * sizeof<T>();
      store<T>(place, <T>((load<f64>(charge) - cx) * scale));
      store<T>(place, <T>((load<f64>(charge, 8) - cy) * scale), 16);
      store<T>(place, <T>((load<f64>(charge, 16) - cz) * scale), 32);
      // Beyond the last one is whatever comes next.
      store<T>(place, i + lane < to ? <T>load<f64>(charge, 24) : <T>0, 48);
    }
    const px = v128.load(spare);
    const py = v128.load(spare, 16);
    const pz = v128.load(spare, 32);
    const charge = v128.load(spare, 48);
    const square = v128.add<T>(
      v128.add<T>(v128.mul<T>(px, px), v128.mul<T>(py, py)),
      v128.mul<T>(pz, pz),
    );
    let factor = table.factors;
    let place = table.places;
    let cosine = charge;
    let sine = v128.splat<T>(<T>0);
    for (let m = 0; m <= p; m++) {
      if (m > 0) {
        const f = v128.load_splat<T>(factor);
        factor += sizeof<T>();
        const c = v128.mul<T>(f, v128.sub<T>(v128.mul<T>(px, cosine), v128.mul<T>(py, sine)));
        sine = v128.mul<T>(f, v128.add<T>(v128.mul<T>(px, sine), v128.mul<T>(py, cosine)));
        cosine = c;
      }
      let c1 = cosine;
      let s1 = sine;
      let c2 = v128.splat<T>(<T>0);
      let s2 = c2;
      for (let l = m; ; ) {
        const own = scratch + (<usize>load<i32>(place) << 4);
        v128.store(own, v128.add<T>(v128.load(own), c1));
        if (m > 0) {
          const other = scratch + (<usize>load<i32>(place, 4) << 4);
          v128.store(other, v128.add<T>(v128.load(other), s1));
        }
        place += 8;
        if (++l > p) break;
        const a = v128.mul<T>(v128.load_splat<T>(factor), pz);
        const b = v128.mul<T>(v128.load_splat<T>(factor, sizeof<T>()), square);
        factor += 2 * sizeof<T>();
        const c = v128.sub<T>(v128.mul<T>(a, c1), v128.mul<T>(b, c2));
        c2 = c1;
        c1 = c;
        if (m > 0) {
          const s = v128.sub<T>(v128.mul<T>(a, s1), v128.mul<T>(b, s2));
          s2 = s1;
          s1 = s;
        }
      }
    }
  }
  for (let i = 0; i < count; i++) {
    const place = out + <usize>i * sizeof<T>();
    store<T>(place, load<T>(place) + total<T>(v128.load(scratch + (<usize>i << 4))));
  }
}

/**
 * Puts a local expansion in the order of the recurrences, each number with those of its three
 * derivatives: rows of 4.
 */
function derive<T>(table: Table, expansion: usize, rows: usize): void {
  const count = table.rowCount;
  memory.fill(rows, 0, <usize>count * 4 * sizeof<T>());
  for (let i = 0; i < count; i++) {
    const place = load<i32>(table.sequence + (<usize>i << 2));
    store<T>(rows + <usize>i * 4 * sizeof<T>(), load<T>(expansion + <usize>place * sizeof<T>()));
  }
  for (let i = 0; i < table.termCount; i++) {
    const term = table.terms + <usize>i * 12;
    const value = load<T>(expansion + <usize>load<i32>(term, 4) * sizeof<T>());
    const to = rows + <usize>(4 * load<i32>(term, 8) + 1 + load<i32>(term)) * sizeof<T>();
    store<T>(to, load<T>(to) + value * load<T>(table.termFactors + <usize>i * sizeof<T>()));
  }
}

/** Adds what the local expansion of a box gives at its targets: V, and E = −∇V where it is wanted. */
function values<T>(
  targets: Targets,
  table: Table,
  box: i32,
  chargeScale: f64,
  rows: usize,
): void {
  const p = table.degree;
  const isField = targets.ex != 0;
  const at = targets.boxes + (<usize>box << 5);
  const cx = load<f64>(at);
  const cy = load<f64>(at, 8);
  const cz = load<f64>(at, 16);
  const scale = 1 / load<f64>(at, 24);
  const from = load<i32>(targets.ranges + (<usize>box << 3));
  const to = load<i32>(targets.ranges + (<usize>box << 3), 4);
  const vScale = scale / chargeScale;
  const eScale = -vScale * scale;
  derive<T>(table, targets.locals + <usize>box * <usize>table.size * sizeof<T>(), rows);
  const step = lanes<T>();
  const zero = v128.splat<T>(<T>0);
  for (let i = from; i < to; i += step) {
    const px = local<T>(targets.x, i, cx, scale);
    const py = local<T>(targets.y, i, cy, scale);
    const pz = local<T>(targets.z, i, cz, scale);
    const square = v128.add<T>(
      v128.add<T>(v128.mul<T>(px, px), v128.mul<T>(py, py)),
      v128.mul<T>(pz, pz),
    );
    let factor = table.factors;
    let row = rows;
    let cosine = v128.splat<T>(<T>1);
    let sine = zero;
    let potential = zero;
    let gx = zero;
    let gy = zero;
    let gz = zero;
    for (let m = 0; m <= p; m++) {
      if (m > 0) {
        const f = v128.load_splat<T>(factor);
        factor += sizeof<T>();
        const c = v128.mul<T>(f, v128.sub<T>(v128.mul<T>(px, cosine), v128.mul<T>(py, sine)));
        sine = v128.mul<T>(f, v128.add<T>(v128.mul<T>(px, sine), v128.mul<T>(py, cosine)));
        cosine = c;
      }
      let c1 = cosine;
      let s1 = sine;
      let c2 = zero;
      let s2 = zero;
      for (let l = m; ; ) {
        potential = v128.add<T>(potential, v128.mul<T>(v128.load_splat<T>(row), c1));
        if (isField) {
          gx = v128.add<T>(gx, v128.mul<T>(v128.load_splat<T>(row, sizeof<T>()), c1));
          gy = v128.add<T>(gy, v128.mul<T>(v128.load_splat<T>(row, 2 * sizeof<T>()), c1));
          gz = v128.add<T>(gz, v128.mul<T>(v128.load_splat<T>(row, 3 * sizeof<T>()), c1));
        }
        row += 4 * sizeof<T>();
        if (m > 0) {
          potential = v128.add<T>(potential, v128.mul<T>(v128.load_splat<T>(row), s1));
          if (isField) {
            gx = v128.add<T>(gx, v128.mul<T>(v128.load_splat<T>(row, sizeof<T>()), s1));
            gy = v128.add<T>(gy, v128.mul<T>(v128.load_splat<T>(row, 2 * sizeof<T>()), s1));
            gz = v128.add<T>(gz, v128.mul<T>(v128.load_splat<T>(row, 3 * sizeof<T>()), s1));
          }
          row += 4 * sizeof<T>();
        }
        if (++l > p) break;
        const a = v128.mul<T>(v128.load_splat<T>(factor), pz);
        const b = v128.mul<T>(v128.load_splat<T>(factor, sizeof<T>()), square);
        factor += 2 * sizeof<T>();
        const c = v128.sub<T>(v128.mul<T>(a, c1), v128.mul<T>(b, c2));
        c2 = c1;
        c1 = c;
        if (m > 0) {
          const s = v128.sub<T>(v128.mul<T>(a, s1), v128.mul<T>(b, s2));
          s2 = s1;
          s1 = s;
        }
      }
    }
    addPart<T>(targets.v, i, to, potential, vScale);
    if (isField) {
      addPart<T>(targets.ex, i, to, gx, eScale);
      addPart<T>(targets.ey, i, to, gy, eScale);
      addPart<T>(targets.ez, i, to, gz, eScale);
    }
  }
}

/** Multipoles of the boxes `list[first … last − 1]` from their charges. */
// @ts-ignore: decorator
@inline
function chargesOf<T>(
  sources: usize,
  table: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  for (let n = first; n < last; n++) {
    const box = load<i32>(list + (<usize>n << 2));
    charges<T>(changetype<Sources>(sources), changetype<Table>(table), box, scratch);
  }
}

/** Values at the targets of the boxes `list[first … last − 1]` from their local expansions. */
// @ts-ignore: decorator
@inline
function valuesOf<T>(
  sources: usize,
  targets: usize,
  table: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  const chargeScale = changetype<Sources>(sources).chargeScale;
  for (let n = first; n < last; n++) {
    const box = load<i32>(list + (<usize>n << 2));
    values<T>(changetype<Targets>(targets), changetype<Table>(table), box, chargeScale, scratch);
  }
}

export function multipolesSingle(
  sources: usize,
  table: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  chargesOf<f32>(sources, table, list, first, last, scratch);
}

export function multipolesDouble(
  sources: usize,
  table: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  chargesOf<f64>(sources, table, list, first, last, scratch);
}

export function valuesSingle(
  sources: usize,
  targets: usize,
  table: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  valuesOf<f32>(sources, targets, table, list, first, last, scratch);
}

export function valuesDouble(
  sources: usize,
  targets: usize,
  table: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  valuesOf<f64>(sources, targets, table, list, first, last, scratch);
}
