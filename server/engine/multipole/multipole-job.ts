import type {FieldJob} from '../jobs.ts';
import {effortFor} from './effort.ts';
import type {TargetTree} from './interactions.ts';
import type {Lattice, SortedLeaves} from './lattice.ts';
import type {LoadedTable} from './load-table.ts';
import type {SourceTree} from './source-tree.ts';
import type {TargetValues} from './structs.ts';

/**
 * Charges that have a tree of their own: those of a large body in its own frame, so that the tree
 * outlives a new placement, or those of all other bodies where they are placed.
 */
export interface PartCharges {
  readonly count: number;
  /** [m, m, m, C] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
  readonly q: Float64Array;
  /** Which charges of the assembly these are: from (included), to (excluded), in pairs. */
  readonly ranges: readonly number[];
  /** p′ = R p + t, row-major and [m]; absent where the charges are as placed. */
  readonly placement?: {readonly rotation: readonly number[]; readonly shift: readonly number[]};
  /** Digest of the charges, where what is made of them may be kept. */
  readonly digest?: string;
}

/** A part on its way: plain data, its arrays in the heap. */
export interface Part {
  readonly charges: PartCharges;
  readonly sources: SourceTree;
  /** Under which the tree is kept, if it is. */
  readonly treeKey?: string;
  /** The targets as a lattice that the boxes are aligned to, if they are one. */
  readonly lattice?: Lattice;
  /** What of the leaves is evaluated how, once the table is chosen. */
  readonly sorted?: SortedLeaves;
  readonly targets: TargetTree;
  /** Sums at the sorted targets [C/m, C/m²] in the frame of the part. */
  readonly values: TargetValues;
  /** [m] Targets so near to a charge are looked at one by one. */
  readonly reach: number;
  /** Addresses of the structs that kernels read. */
  readonly sourcesAddress: number;
  readonly targetsAddress: number;
}

/** A piece of one phase: boxes or leaves of a part, or, of part SAMPLING, samples. */
export interface Work {
  readonly part: number;
  readonly first: number;
  readonly last: number;
  /** Which of the whole boxes of a lattice; other leaves if there is none. */
  readonly whole?: number;
}

export const SAMPLING = -1;

/** Sums over all parts [C/m, C/m²] at the targets of the request: V, Eₓ, E_y, E_z; NaN if masked. */
export type Totals = readonly Float64Array[];

/** Targets that are summed directly as well. */
export interface Samples {
  readonly indices: Int32Array;
  /** How many targets each stands for. */
  readonly weights: Float64Array;
  /** V, Eₓ, E_y, E_z [C/m, C/m²], NaN where the target is masked. */
  readonly sums: readonly Float64Array[];
}

/** Relative errors in the sense of the tolerance; the largest over the root mean square. */
export interface EstimatedError {
  readonly potential: number;
  readonly field?: number;
  readonly largestPotential: number;
  readonly largestField?: number;
  readonly samples: number;
}

export type Phase = 'begin' | 'near' | 'far' | 'values' | 'check' | 'done';

/**
 * A field job computed by the multipole method, phase by phase: the pieces of a phase in any order on
 * any thread, and between phases one step (`advance`) that knows all of them. Plain data.
 */
export interface MultipoleJob {
  readonly kind: 'multipole';
  /** What is asked for, and what a direct sum would do. */
  readonly field: FieldJob;
  readonly tolerance: number;
  readonly charges: readonly PartCharges[];
  /** Pairs that one call may sum directly. */
  readonly mostPairs: number;
  readonly phase: Phase;
  /** Which of `efforts` is tried. */
  readonly effort: number;
  /** Coarser ones did not do. */
  readonly leastEffort: number;
  readonly work: readonly Work[];
  /** 0 … length of `work`, as in every job. */
  readonly blocks: readonly number[];
  /** The table of the effort; there once the trees are. */
  readonly table?: LoadedTable;
  readonly parts: readonly Part[];
  /** Pairs of near boxes, which are summed directly. */
  readonly nearPairs: number;
  readonly samples: Samples;
  /** [m] Up to here a pair may be coincident. */
  readonly reach: number;
  /** Coincident pairs: target, charge, target, charge …; the first of them, and how many. */
  readonly coincident: readonly number[];
  readonly coincidentCount: number;
  readonly maskedCount: number;
  /** What near boxes make of V or, if it is wanted, of E; in few digits, to save memory. */
  readonly near?: readonly Float32Array[];
  /** What is to be checked. */
  readonly totals?: Totals;
  readonly estimated?: EstimatedError;
}

/** A job of which nothing is computed yet. */
export function beginningOf(
  field: FieldJob,
  charges: readonly PartCharges[],
  mostPairs: number,
): MultipoleJob {
  if (field.tolerance === undefined) throw new RangeError('expected a tolerance');
  return {
    kind: 'multipole',
    field,
    tolerance: field.tolerance,
    charges,
    mostPairs,
    phase: 'begin',
    effort: effortFor(field.tolerance, field.sum !== 'potential'),
    leastEffort: 0,
    work: [],
    blocks: [0],
    parts: [],
    nearPairs: 0,
    samples: {indices: new Int32Array(0), weights: new Float64Array(0), sums: []},
    reach: 0,
    coincident: [],
    coincidentCount: 0,
    maskedCount: 0,
  };
}

/** A job at the beginning of a phase whose pieces are `work`. */
export function atPhase(
  job: MultipoleJob,
  phase: Phase,
  work: readonly Work[],
  changes: Partial<MultipoleJob> = {},
): MultipoleJob {
  const blocks = Array.from({length: work.length + 1}, (_, n) => n);
  return {...job, ...changes, phase, work, blocks};
}
