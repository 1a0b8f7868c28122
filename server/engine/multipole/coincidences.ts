import {COINCIDENCES_LISTED} from '../limits.ts';

/** What lies on a charge. */
export interface Coincidences {
  /** Target and charge: all that an answer may list, and some more. */
  pairs: (readonly [target: number, charge: number])[];
  coincidentCount: number;
  /** No answer lists those of targets after this one. */
  lastListed: number;
  /** Targets without a value. */
  readonly masked: Set<number>;
}

export const nothingFound = (): Coincidences => ({
  pairs: [],
  coincidentCount: 0,
  lastListed: Infinity,
  masked: new Set(),
});

/** Pairs that are noted before those that no answer lists are let go. */
const MOST_NOTED = 16 * COINCIDENCES_LISTED;

/**
 * Notes the charges that a target lies on.
 *
 * @param charges ascending
 */
export function note(found: Coincidences, target: number, charges: ArrayLike<number>): void {
  found.coincidentCount += charges.length;
  if (target > found.lastListed) return;
  const most = Math.min(charges.length, COINCIDENCES_LISTED);
  for (let n = 0; n < most; n++) found.pairs.push([target, charges[n]]);
  if (found.pairs.length <= MOST_NOTED) return;
  found.pairs = firstOf(found.pairs);
  found.lastListed = found.pairs[found.pairs.length - 1][0];
}

/** Those that an answer may list, in the order of the request. */
export const listed = ({pairs}: Coincidences): number[] => firstOf(pairs).flat();

function firstOf(pairs: Coincidences['pairs']): Coincidences['pairs'] {
  return [...pairs].sort((a, b) => a[0] - b[0] || a[1] - b[1]).slice(0, COINCIDENCES_LISTED);
}
