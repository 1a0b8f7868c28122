import {sumError, UNIT_ROUNDOFF} from '../exact.ts';
import {
  BLOCK,
  BOUND_CARRIED,
  BOUND_SUMS,
  BOUND_SUMS_AT,
  ERRORS,
  ERRORS_AT,
  MAGNITUDES,
  MAGNITUDES_AT,
  RESULTS,
  RESULTS_AT,
  SUMS,
  SUMS_AT,
  TARGET_NEAREST,
  TARGET_RADIUS,
  TARGET_X,
  TARGET_Y,
  TARGET_Z,
} from '../kernels/layout.ts';
import {plainKernels} from '../kernels/plain-kernels.ts';
import type {SumKernel, SumKernels} from '../kernels/sum-kernels.ts';
import {batchColumn, targetBatch, type TargetBatch} from '../kernels/target-batch.ts';
import {MIN_DISTANCE} from '../limits.ts';
import {positionColumns, type PositionColumns} from '../positions.ts';
import type {ChargeColumns} from '../sources/charge-columns.ts';
import type {Workplace} from '../workplace.ts';

/**
 * Direct sum: every charge at every target, in the order of the columns. It is the definition that
 * other methods are held against; its cost is one evaluation a pair.
 *
 * Targets are summed in batches, since a call of a kernel costs as much as hundreds of pairs and
 * charges that are in the cache are met by many targets; what a target gets does not depend on the
 * others.
 *
 * Bounds come in two forms. `errors` repeats the sum and takes the rounding errors themselves
 * (point-charge-errors.ts), several times the work of the sum; `magnitudes` takes worst cases
 * (point-charge-magnitudes.ts), about the work of the sum once more. The gradient always gets the
 * second.
 */
export type SumKind = 'potential' | 'field' | 'fieldGradient';
export type BoundKind = 'none' | 'errors' | 'magnitudes';

export interface SumOptions {
  readonly kind: SumKind;
  readonly bounds: BoundKind;
  /** [m] up to which a charge is coincident, besides the radii of the two positions */
  readonly coincidenceDistance: number;
  /** Whether coincident charges are left out of the sum; else there is no sum. */
  readonly isExcluding: boolean;
  /** Roundings in the conversion of one charge. */
  readonly chargeRoundings: number;
}

/** From (included) to (excluded), in pairs, ascending: which charges act on a target. */
export type Ranges = readonly number[];

/** Columns of results: V, E, the gradient, and their bounds. */
export const RESULT = {
  v: 0,
  e: 1,
  g: 4,
  vBound: 10,
  eBound: 11,
  gBound: 12,
  length: RESULTS,
} as const;

const RESULTS_OF: Record<SumKind, number> = {potential: 1, field: 4, fieldGradient: 10};

// Worst cases of one term, relative, in units of u. Differences, squares and their sum give r² to
// 5, 1/r to 4.5, q/r to 5.5; q d/r³ has three of 1/r, three products, a difference and a product,
// 18.5; an entry of the gradient is at most 16.5 √3 + 97.5 of q/r³ in the Frobenius norm. A term
// goes through at most BLOCK/2 − 1 additions in its half of a block (the first one, to zero, rounds
// nothing) and one of the two halves; the sum carried from block to block rounds once, at the end.
const ADDITIONS = BLOCK / 2 + 1;
const V_ROUNDINGS = 6 + ADDITIONS;
const E_ROUNDINGS = 19 + ADDITIONS;
const G_ROUNDINGS = 127 + Math.sqrt(6) * ADDITIONS;
/** Makes up for the rounding of sums of up to 1e6 positive terms. */
const SUMMING = 1 + 1e-9;
/** What underflow may take from a term of charges as small as 5e-324 at 1e-40 m. */
const UNDERFLOW = {v: 1e-250, e: 1e-230, g: 1e-190} as const;

/** Targets of a batch: enough that a call of a kernel and a tile of charges pay off. */
const MOST_TARGETS = 256;
/** Evaluations of a batch, some 5 ms of them: between batches a call can be stopped. */
const PER_BATCH: Record<BoundKind, number> = {none: 2e6, errors: 2.5e5, magnitudes: 1e6};

/** Sums over the charges of one assembly; keeps its workspace from batch to batch. */
export class DirectSum {
  /** How many targets it takes at once. */
  readonly capacity: number;
  /** Positions of the targets, which the caller writes. */
  readonly positions: PositionColumns;
  /** Charges that coincided with targets of the last batch: indices, ascending. */
  readonly coincident = new Map<number, readonly number[]>();
  /** Targets of the last batch that have no sum: something coincides and is not to be left out. */
  readonly withoutSum: number[] = [];
  /** [m] The largest distance that counted as coincident. */
  reach: number;
  readonly #nearest: Float64Array;
  readonly #batch: TargetBatch;
  readonly #kernels: SumKernels;
  readonly #kernel: SumKernel;
  readonly #charges: ChargeColumns;
  readonly #options: SumOptions;

  /** @param targets that there are; the batch need not be larger */
  constructor(
    charges: ChargeColumns,
    options: SumOptions,
    targets: number,
    {memory, compiled}: Workplace,
  ) {
    const size = Math.floor(PER_BATCH[options.bounds] / charges.count);
    this.capacity = Math.max(1, Math.min(MOST_TARGETS, targets, size));
    this.#batch = targetBatch(this.capacity, memory);
    this.positions = positionColumns(this.#batch.values, this.capacity);
    this.#nearest = batchColumn(this.#batch, TARGET_NEAREST);
    const isOnHeap = charges.address !== undefined && this.#batch.address !== undefined;
    this.#kernels = isOnHeap && compiled ? compiled : plainKernels;
    this.#kernel = this.#kernels[options.kind];
    this.#charges = charges;
    this.#options = options;
    this.reach = options.coincidenceDistance;
  }

  /** A column of RESULT: [C/m, C/m², C/m³], without the factor 1/(4π ε₀ ε_r). */
  result(place: number): Float64Array {
    return batchColumn(this.#batch, RESULTS_AT + place);
  }

  /** The result of one target. */
  value(place: number, i: number): number {
    return this.#batch.values[(RESULTS_AT + place) * this.capacity + i];
  }

  /** Sums at the targets `first` … `last` − 1 of the batch, into the columns of results. */
  compute(first: number, last: number, ranges: Ranges): void {
    this.coincident.clear();
    this.withoutSum.length = 0;
    this.#sum(first, last, ranges);
    const {radius} = this.positions;
    const nearest = this.#nearest;
    let largest = 0;
    let least = Infinity;
    for (let i = first; i < last; i++) {
      if (radius[i] > largest) largest = radius[i];
      if (nearest[i] < least) least = nearest[i];
    }
    const reach = this.#reachOf(largest);
    if (reach > this.reach) this.reach = reach;
    // In most batches nothing is that near to anything.
    if (least > square(Math.max(reach, MIN_DISTANCE))) return;
    for (let i = first; i < last; i++) {
      const limit = square(Math.max(this.#reachOf(radius[i]), MIN_DISTANCE));
      if (nearest[i] <= limit) this.#sumApart(i, ranges, limit);
    }
  }

  /** [m] Charges may be coincident with a target of this radius up to here. */
  #reachOf(targetRadius: number): number {
    const {coincidenceDistance} = this.#options;
    return Math.max(coincidenceDistance, this.#charges.largestRadius + targetRadius);
  }

  /** One target again, without the charges that coincide with it. */
  #sumApart(i: number, ranges: Ranges, limit: number): void {
    const coincident: number[] = [];
    const kept = this.#separate(i, ranges, limit, coincident);
    if (coincident.length > 0) this.coincident.set(i, coincident);
    if (coincident.length > 0 && !this.#options.isExcluding) this.withoutSum.push(i);
    else this.#sum(i, i + 1, kept);
  }

  #sum(first: number, last: number, ranges: Ranges): void {
    const {bounds, kind} = this.#options;
    this.#nearest.fill(Infinity, first, last);
    this.#run(this.#kernel, first, last, ranges, SUMS_AT, SUMS);
    this.#kernels.finish(this.#batch, RESULTS_OF[kind], first, last);
    if (bounds !== 'none') this.#bound(first, last, ranges);
  }

  /** Clears rows of the batch and lets a kernel add to them. */
  #run(
    kernel: SumKernel,
    first: number,
    last: number,
    ranges: Ranges,
    at: number,
    row: number,
  ): void {
    const batch = this.#batch;
    this.#kernels.clear(batch, at, row, first, last);
    for (let n = 0; n < ranges.length; n += 2) {
      kernel(this.#charges, ranges[n], ranges[n + 1], batch, first, last);
    }
  }

  /** Notes the coincident charges; returns the ranges without them and without charges of zero. */
  #separate(target: number, ranges: Ranges, limit: number, coincident: number[]): Ranges {
    const {x, y, z, q, radius} = this.#charges;
    const {values, capacity} = this.#batch;
    const tx = values[TARGET_X * capacity + target];
    const ty = values[TARGET_Y * capacity + target];
    const tz = values[TARGET_Z * capacity + target];
    const targetRadius = values[TARGET_RADIUS * capacity + target];
    const kept: number[] = [];
    for (let n = 0; n < ranges.length; n += 2) {
      let start = ranges[n];
      for (let j = ranges[n]; j < ranges[n + 1]; j++) {
        const dx = tx - x[j];
        const dy = ty - y[j];
        const dz = tz - z[j];
        const square = dx * dx + dy * dy + dz * dz;
        if (square > limit) continue;
        const own = Math.max(this.#options.coincidenceDistance, radius[j] + targetRadius);
        const isNear = Math.sqrt(square) <= Math.max(own, MIN_DISTANCE);
        if (!isNear) continue;
        if (q[j] !== 0) coincident.push(j);
        if (j > start) kept.push(start, j);
        start = j + 1;
      }
      if (ranges[n + 1] > start) kept.push(start, ranges[n + 1]);
    }
    return kept;
  }

  #bound(first: number, last: number, ranges: Ranges): void {
    const {bounds, kind} = this.#options;
    let count = 0;
    for (let n = 0; n < ranges.length; n += 2) count += ranges[n + 1] - ranges[n];
    if (bounds === 'errors') {
      this.#kernels.clear(this.#batch, BOUND_SUMS_AT, BOUND_SUMS, first, last);
      this.#run(this.#kernels.fieldErrors, first, last, ranges, ERRORS_AT, ERRORS);
      for (let i = first; i < last; i++) this.#boundByErrors(i, count);
    }
    if (bounds === 'magnitudes' || kind === 'fieldGradient') {
      this.#run(this.#kernels.magnitudes, first, last, ranges, MAGNITUDES_AT, MAGNITUDES);
      for (let i = first; i < last; i++) this.#boundByMagnitudes(i, count);
    }
  }

  #boundByErrors(i: number, count: number): void {
    const {values, capacity} = this.#batch;
    const row = ERRORS_AT * capacity + ERRORS * i;
    const v = values[row] + this.#lastError(i, 0);
    const ex = values[row + 1] + this.#lastError(i, 1);
    const ey = values[row + 2] + this.#lastError(i, 2);
    const ez = values[row + 3] + this.#lastError(i, 3);
    const vRest = values[row + 4];
    const eRest = values[row + 5];
    const tiny = this.#charges.hasTiny ? count : 0;
    this.#set(RESULT.vBound, i, Math.abs(v) + (8 + count / 8) * vRest + tiny * UNDERFLOW.v);
    const e = Math.sqrt(ex * ex + ey * ey + ez * ez);
    this.#set(RESULT.eBound, i, e + (32 + count / 8) * eRest + tiny * UNDERFLOW.e);
  }

  /** What the last addition loses, that of a sum and its carried error. */
  #lastError(i: number, n: number): number {
    const {values, capacity} = this.#batch;
    const at = BOUND_SUMS_AT * capacity + BOUND_SUMS * i + n;
    const carried = values[at + BOUND_CARRIED];
    return sumError(values[at], carried, values[at] + carried);
  }

  #boundByMagnitudes(i: number, count: number): void {
    const {values, capacity} = this.#batch;
    const row = MAGNITUDES_AT * capacity + MAGNITUDES * i;
    const own = this.#options.chargeRoundings;
    const tiny = this.#charges.hasTiny ? count : 0;
    const bound = (place: number, n: number, roundings: number, underflow: number): void => {
      const rounded = UNIT_ROUNDOFF * roundings * values[row + n] + values[row + n + 3];
      this.#set(place, i, rounded * SUMMING + tiny * underflow);
    };
    if (this.#options.bounds === 'magnitudes') {
      bound(RESULT.vBound, 0, V_ROUNDINGS + own, UNDERFLOW.v);
      bound(RESULT.eBound, 1, E_ROUNDINGS + own, UNDERFLOW.e);
    }
    bound(RESULT.gBound, 2, G_ROUNDINGS + Math.sqrt(6) * own, UNDERFLOW.g);
  }

  #set(place: number, i: number, value: number): void {
    this.#batch.values[(RESULTS_AT + place) * this.capacity + i] = value;
  }
}

const square = (x: number): number => x * x;
