import type {OnCoincidence} from '../../shared/api.ts';
import type {BoundKind, SumKind} from './methods/direct-sum.ts';
import type {MultipoleJob} from './multipole/multipole-job.ts';
import type {ChargeColumns} from './sources/charge-columns.ts';
import type {PackedTargets} from './targets.ts';

/**
 * What threads are given: plain data, its arrays in shared memory. A job is computed in blocks that
 * do not depend on the number of threads, in any order, each writing its own part of `out`.
 */
interface Blocks {
  /** Where block b begins, and at the end where the last one ends; in targets. */
  readonly blocks: readonly number[];
  /** The results; how they lie in it is the affair of the kind of job. */
  readonly out: Float64Array;
  /** [bytes] where `out` begins in the heap; undefined elsewhere */
  readonly outAddress: number | undefined;
}

/** Potential and field at targets. `out` holds columns in the order of the answer. */
export interface FieldJob extends Blocks {
  readonly kind: 'field';
  readonly charges: ChargeColumns;
  readonly targets: PackedTargets;
  /** Targets, and so the length of each column. */
  readonly count: number;
  /** Where each body begins in `charges`, and at the end where the last one ends. */
  readonly starts: readonly number[];
  readonly sum: SumKind;
  readonly bounds: BoundKind;
  readonly columns: readonly FieldColumn[];
  readonly relativePermittivity: number;
  readonly symbols: {
    readonly charge: string;
    readonly potential: string;
    readonly field: string;
    readonly fieldGradient: string;
  };
  /** [m] */
  readonly coincidenceDistance: number;
  readonly onCoincidence: OnCoincidence;
  /** What error was allowed, where that was said. */
  readonly tolerance?: number;
}

export const FIELD_COLUMNS = [
  'potential',
  'fieldX',
  'fieldY',
  'fieldZ',
  'fieldMagnitude',
  'fieldGradientXX',
  'fieldGradientXY',
  'fieldGradientXZ',
  'fieldGradientYY',
  'fieldGradientYZ',
  'fieldGradientZZ',
  'potentialBound',
  'fieldBound',
  'fieldGradientBound',
] as const;

export type FieldColumn = (typeof FIELD_COLUMNS)[number];

/**
 * Forces: the field of all other bodies at every charge, and of all bodies at the probes. `out` holds
 * FORCE_STRIDE numbers a target, charges first; blocks do not cross bodies.
 */
export interface ForceJob extends Blocks {
  readonly kind: 'force';
  readonly charges: ChargeColumns;
  readonly probes?: ChargeColumns;
  /** Where each body begins in `charges`, and at the end where the last one ends. */
  readonly starts: readonly number[];
  readonly hasBounds: boolean;
  readonly bounds: BoundKind;
  readonly hasInternalEnergy: boolean;
  readonly hasInteractions: boolean;
  readonly hasCharges: boolean;
  readonly relativePermittivity: number;
  readonly symbols: {
    readonly length: string;
    readonly charge: string;
    readonly force: string;
    readonly torque: string;
    readonly energy: string;
  };
  /** The point that each body's torque is about: [m], and in the unit of the request. */
  readonly about: readonly (readonly number[])[];
  readonly aboutAsGiven: readonly (readonly number[])[];
  /** Total charge of each body in the unit of the request. */
  readonly totalCharges: readonly number[];
}

/** Numbers of one target of a force job: sums for E, V, V of the own body, and the bound of E. */
export const FORCE_STRIDE = 6;

/** Moments are one pass over the request and have nothing to compute in blocks. */
export interface MomentJob extends Blocks {
  readonly kind: 'moment';
  /** Placed charges in the units of the request: x, y, z, charge; flat. */
  readonly charges: Float64Array;
  readonly starts: readonly number[];
  /** In the unit of the request. */
  readonly about: readonly number[];
}

export type Job = FieldJob | ForceJob | MomentJob | MultipoleJob;

/** What a block has to say besides its results. */
export interface BlockReport {
  /** Coincident pairs: target, charge, target, charge …; the first of the block. */
  readonly coincident: readonly number[];
  readonly coincidentCount: number;
  /** [m] The largest distance that would have counted as coincident. */
  readonly reach: number;
  /** Force jobs: for every body that acts, sums of q E (3) and q V over the charges of the block. */
  readonly interactions?: Float64Array;
}

/** Whether to stop; asked every few milliseconds. */
export type Stop = () => boolean;
