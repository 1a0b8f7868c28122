import {lanes} from './lanes';
import {Operator, Sources, Table, Targets} from './multipole-structs';

// Translations of expansions: multiplications by the matrices of multipole/tables, for as many
// boxes at once as make good use of every number of a matrix that is read.

/** Boxes that are translated together. */
const TOGETHER: usize = 4;
const GROUP = 20;

/** Far boxes are told by slot and number: multipole/interactions.ts. */
const SLOT_BITS = 11;

/** out[t] += matrix · input[t] for four runs of numbers, `inputStep` bytes apart; `outs` has addresses. */
export function apply<T>(operator: Operator, input: usize, inputStep: usize, outs: usize): void {
  const size = <usize>sizeof<T>();
  for (let g = 0; g < operator.groupCount; g++) {
    const group = operator.groups + <usize>g * GROUP;
    const rows = load<i32>(group);
    const columns = load<i32>(group, 8);
    let data = operator.data + <usize>load<i32>(group, 16) * size;
    const from = input + <usize>load<i32>(group, 4) * size;
    let to = <usize>load<i32>(group, 12) * size;
    for (let row = 0; row < rows; row += 8) {
      if (sizeof<T>() == 4) {
        if (rows - row >= 8) eightSingle(columns, data, from, inputStep, outs, to);
        else fourSingle(columns, data, from, inputStep, outs, to);
      } else {
        if (rows - row >= 8) {
          eightDouble(columns, data, from, inputStep, outs, to);
          eightDouble(columns, data, from + 2 * inputStep, inputStep, outs + 8, to);
        } else {
          fourDouble(columns, data, from, inputStep, outs, to);
        }
      }
      data += <usize>columns * size * <usize>min(8, rows - row);
      to += 8 * size;
    }
  }
}

// @ts-ignore: decorator
@inline
function addTo<T>(place: usize, value: v128): void {
  v128.store(place, v128.add<T>(v128.load(place), value));
}

// @ts-ignore: decorator
@inline
function out(outs: usize, t: usize, to: usize): usize {
  return load<usize>(outs + (t << 2)) + to;
}

/** 8 rows, 4 boxes. */
function eightSingle(
  columns: i32,
  data: usize,
  input: usize,
  step: usize,
  outs: usize,
  to: usize,
): void {
  let a0 = f32x4.splat(0);
  let a1 = a0;
  let b0 = a0;
  let b1 = a0;
  let c0 = a0;
  let c1 = a0;
  let d0 = a0;
  let d1 = a0;
  const end = data + (<usize>columns << 5);
  const step3 = 3 * step;
  for (let at = data, from = input; at < end; at += 32, from += 4) {
    const k0 = v128.load(at);
    const k1 = v128.load(at, 16);
    let value = v128.load32_splat(from);
    a0 = f32x4.add(a0, f32x4.mul(k0, value));
    a1 = f32x4.add(a1, f32x4.mul(k1, value));
    value = v128.load32_splat(from + step);
    b0 = f32x4.add(b0, f32x4.mul(k0, value));
    b1 = f32x4.add(b1, f32x4.mul(k1, value));
    value = v128.load32_splat(from + 2 * step);
    c0 = f32x4.add(c0, f32x4.mul(k0, value));
    c1 = f32x4.add(c1, f32x4.mul(k1, value));
    value = v128.load32_splat(from + step3);
    d0 = f32x4.add(d0, f32x4.mul(k0, value));
    d1 = f32x4.add(d1, f32x4.mul(k1, value));
  }
  addTo<f32>(out(outs, 0, to), a0);
  addTo<f32>(out(outs, 0, to) + 16, a1);
  addTo<f32>(out(outs, 1, to), b0);
  addTo<f32>(out(outs, 1, to) + 16, b1);
  addTo<f32>(out(outs, 2, to), c0);
  addTo<f32>(out(outs, 2, to) + 16, c1);
  addTo<f32>(out(outs, 3, to), d0);
  addTo<f32>(out(outs, 3, to) + 16, d1);
}

/** 4 rows, 4 boxes. */
function fourSingle(
  columns: i32,
  data: usize,
  input: usize,
  step: usize,
  outs: usize,
  to: usize,
): void {
  let a = f32x4.splat(0);
  let b = a;
  let c = a;
  let d = a;
  const end = data + (<usize>columns << 4);
  const step3 = 3 * step;
  for (let at = data, from = input; at < end; at += 16, from += 4) {
    const k = v128.load(at);
    a = f32x4.add(a, f32x4.mul(k, v128.load32_splat(from)));
    b = f32x4.add(b, f32x4.mul(k, v128.load32_splat(from + step)));
    c = f32x4.add(c, f32x4.mul(k, v128.load32_splat(from + 2 * step)));
    d = f32x4.add(d, f32x4.mul(k, v128.load32_splat(from + step3)));
  }
  addTo<f32>(out(outs, 0, to), a);
  addTo<f32>(out(outs, 1, to), b);
  addTo<f32>(out(outs, 2, to), c);
  addTo<f32>(out(outs, 3, to), d);
}

/** 8 rows, 2 boxes. */
function eightDouble(
  columns: i32,
  data: usize,
  input: usize,
  step: usize,
  outs: usize,
  to: usize,
): void {
  let a0 = f64x2.splat(0);
  let a1 = a0;
  let a2 = a0;
  let a3 = a0;
  let b0 = a0;
  let b1 = a0;
  let b2 = a0;
  let b3 = a0;
  const end = data + (<usize>columns << 6);
  for (let at = data, from = input; at < end; at += 64, from += 8) {
    const k0 = v128.load(at);
    const k1 = v128.load(at, 16);
    const k2 = v128.load(at, 32);
    const k3 = v128.load(at, 48);
    let value = v128.load64_splat(from);
    a0 = f64x2.add(a0, f64x2.mul(k0, value));
    a1 = f64x2.add(a1, f64x2.mul(k1, value));
    a2 = f64x2.add(a2, f64x2.mul(k2, value));
    a3 = f64x2.add(a3, f64x2.mul(k3, value));
    value = v128.load64_splat(from + step);
    b0 = f64x2.add(b0, f64x2.mul(k0, value));
    b1 = f64x2.add(b1, f64x2.mul(k1, value));
    b2 = f64x2.add(b2, f64x2.mul(k2, value));
    b3 = f64x2.add(b3, f64x2.mul(k3, value));
  }
  addTo<f64>(out(outs, 0, to), a0);
  addTo<f64>(out(outs, 0, to) + 16, a1);
  addTo<f64>(out(outs, 0, to) + 32, a2);
  addTo<f64>(out(outs, 0, to) + 48, a3);
  addTo<f64>(out(outs, 1, to), b0);
  addTo<f64>(out(outs, 1, to) + 16, b1);
  addTo<f64>(out(outs, 1, to) + 32, b2);
  addTo<f64>(out(outs, 1, to) + 48, b3);
}

/** 4 rows, 4 boxes. */
function fourDouble(
  columns: i32,
  data: usize,
  input: usize,
  step: usize,
  outs: usize,
  to: usize,
): void {
  let a0 = f64x2.splat(0);
  let a1 = a0;
  let b0 = a0;
  let b1 = a0;
  let c0 = a0;
  let c1 = a0;
  let d0 = a0;
  let d1 = a0;
  const end = data + (<usize>columns << 5);
  const step3 = 3 * step;
  for (let at = data, from = input; at < end; at += 32, from += 8) {
    const k0 = v128.load(at);
    const k1 = v128.load(at, 16);
    let value = v128.load64_splat(from);
    a0 = f64x2.add(a0, f64x2.mul(k0, value));
    a1 = f64x2.add(a1, f64x2.mul(k1, value));
    value = v128.load64_splat(from + step);
    b0 = f64x2.add(b0, f64x2.mul(k0, value));
    b1 = f64x2.add(b1, f64x2.mul(k1, value));
    value = v128.load64_splat(from + 2 * step);
    c0 = f64x2.add(c0, f64x2.mul(k0, value));
    c1 = f64x2.add(c1, f64x2.mul(k1, value));
    value = v128.load64_splat(from + step3);
    d0 = f64x2.add(d0, f64x2.mul(k0, value));
    d1 = f64x2.add(d1, f64x2.mul(k1, value));
  }
  addTo<f64>(out(outs, 0, to), a0);
  addTo<f64>(out(outs, 0, to) + 16, a1);
  addTo<f64>(out(outs, 1, to), b0);
  addTo<f64>(out(outs, 1, to) + 16, b1);
  addTo<f64>(out(outs, 2, to), c0);
  addTo<f64>(out(outs, 2, to) + 16, c1);
  addTo<f64>(out(outs, 3, to), d0);
  addTo<f64>(out(outs, 3, to) + 16, d1);
}

/**
 * The sums with signs of up to 8 expansions at `inputs` (addresses), chunk by chunk where the
 * operator takes them from.
 */
function gather<T>(operator: Operator, inputs: usize, to: usize): void {
  const signs = operator.signs;
  const moves = operator.moves + 4;
  const end = moves + <usize>load<i32>(operator.moves) * <usize>(4 + 4 * signs);
  if (signs == 8) gatherEight<T>(inputs, moves, end, to);
  else if (signs == 4) gatherFour<T>(inputs, moves, end, to);
  else gatherTwo<T>(inputs, moves, end, to);
}

/** Numbers of a chunk: ROW_UNIT of multipole/tables/operator.ts. */
const CHUNK: usize = 4;

// @ts-ignore: decorator
@inline
function input(inputs: usize, s: usize, start: usize): usize {
  return load<usize>(inputs + (s << 2)) + start;
}

// @ts-ignore: decorator
@inline
function source<T>(move: usize): usize {
  return <usize>load<i32>(move) * sizeof<T>();
}

// @ts-ignore: decorator
@inline
function target<T>(move: usize, g: usize, to: usize): usize {
  return to + <usize>load<i32>(move + 4 + (g << 2)) * sizeof<T>();
}

function gatherEight<T>(inputs: usize, moves: usize, end: usize, to: usize): void {
  const i0 = input(inputs, 0, 0);
  const i1 = input(inputs, 1, 0);
  const i2 = input(inputs, 2, 0);
  const i3 = input(inputs, 3, 0);
  const i4 = input(inputs, 4, 0);
  const i5 = input(inputs, 5, 0);
  const i6 = input(inputs, 6, 0);
  const i7 = input(inputs, 7, 0);
  for (let move = moves; move < end; move += 36) {
    const from = source<T>(move);
    for (let j: usize = 0; j < CHUNK * sizeof<T>(); j += 16) {
      const at = from + j;
      let a = v128.load(i0 + at);
      let b = v128.load(i1 + at);
      const a0 = v128.add<T>(a, b);
      const a1 = v128.sub<T>(a, b);
      a = v128.load(i2 + at);
      b = v128.load(i3 + at);
      const a2 = v128.add<T>(a, b);
      const a3 = v128.sub<T>(a, b);
      a = v128.load(i4 + at);
      b = v128.load(i5 + at);
      const a4 = v128.add<T>(a, b);
      const a5 = v128.sub<T>(a, b);
      a = v128.load(i6 + at);
      b = v128.load(i7 + at);
      const a6 = v128.add<T>(a, b);
      const a7 = v128.sub<T>(a, b);
      const b0 = v128.add<T>(a0, a2);
      const b2 = v128.sub<T>(a0, a2);
      const b4 = v128.add<T>(a4, a6);
      const b6 = v128.sub<T>(a4, a6);
      v128.store(target<T>(move, 0, to) + j, v128.add<T>(b0, b4));
      v128.store(target<T>(move, 4, to) + j, v128.sub<T>(b0, b4));
      v128.store(target<T>(move, 2, to) + j, v128.add<T>(b2, b6));
      v128.store(target<T>(move, 6, to) + j, v128.sub<T>(b2, b6));
      const b1 = v128.add<T>(a1, a3);
      const b3 = v128.sub<T>(a1, a3);
      const b5 = v128.add<T>(a5, a7);
      const b7 = v128.sub<T>(a5, a7);
      v128.store(target<T>(move, 1, to) + j, v128.add<T>(b1, b5));
      v128.store(target<T>(move, 5, to) + j, v128.sub<T>(b1, b5));
      v128.store(target<T>(move, 3, to) + j, v128.add<T>(b3, b7));
      v128.store(target<T>(move, 7, to) + j, v128.sub<T>(b3, b7));
    }
  }
}

function gatherFour<T>(inputs: usize, moves: usize, end: usize, to: usize): void {
  const i0 = input(inputs, 0, 0);
  const i1 = input(inputs, 1, 0);
  const i2 = input(inputs, 2, 0);
  const i3 = input(inputs, 3, 0);
  for (let move = moves; move < end; move += 20) {
    const from = source<T>(move);
    for (let j: usize = 0; j < CHUNK * sizeof<T>(); j += 16) {
      const at = from + j;
      const a = v128.load(i0 + at);
      const b = v128.load(i1 + at);
      const c = v128.load(i2 + at);
      const d = v128.load(i3 + at);
      const a0 = v128.add<T>(a, b);
      const a1 = v128.sub<T>(a, b);
      const a2 = v128.add<T>(c, d);
      const a3 = v128.sub<T>(c, d);
      v128.store(target<T>(move, 0, to) + j, v128.add<T>(a0, a2));
      v128.store(target<T>(move, 2, to) + j, v128.sub<T>(a0, a2));
      v128.store(target<T>(move, 1, to) + j, v128.add<T>(a1, a3));
      v128.store(target<T>(move, 3, to) + j, v128.sub<T>(a1, a3));
    }
  }
}

function gatherTwo<T>(inputs: usize, moves: usize, end: usize, to: usize): void {
  const i0 = input(inputs, 0, 0);
  const i1 = input(inputs, 1, 0);
  for (let move = moves; move < end; move += 12) {
    const from = source<T>(move);
    for (let j: usize = 0; j < CHUNK * sizeof<T>(); j += 16) {
      const a = v128.load(i0 + from + j);
      const b = v128.load(i1 + from + j);
      v128.store(target<T>(move, 0, to) + j, v128.add<T>(a, b));
      v128.store(target<T>(move, 1, to) + j, v128.sub<T>(a, b));
    }
  }
}

/** Bytes that an address, and the addresses of up to 8 inputs, take. */
const ADDRESS = 4;
const INPUTS = 32;

/** Whether any of the boxes that begin at `box` has children. */
function haveChildren(children: usize, box: i32, together: i32): bool {
  for (let t = box; t < box + together; t++) {
    if (load<i32>(children + (<usize>t << 3), 4) > 0) return true;
  }
  return false;
}

/** Multipoles of the parents `first … last − 1` from those of their children. */
// @ts-ignore: decorator
@inline
function upward<T>(
  sources: Sources,
  table: Table,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  const operator = changetype<Operator>(table.up);
  const bytes = <usize>table.size * sizeof<T>();
  const step = <usize>operator.inputLength * sizeof<T>();
  const inputs = scratch;
  const outs = inputs + INPUTS;
  const spare = outs + TOGETHER * ADDRESS;
  const gathered = (spare + 15) & ~15;
  const nowhere = gathered + TOGETHER * step;
  for (let box = first; box < last; box += <i32>TOGETHER) {
    const together = min(<i32>TOGETHER, last - box);
    if (!haveChildren(sources.children, box, together)) continue;
    for (let t = 0; t < <i32>TOGETHER; t++) {
      if (t >= together) {
        store<usize>(outs + <usize>t * ADDRESS, nowhere);
        continue;
      }
      const own = sources.children + (<usize>(box + t) << 3);
      const child = load<i32>(own);
      const count = load<i32>(own, 4);
      for (let s = 0; s < 8; s++) store<usize>(inputs + <usize>s * ADDRESS, sources.zeros);
      for (let c = child; c < child + count; c++) {
        // A sign is one where the child lies on the negative side.
        const s = load<i32>(sources.octants + (<usize>c << 2)) ^ 7;
        store<usize>(inputs + <usize>s * ADDRESS, sources.multipoles + <usize>c * bytes);
      }
      gather<T>(operator, inputs, gathered + <usize>t * step);
      const out = sources.multipoles + <usize>(box + t) * bytes;
      if (count > 0) memory.fill(out, 0, bytes);
      // A box without children has the multipoles of its charges.
      store<usize>(outs + <usize>t * ADDRESS, count > 0 ? out : nowhere);
    }
    apply<T>(operator, gathered, step, outs);
  }
}

/** What far boxes take of the multipoles of the boxes `first … last − 1`. */
// @ts-ignore: decorator
@inline
function compress<T>(
  sources: Sources,
  table: Table,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  const operator = changetype<Operator>(table.compress);
  const bytes = <usize>table.size * sizeof<T>();
  const kept = <usize>table.sourceSize * sizeof<T>();
  memory.fill(sources.compressed + <usize>first * kept, 0, <usize>(last - first) * kept);
  for (let box = first; box < last; box += <i32>TOGETHER) {
    for (let t = 0; t < <i32>TOGETHER; t++) {
      const out = sources.compressed + <usize>(box + t) * kept;
      store<usize>(scratch + <usize>t * ADDRESS, box + t < last ? out : scratch + 64);
    }
    // Beyond the last box lies room that is read and not used.
    apply<T>(operator, sources.multipoles + <usize>box * bytes, bytes, scratch);
  }
}

/** Adds to the local expansions of the boxes `first … last − 1` what their far boxes make there. */
// @ts-ignore: decorator
@inline
function farField<T>(
  sources: Sources,
  targets: Targets,
  table: Table,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  const size = <usize>sizeof<T>();
  const kept = <usize>table.sourceSize * size;
  const made = <usize>table.targetSize * size;
  const bytes = <usize>table.size * size;
  const slots = <usize>table.farCount * INPUTS;
  const inputs = scratch;
  const outs = inputs + TOGETHER * slots;
  const sums = (outs + TOGETHER * ADDRESS + 15) & ~15;
  const gathered = sums + TOGETHER * made;
  for (let box = first; box < last; box += <i32>TOGETHER) {
    const together = min(<i32>TOGETHER, last - box);
    for (let at = inputs; at < outs; at += ADDRESS) store<usize>(at, sources.zeros);
    memory.fill(sums, 0, TOGETHER * made);
    let isAny = false;
    for (let t = 0; t < <i32>TOGETHER; t++) store<usize>(outs + <usize>t * ADDRESS, sums + <usize>t * made);
    for (let t = 0; t < together; t++) {
      const starts = targets.farStarts + (<usize>(box + t) << 2);
      const end = load<i32>(starts, 4);
      for (let n = load<i32>(starts); n < end; n++) {
        const entry = load<u32>(targets.farEntries + (<usize>n << 2));
        const slot = <usize>(entry & ((1 << SLOT_BITS) - 1));
        const from = sources.compressed + <usize>(entry >> SLOT_BITS) * kept;
        store<usize>(inputs + <usize>t * slots + slot * ADDRESS, from);
        isAny = true;
      }
    }
    if (!isAny) continue;
    for (let c = 0; c < table.farCount; c++) {
      const operator = changetype<Operator>(table.far + <usize>c * offsetof<Operator>());
      const step = <usize>operator.inputLength * size;
      let isUsed = false;
      for (let t = 0; t < <i32>TOGETHER; t++) {
        const own = inputs + <usize>t * slots + <usize>c * INPUTS;
        for (let s = 0; s < operator.signs; s++) {
          if (load<usize>(own + <usize>s * ADDRESS) != sources.zeros) isUsed = true;
        }
      }
      if (!isUsed) continue;
      for (let t = 0; t < <i32>TOGETHER; t++) {
        const own = inputs + <usize>t * slots + <usize>c * INPUTS;
        gather<T>(operator, own, gathered + <usize>t * step);
      }
      apply<T>(operator, gathered, step, outs);
    }
    for (let t = 0; t < <i32>TOGETHER; t++) {
      const out = targets.locals + <usize>(box + t) * bytes;
      store<usize>(outs + <usize>t * ADDRESS, t < together ? out : gathered);
    }
    apply<T>(changetype<Operator>(table.expand), sums, made, outs);
  }
}

/** Hands the local expansions of the boxes `first … last − 1` down to their children. */
// @ts-ignore: decorator
@inline
function downward<T>(
  targets: Targets,
  table: Table,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  const operator = changetype<Operator>(table.down);
  const bytes = <usize>table.size * sizeof<T>();
  const outs = scratch;
  const children = outs + TOGETHER * ADDRESS;
  const parts = children + INPUTS;
  const nowhere = parts + TOGETHER * 8 * bytes;
  for (let box = first; box < last; box += <i32>TOGETHER) {
    const together = min(<i32>TOGETHER, last - box);
    if (!haveChildren(targets.children, box, together)) continue;
    memory.fill(parts, 0, TOGETHER * 8 * bytes);
    for (let t = 0; t < <i32>TOGETHER; t++) {
      store<usize>(outs + <usize>t * ADDRESS, parts + <usize>t * 8 * bytes);
    }
    apply<T>(operator, targets.locals + <usize>box * bytes, bytes, outs);
    for (let t = 0; t < together; t++) {
      const own = targets.children + (<usize>(box + t) << 3);
      const child = load<i32>(own);
      const count = load<i32>(own, 4);
      if (count == 0) continue;
      for (let s: usize = 0; s < 8; s++) store<usize>(children + s * ADDRESS, nowhere);
      for (let c = child; c < child + count; c++) {
        const s = <usize>(load<i32>(targets.octants + (<usize>c << 2)) ^ 7);
        store<usize>(children + s * ADDRESS, targets.locals + <usize>c * bytes);
      }
      spread<T>(parts + <usize>t * 8 * bytes, bytes, children);
    }
  }
}

/** To the child with signs s is added Σ_g (−1)^(g·s) part g. */
function spread<T>(parts: usize, bytes: usize, children: usize): void {
  for (let at = parts; at < parts + bytes; at += 16) {
    let a = v128.load(at);
    let b = v128.load(at + bytes);
    const a0 = v128.add<T>(a, b);
    const a1 = v128.sub<T>(a, b);
    a = v128.load(at + 2 * bytes);
    b = v128.load(at + 3 * bytes);
    const a2 = v128.add<T>(a, b);
    const a3 = v128.sub<T>(a, b);
    a = v128.load(at + 4 * bytes);
    b = v128.load(at + 5 * bytes);
    const a4 = v128.add<T>(a, b);
    const a5 = v128.sub<T>(a, b);
    a = v128.load(at + 6 * bytes);
    b = v128.load(at + 7 * bytes);
    const a6 = v128.add<T>(a, b);
    const a7 = v128.sub<T>(a, b);
    const j = at - parts;
    const b0 = v128.add<T>(a0, a2);
    const b2 = v128.sub<T>(a0, a2);
    const b4 = v128.add<T>(a4, a6);
    const b6 = v128.sub<T>(a4, a6);
    addTo<T>(input(children, 0, j), v128.add<T>(b0, b4));
    addTo<T>(input(children, 4, j), v128.sub<T>(b0, b4));
    addTo<T>(input(children, 2, j), v128.add<T>(b2, b6));
    addTo<T>(input(children, 6, j), v128.sub<T>(b2, b6));
    const b1 = v128.add<T>(a1, a3);
    const b3 = v128.sub<T>(a1, a3);
    const b5 = v128.add<T>(a5, a7);
    const b7 = v128.sub<T>(a5, a7);
    addTo<T>(input(children, 1, j), v128.add<T>(b1, b5));
    addTo<T>(input(children, 5, j), v128.sub<T>(b1, b5));
    addTo<T>(input(children, 3, j), v128.add<T>(b3, b7));
    addTo<T>(input(children, 7, j), v128.sub<T>(b3, b7));
  }
}

export function upSingle(
  sources: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  upward<f32>(changetype<Sources>(sources), changetype<Table>(table), first, last, scratch);
}

export function upDouble(
  sources: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  upward<f64>(changetype<Sources>(sources), changetype<Table>(table), first, last, scratch);
}

export function keptSingle(
  sources: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  compress<f32>(changetype<Sources>(sources), changetype<Table>(table), first, last, scratch);
}

export function keptDouble(
  sources: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  compress<f64>(changetype<Sources>(sources), changetype<Table>(table), first, last, scratch);
}

export function farSingle(
  sources: usize,
  targets: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  farField<f32>(changetype<Sources>(sources), changetype<Targets>(targets), changetype<Table>(table), first, last, scratch);
}

export function farDouble(
  sources: usize,
  targets: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  farField<f64>(changetype<Sources>(sources), changetype<Targets>(targets), changetype<Table>(table), first, last, scratch);
}

export function downSingle(
  targets: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  downward<f32>(changetype<Targets>(targets), changetype<Table>(table), first, last, scratch);
}

export function downDouble(
  targets: usize,
  table: usize,
  first: i32,
  last: i32,
  scratch: usize,
): void {
  downward<f64>(changetype<Targets>(targets), changetype<Table>(table), first, last, scratch);
}
