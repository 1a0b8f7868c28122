import {apply} from './multipole-multiply';
import {ADDRESS, gather, INPUTS, spread} from './multipole-signs';
import {Operator, Sources, Table, Targets} from './multipole-structs';

// Translations of expansions from box to box.

/** Boxes that are translated together. */
const TOGETHER: usize = 4;

/** Far boxes are told by slot and number: multipole/interactions.ts. */
const SLOT_BITS = 11;

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
