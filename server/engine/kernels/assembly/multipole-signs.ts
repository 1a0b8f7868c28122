import {addTo} from './lanes';
import {Operator} from './multipole-structs';

// Sums over the signs of offsets, before and after a multiplication: multipole/tables/build-table.ts.

/** Bytes that an address, and the addresses of up to 8 inputs, take. */
export const ADDRESS: usize = 4;
export const INPUTS: usize = 32;

/**
 * The sums with signs of up to 8 expansions at `inputs` (addresses), chunk by chunk where the
 * operator takes them from.
 */
export function gather<T>(operator: Operator, inputs: usize, to: usize): void {
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

/** To the child with signs s is added Σ_g (−1)^(g·s) part g. */
export function spread<T>(parts: usize, bytes: usize, children: usize): void {
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
