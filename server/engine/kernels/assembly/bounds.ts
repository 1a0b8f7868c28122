import {
  BATCH_PARTS,
  BLOCK,
  BOUND_CARRIED,
  BOUND_SUMS,
  BOUND_SUMS_AT,
  ERRORS,
  ERRORS_AT,
  MAGNITUDES,
  MAGNITUDES_AT,
  TARGET_RADIUS,
  TARGET_X,
  TARGET_X_REMAINDER,
  TARGET_Y,
  TARGET_Y_REMAINDER,
  TARGET_Z,
  TARGET_Z_REMAINDER,
  TILE,
} from '../layout';
import {errorsBlock} from './errors-block';
import {magnitudesBlock} from './magnitudes-block';

/** `addFieldErrors` of sources/point-charge-errors.ts; the parameters are those of `field`. */
export function fieldErrors(
  charges: usize,
  stride: usize,
  from: i32,
  to: i32,
  batch: usize,
  capacity: usize,
  first: i32,
  last: i32,
): void {
  const column = capacity << 3;
  const spare = batch + column * BATCH_PARTS;
  for (let tile = from; tile < to; tile += TILE) {
    const tileEnd = min(tile + TILE, to);
    for (let i = first; i < last; i++) {
      const target = batch + ((<usize>i) << 3);
      const sums = batch + column * BOUND_SUMS_AT + ((<usize>i * BOUND_SUMS) << 3);
      for (let start = tile; start < tileEnd; start += BLOCK) {
        errorsBlock(
          v128.load64_splat(target + column * TARGET_X),
          v128.load64_splat(target + column * TARGET_Y),
          v128.load64_splat(target + column * TARGET_Z),
          v128.load64_splat(target + column * TARGET_X_REMAINDER),
          v128.load64_splat(target + column * TARGET_Y_REMAINDER),
          v128.load64_splat(target + column * TARGET_Z_REMAINDER),
          v128.load64_splat(target + column * TARGET_RADIUS),
          charges + ((<usize>start) << 3),
          stride << 3,
          min(BLOCK, tileEnd - start),
          sums,
          sums + (BOUND_CARRIED << 3),
          batch + column * ERRORS_AT + ((<usize>i * ERRORS) << 3),
          spare,
        );
      }
    }
  }
}

/** `addMagnitudes` of sources/point-charge-magnitudes.ts; the parameters are those of `field`. */
export function magnitudes(
  charges: usize,
  stride: usize,
  from: i32,
  to: i32,
  batch: usize,
  capacity: usize,
  first: i32,
  last: i32,
): void {
  const column = capacity << 3;
  const spare = batch + column * BATCH_PARTS;
  for (let tile = from; tile < to; tile += TILE) {
    const tileEnd = min(tile + TILE, to);
    for (let i = first; i < last; i++) {
      const target = batch + ((<usize>i) << 3);
      for (let start = tile; start < tileEnd; start += BLOCK) {
        magnitudesBlock(
          v128.load64_splat(target + column * TARGET_X),
          v128.load64_splat(target + column * TARGET_Y),
          v128.load64_splat(target + column * TARGET_Z),
          v128.load64_splat(target + column * TARGET_RADIUS),
          charges + ((<usize>start) << 3),
          stride << 3,
          min(BLOCK, tileEnd - start),
          batch + column * MAGNITUDES_AT + ((<usize>i * MAGNITUDES) << 3),
          spare,
        );
      }
    }
  }
}
