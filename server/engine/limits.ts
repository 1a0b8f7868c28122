/** What the engine takes, and where it computes it. */
export interface EngineLimits {
  /** On the calling thread are computed at most this many pairs, rows and bytes of request. */
  readonly inlinePairs: number;
  readonly inlineRows: number;
  readonly inlineBytes: number;
  /** One synchronous call: pairs, and rows of the answer. */
  readonly synchronousPairs: number;
  readonly answerRows: number;
  /** Charges, probes and explicit targets of one JSON request. */
  readonly requestRows: number;
  /** [ms] from the first block of a call to its end. */
  readonly computeMilliseconds: number;
  /** Whether there are kernels and tables for the multipole method. */
  readonly hasMultipole: boolean;
  /** [bytes] of prepared forms that are kept from call to call. */
  readonly keptBytes: number;
  /** [bytes] of address space that all calls are computed in; they cost nothing until used. */
  readonly heapBytes: number;
}

export const defaultLimits: EngineLimits = {
  inlinePairs: 5e4,
  inlineRows: 500,
  inlineBytes: 64 * 1024,
  synchronousPairs: 2e9,
  answerRows: 2e5,
  requestRows: 1e5,
  computeMilliseconds: 30_000,
  hasMultipole: true,
  keptBytes: 2 ** 29,
  heapBytes: 2 ** 31,
};

/** No call costs less. */
export const MINIMUM_PAIRS = 1000;

/** Pairs an evaluation of one charge at one target counts for. */
export const PAIR_WEIGHT = {potential: 1, field: 1, fieldGradient: 2} as const;

/** Interactions are answered unasked up to this many bodies. */
export const BODIES_WITH_INTERACTIONS = 50;

/** Coincidences that an answer lists; all are counted. */
export const COINCIDENCES_LISTED = 1000;

/** [m] Nearer is coincident, whatever the request says; far below any length there is. */
export const MIN_DISTANCE = 1e-40;

/** Faults that a refusal lists; all are counted. */
export const ISSUES_LISTED = 20;
