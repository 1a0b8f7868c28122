/**
 * How fine the expansions of one table are, and what that costs.
 *
 * Boxes interact through expansions when `separation` boxes or more lie between them: 1 keeps the 27
 * nearest boxes apart, 2 the 125 nearest, which makes series converge much faster.
 */
export interface Level {
  readonly name: string;
  readonly separation: 1 | 2;
  /** Highest degree of the harmonics. */
  readonly degree: number;
  /** What compression may take away, relative to the field of the far boxes in least squares. */
  readonly compression: number;
  readonly precision: 'single' | 'double';
}

/** From coarse to fine. */
export const levels: readonly Level[] = [
  {name: 'a', separation: 1, degree: 6, compression: 3.3e-3, precision: 'single'},
  {name: 'b', separation: 1, degree: 9, compression: 5.2e-4, precision: 'single'},
  {name: 'c', separation: 1, degree: 12, compression: 1.03e-4, precision: 'single'},
  {name: 'd', separation: 1, degree: 14, compression: 3.2e-5, precision: 'single'},
  {name: 'e', separation: 1, degree: 17, compression: 8e-6, precision: 'single'},
  {name: 'f', separation: 1, degree: 20, compression: 1.35e-6, precision: 'single'},
  {name: 'g', separation: 2, degree: 13, compression: 2.3e-7, precision: 'double'},
  {name: 'h', separation: 2, degree: 16, compression: 2e-8, precision: 'double'},
  {name: 'i', separation: 2, degree: 19, compression: 2e-9, precision: 'double'},
  {name: 'j', separation: 2, degree: 21, compression: 2.8e-10, precision: 'double'},
];
