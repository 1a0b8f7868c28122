import {addTo} from './lanes';
import {Operator} from './multipole-structs';

// Multiplication by a matrix of multipole/tables/operator.ts, for as many boxes at once as make good
// use of every number of it that is read.

const GROUP: usize = 20;

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
  const step3 = <usize>3 * step;
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
  const step3 = <usize>3 * step;
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
  const step3 = <usize>3 * step;
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
