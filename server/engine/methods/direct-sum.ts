import {sumError, UNIT_ROUNDOFF} from '../exact.ts';
import {MIN_DISTANCE} from '../limits.ts';
import type {ChargeColumns} from '../sources/charge-columns.ts';
import {addFieldErrors} from '../sources/point-charge-errors.ts';
import {addMagnitudes, MAGNITUDES} from '../sources/point-charge-magnitudes.ts';
import {
  addField,
  addFieldGradient,
  addPotential,
  BLOCK,
  SUMS,
  type PointChargeKernel,
} from '../sources/point-charge.ts';

/**
 * Direct sum: every charge at every target, in the order of the columns. It is the definition that
 * other methods are held against; its cost is one evaluation a pair.
 *
 * Bounds come in two forms. `errors` repeats the sum and takes the rounding errors themselves
 * (point-charge-errors.ts), several times the work of the sum; `magnitudes` takes worst cases
 * (point-charge-magnitudes.ts), twice the work. The gradient always gets the second.
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

const KERNELS: Record<SumKind, PointChargeKernel> = {
  potential: addPotential,
  field: addField,
  fieldGradient: addFieldGradient,
};

/** Places of a result: V, E, the gradient, and their bounds. */
export const RESULT = {v: 0, e: 1, g: 4, vBound: 10, eBound: 11, gBound: 12, length: 13} as const;

// Worst cases of one term, relative, in units of u. Differences, squares and their sum give r² to
// 5, 1/r to 4.5, q/r to 5.5; q d/r³ has three of 1/r, three products, a difference and a product,
// 18.5; an entry of the gradient is at most 16.5 √3 + 97.5 + √6 < 130 of q/r³ in the Frobenius norm.
// Additions within a block are at most BLOCK − 1; what is carried from block to block adds 1.
const V_ROUNDINGS = 6 + BLOCK;
const E_ROUNDINGS = 19 + BLOCK;
const G_ROUNDINGS = 130 + Math.sqrt(6) * BLOCK;
/** Makes up for the rounding of sums of up to 1e6 positive terms. */
const SUMMING = 1 + 1e-9;
/** What underflow may take from a term of charges as small as 5e-324 at 1e-40 m. */
const UNDERFLOW = {v: 1e-250, e: 1e-230, g: 1e-190} as const;

/** Sums over the charges of one assembly; keeps the workspace between targets. */
export class DirectSum {
  /** Charges that coincided with the last target: indices, ascending. */
  coincident: number[] = [];
  readonly result = new Float64Array(RESULT.length);
  readonly #sums = new Float64Array(SUMS);
  readonly #errors = new Float64Array(6);
  readonly #magnitudes = new Float64Array(MAGNITUDES);
  readonly #kernel: PointChargeKernel;
  readonly #charges: ChargeColumns;
  readonly #options: SumOptions;

  constructor(charges: ChargeColumns, options: SumOptions) {
    this.#charges = charges;
    this.#options = options;
    this.#kernel = KERNELS[options.kind];
  }

  /** [m] Charges may be coincident with a target of this radius up to here. */
  reach(targetRadius: number): number {
    const {coincidenceDistance} = this.#options;
    return Math.max(coincidenceDistance, this.#charges.largestRadius + targetRadius);
  }

  /**
   * Sums at one target into `result`, without the factor 1/(4π ε₀ ε_r) [C/m, C/m², C/m³].
   *
   * @param target x, y, z, their remainders and radius [m] × 7
   * @returns whether there is a sum; if not, charges are coincident and not to be left out
   */
  at(target: Float64Array, ranges: Ranges): boolean {
    if (this.coincident.length > 0) this.coincident = [];
    const reach = Math.max(this.reach(target[6]), MIN_DISTANCE);
    let used = ranges;
    if (!this.#add(target, used, reach * reach)) {
      used = this.#separate(target, ranges, reach * reach);
      if (this.coincident.length > 0 && !this.#options.isExcluding) return false;
      this.#add(target, used, -1);
    }
    const {result} = this;
    const sums = this.#sums;
    for (let n = 0; n < SUMS / 2; n++) result[n] = sums[2 * n] + sums[2 * n + 1];
    if (this.#options.bounds !== 'none') this.#bound(target, used);
    return true;
  }

  #add(target: Float64Array, ranges: Ranges, limit: number): boolean {
    this.#sums.fill(0);
    for (let n = 0; n < ranges.length; n += 2) {
      const stopped = this.#kernel(
        this.#charges,
        ranges[n],
        ranges[n + 1],
        target[0],
        target[1],
        target[2],
        limit,
        this.#sums,
      );
      if (stopped >= 0) return false;
    }
    return true;
  }

  /** Notes the coincident charges; returns the ranges without them and without charges of zero. */
  #separate(target: Float64Array, ranges: Ranges, limit: number): Ranges {
    const {x, y, z, q, radius} = this.#charges;
    const kept: number[] = [];
    for (let n = 0; n < ranges.length; n += 2) {
      let start = ranges[n];
      for (let j = ranges[n]; j < ranges[n + 1]; j++) {
        const dx = target[0] - x[j];
        const dy = target[1] - y[j];
        const dz = target[2] - z[j];
        const square = dx * dx + dy * dy + dz * dz;
        if (square > limit) continue;
        const own = Math.max(this.#options.coincidenceDistance, radius[j] + target[6]);
        const isNear = Math.sqrt(square) <= Math.max(own, MIN_DISTANCE);
        if (!isNear) continue;
        if (q[j] !== 0) this.coincident.push(j);
        if (j > start) kept.push(start, j);
        start = j + 1;
      }
      if (ranges[n + 1] > start) kept.push(start, ranges[n + 1]);
    }
    return kept;
  }

  #bound(target: Float64Array, ranges: Ranges): void {
    const {bounds, kind} = this.#options;
    if (bounds === 'errors') this.#boundByErrors(target, ranges);
    if (bounds === 'magnitudes' || kind === 'fieldGradient') {
      this.#boundByMagnitudes(target, ranges);
    }
  }

  #boundByErrors(target: Float64Array, ranges: Ranges): void {
    const {result} = this;
    const sums = this.#sums;
    const errors = this.#errors;
    sums.fill(0);
    errors.fill(0);
    let count = 0;
    for (let n = 0; n < ranges.length; n += 2) {
      addFieldErrors(this.#charges, ranges[n], ranges[n + 1], target, sums, errors);
      count += ranges[n + 1] - ranges[n];
    }
    for (let n = 0; n < 4; n++) {
      errors[n] += sumError(sums[2 * n], sums[2 * n + 1], sums[2 * n] + sums[2 * n + 1]);
    }
    const [v, ex, ey, ez, vRest, eRest] = errors;
    result[RESULT.vBound] = Math.abs(v) + (8 + count / 8) * vRest;
    result[RESULT.eBound] = Math.sqrt(ex * ex + ey * ey + ez * ez) + (32 + count / 8) * eRest;
    if (this.#charges.hasTiny) {
      result[RESULT.vBound] += count * UNDERFLOW.v;
      result[RESULT.eBound] += count * UNDERFLOW.e;
    }
  }

  #boundByMagnitudes(target: Float64Array, ranges: Ranges): void {
    const {result} = this;
    const out = this.#magnitudes;
    out.fill(0);
    let count = 0;
    for (let n = 0; n < ranges.length; n += 2) {
      const from = ranges[n];
      const to = ranges[n + 1];
      addMagnitudes(this.#charges, from, to, target[0], target[1], target[2], target[6], out);
      count += to - from;
    }
    const own = this.#options.chargeRoundings;
    const u = UNIT_ROUNDOFF;
    if (this.#options.bounds === 'magnitudes') {
      result[RESULT.vBound] = (u * (V_ROUNDINGS + own) * out[0] + out[3]) * SUMMING;
      result[RESULT.eBound] = (u * (E_ROUNDINGS + own) * out[1] + out[4]) * SUMMING;
    }
    result[RESULT.gBound] = (u * (G_ROUNDINGS + Math.sqrt(6) * own) * out[2] + out[5]) * SUMMING;
    if (this.#charges.hasTiny) {
      result[RESULT.vBound] += count * UNDERFLOW.v;
      result[RESULT.eBound] += count * UNDERFLOW.e;
      result[RESULT.gBound] += count * UNDERFLOW.g;
    }
  }
}
