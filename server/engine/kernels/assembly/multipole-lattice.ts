import {Lattice, Operator, Sources, Table, Targets} from './multipole-structs';
import {apply} from './multipole-multiply';
import {ADDRESS} from './multipole-signs';

// Values at boxes whose targets are a whole regular lattice: the same points from the centre of every
// box, so the harmonics there are a matrix, and by symmetry only those of the points on the positive
// side of every axis are needed (multipole/lattice.ts).

/** Numbers of a leaf in the list: box, and the first node of it along each axis. */
const LEAF = 16;

/** V and −∇V of one box at the points on the positive side, by parity, to `parts`. */
function evaluate<T>(
  targets: Targets,
  table: Table,
  lattice: Lattice,
  box: i32,
  scratch: usize,
  parts: usize,
): void {
  const bytes = <usize>table.size * sizeof<T>();
  const expansion = targets.locals + <usize>box * bytes;
  const inputs = scratch + 32;
  const outs = scratch;
  const partBytes = <usize>lattice.rows * 8 * sizeof<T>();
  memory.copy(inputs, expansion, bytes);
  memory.fill(inputs + bytes, 0, 3 * bytes);
  for (let i = 0; i < table.termCount; i++) {
    const term = table.terms + <usize>i * 12;
    const value = load<T>(expansion + <usize>load<i32>(term, 4) * sizeof<T>());
    const place = <usize>load<i32>(lattice.places + (<usize>i << 2)) * sizeof<T>();
    const to = inputs + <usize>(1 + load<i32>(term)) * bytes + place;
    store<T>(to, load<T>(to) + value * load<T>(table.termFactors + <usize>i * sizeof<T>()));
  }
  memory.fill(parts, 0, 4 * partBytes);
  for (let n: usize = 0; n < 4; n++) store<usize>(outs + n * ADDRESS, parts + n * partBytes);
  apply<T>(changetype<Operator>(lattice.operator), inputs, bytes, outs);
}

/** Which of the points on the positive side is at `at` along an axis, and on which side it is. */
// @ts-ignore: decorator
@inline
function halfOf(at: i32, side: i32, isMirrored: bool): i32 {
  if (!isMirrored) return at;
  const low = side >> 1;
  return at >= low ? at - low : (side - 1 - at) - low;
}

function valuesOnLattice<T>(
  sources: Sources,
  targets: Targets,
  table: Table,
  lattice: Lattice,
  order: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  const rows = <usize>lattice.rows;
  const parts = scratch + 32 + 4 * <usize>table.size * sizeof<T>();
  const partBytes = rows * 8 * sizeof<T>();
  const isField = targets.ex != 0;
  for (let n = first; n < last; n++) {
    const leaf = list + <usize>n * LEAF;
    const box = load<i32>(leaf);
    evaluate<T>(targets, table, lattice, box, scratch, parts);
    const scale = 1 / load<f64>(targets.boxes + (<usize>box << 5), 24);
    const vScale = scale / sources.chargeScale;
    const eScale = -vScale * scale;
    const end = load<i32>(targets.ranges + (<usize>box << 3), 4);
    for (let t = load<i32>(targets.ranges + (<usize>box << 3)); t < end; t++) {
      const index = load<i32>(order + (<usize>t << 2));
      const row = index / lattice.countX;
      const i = index - row * lattice.countX - load<i32>(leaf, 4);
      const k = row / lattice.countY;
      const j = row - k * lattice.countY - load<i32>(leaf, 8);
      const x = halfOf(i, lattice.sideX, (lattice.mirrors & 1) != 0);
      const y = halfOf(j, lattice.sideY, (lattice.mirrors & 2) != 0);
      const z = halfOf(k - load<i32>(leaf, 12), lattice.sideZ, (lattice.mirrors & 4) != 0);
      // Bits of the axes along which the point is on the negative side.
      let s = 0;
      if ((lattice.mirrors & 1) != 0 && i < lattice.sideX >> 1) s |= 1;
      if ((lattice.mirrors & 2) != 0 && j < lattice.sideY >> 1) s |= 2;
      if ((lattice.mirrors & 4) != 0 && k - load<i32>(leaf, 12) < lattice.sideZ >> 1) s |= 4;
      const at = parts + <usize>(x + lattice.halfX * (y + lattice.halfY * z)) * sizeof<T>();
      const place = <usize>t << 3;
      add<T>(targets.v + place, at, rows, s, vScale);
      if (!isField) continue;
      add<T>(targets.ex + place, at + partBytes, rows, s, eScale);
      add<T>(targets.ey + place, at + 2 * partBytes, rows, s, eScale);
      add<T>(targets.ez + place, at + 3 * partBytes, rows, s, eScale);
    }
  }
}

/** Adds the parts of all parities, with the signs of the side that a point is on. */
// @ts-ignore: decorator
@inline
function add<T>(out: usize, at: usize, rows: usize, s: i32, scale: f64): void {
  let sum: T = 0;
  for (let parity = 0; parity < 8; parity++) {
    const part = load<T>(at + <usize>parity * rows * sizeof<T>());
    sum = (popcnt(parity & s) & 1) != 0 ? <T>(sum - part) : <T>(sum + part);
  }
  store<f64>(out, load<f64>(out) + <f64>sum * scale);
}

export function latticeSingle(
  sources: usize,
  targets: usize,
  table: usize,
  lattice: usize,
  order: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  valuesOnLattice<f32>(
    changetype<Sources>(sources),
    changetype<Targets>(targets),
    changetype<Table>(table),
    changetype<Lattice>(lattice),
    order,
    list,
    first,
    last,
    scratch,
  );
}

export function latticeDouble(
  sources: usize,
  targets: usize,
  table: usize,
  lattice: usize,
  order: usize,
  list: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  valuesOnLattice<f64>(
    changetype<Sources>(sources),
    changetype<Targets>(targets),
    changetype<Table>(table),
    changetype<Lattice>(lattice),
    order,
    list,
    first,
    last,
    scratch,
  );
}
