import {
  BATCH_PARTS,
  BLOCK,
  CARRIED,
  RESULTS_AT,
  SUMS,
  SUMS_AT,
  TARGET_NEAREST,
  TARGET_X,
  TARGET_Y,
  TARGET_Z,
  TILE,
} from '../layout';
import {fieldBlock} from './field-block';
import {gradientBlock} from './gradient-block';
import {potentialBlock} from './potential-block';

export * from './bounds';

// The kernels of sources/point-charge.ts, which say what is computed and in which order. Here the
// two lanes are the two partial sums of a block, so every operation is the same and so is every
// bit: WebAssembly rounds each of them as IEEE 754 says and fuses none.

/** What `load.ts` expects: raised whenever the kernels are called in another way. */
export function version(): i32 {
  return 5;
}

const POTENTIAL = 0;
const FIELD = 1;
const GRADIENT = 2;

/**
 * Adds the charges `from` … `to` − 1 to the sums of the targets `first` … `last` − 1 of a batch.
 * Both lie as layout.ts says; `stride` and `capacity` are in numbers. Tiles are whole blocks, so
 * they change no order. With `kind` a constant, one branch is left.
 */
// @ts-ignore: decorator
@inline
function sum(
  kind: i32,
  charges: usize,
  stride: usize,
  from: i32,
  to: i32,
  batch: usize,
  capacity: usize,
  first: i32,
  last: i32,
): void {
  const step = stride << 3;
  const column = capacity << 3;
  const spare = batch + column * BATCH_PARTS;
  for (let tile = from; tile < to; tile += TILE) {
    const tileEnd = min(tile + TILE, to);
    for (let i = first; i < last; i++) {
      const target = batch + (<usize>i << 3);
      const tx = v128.load64_splat(target + column * TARGET_X);
      const ty = v128.load64_splat(target + column * TARGET_Y);
      const tz = v128.load64_splat(target + column * TARGET_Z);
      const sums = batch + column * SUMS_AT + ((<usize>i * SUMS) << 3);
      let near = v128.load64_splat(target + column * TARGET_NEAREST);
      for (let start = tile; start < tileEnd; start += BLOCK) {
        const count = min(BLOCK, tileEnd - start);
        const at = charges + (<usize>start << 3);
        if (kind == POTENTIAL) {
          near = potentialBlock(near, tx, ty, tz, at, step, count, sums, spare);
        } else if (kind == FIELD) {
          near = fieldBlock(near, tx, ty, tz, at, step, count, sums, spare);
        } else {
          near = gradientBlock(near, tx, ty, tz, at, step, count, sums, spare);
        }
      }
      const nearest = min(f64x2.extract_lane(near, 0), f64x2.extract_lane(near, 1));
      store<f64>(target + column * TARGET_NEAREST, nearest);
    }
  }
}

export function clear(address: usize, bytes: usize): void {
  memory.fill(address, 0, bytes);
}

/** Adds sums and their carried errors, into the first `columns` columns of results. */
export function finish(
  batch: usize,
  capacity: usize,
  columns: i32,
  first: i32,
  last: i32,
): void {
  const column = capacity << 3;
  for (let i = first; i < last; i++) {
    const sums = batch + column * SUMS_AT + ((<usize>i * SUMS) << 3);
    let result = batch + column * RESULTS_AT + (<usize>i << 3);
    for (let at = sums; at < sums + (<usize>columns << 3); at += 8) {
      store<f64>(result, load<f64>(at) + load<f64>(at, CARRIED << 3));
      result += column;
    }
  }
}

export function potential(
  charges: usize,
  stride: usize,
  from: i32,
  to: i32,
  batch: usize,
  capacity: usize,
  first: i32,
  last: i32,
): void {
  sum(POTENTIAL, charges, stride, from, to, batch, capacity, first, last);
}

export function field(
  charges: usize,
  stride: usize,
  from: i32,
  to: i32,
  batch: usize,
  capacity: usize,
  first: i32,
  last: i32,
): void {
  sum(FIELD, charges, stride, from, to, batch, capacity, first, last);
}

export function fieldGradient(
  charges: usize,
  stride: usize,
  from: i32,
  to: i32,
  batch: usize,
  capacity: usize,
  first: i32,
  last: i32,
): void {
  sum(GRADIENT, charges, stride, from, to, batch, capacity, first, last);
}
