import {levels, type Level} from './tables/levels.ts';

/**
 * What each level reaches and how deep its trees go: fixed for an engine version, so that the same
 * request gives the same bits everywhere. The errors are those of the far part of V and E, relative
 * to it in least squares, for charges of random sign spread evenly (tests/engine/multipole.test.ts
 * holds them); they only choose where to begin, and what was reached is measured in every call.
 */
export interface Effort {
  readonly level: Level;
  readonly potentialError: number;
  readonly fieldError: number;
  /** Pairs of two near boxes up to which they are summed directly. */
  readonly pairs: number;
  /** Charges in a box that is not split. */
  readonly capacity: number;
}

type Row = readonly [potentialError: number, fieldError: number, pairs: number, capacity: number];

const rows: Readonly<Record<string, Row>> = {
  a: [8e-4, 1e-2, 1500, 40],
  b: [1.4e-4, 1.5e-3, 2200, 48],
  c: [2.7e-5, 3e-4, 3400, 56],
  d: [8e-6, 9e-5, 5300, 64],
  e: [2.2e-6, 2.3e-5, 8700, 72],
  f: [4.5e-7, 4.1e-6, 14_000, 90],
  g: [6e-8, 1.1e-6, 12_000, 80],
  h: [4.2e-9, 1e-7, 16_000, 90],
  i: [4e-10, 1e-8, 30_000, 120],
  j: [5e-11, 1.4e-9, 40_000, 140],
};

export const efforts: readonly Effort[] = levels.map(level => {
  const [potentialError, fieldError, pairs, capacity] = rows[level.name];
  return {level, potentialError, fieldError, pairs, capacity};
});

/** Of what is asked, how much the expected error may be. */
const MARGIN = 0.7;

/** How much of V and of E comes from far boxes: ‖far‖ ÷ ‖all‖. */
export interface FarShare {
  readonly potential: number;
  readonly field: number;
}

/** Where nothing is known yet. */
const usualShare: FarShare = {potential: 1, field: 0.1};

/** The coarsest level that is expected to do; the finest if none is. */
export function effortFor(
  tolerance: number,
  isField: boolean,
  share: FarShare = usualShare,
): number {
  const index = efforts.findIndex(
    effort => expectedError(effort, isField, share) <= MARGIN * tolerance,
  );
  return index < 0 ? efforts.length - 1 : index;
}

/**
 * The effort to go on with, once more is known and the boxes of `current` are made: others of its
 * separation use the same boxes, and the finest of them is worth a try before all begins again.
 */
export function effortWithin(
  current: number,
  wanted: number,
  tolerance: number,
  isField: boolean,
  share: FarShare,
): number {
  const {separation} = efforts[current].level;
  if (efforts[wanted].level.separation === separation) return wanted;
  if (wanted < current) return current;
  const finest = efforts.findLastIndex(({level}) => level.separation === separation);
  return expectedError(efforts[finest], isField, share) <= tolerance ? finest : wanted;
}

const expectedError = (
  {potentialError, fieldError}: Effort,
  isField: boolean,
  share: FarShare,
): number => Math.max(potentialError * share.potential, isField ? fieldError * share.field : 0);

/** What comes after an effort that left `error`: the coarsest that is expected to do, if there is one. */
export function nextEffort(
  effort: number,
  tolerance: number,
  error: {readonly potential: number; readonly field?: number},
): number | undefined {
  if (effort + 1 >= efforts.length) return undefined;
  const own = efforts[effort];
  const index = efforts.findIndex(
    ({potentialError, fieldError}, n) =>
      n > effort &&
      (error.potential * potentialError) / own.potentialError <= MARGIN * tolerance &&
      ((error.field ?? 0) * fieldError) / own.fieldError <= MARGIN * tolerance,
  );
  return index < 0 ? efforts.length - 1 : index;
}
