// Numbers that the kernels in TypeScript and those in WebAssembly agree on. AssemblyScript reads
// this file too, so it has whole numbers and nothing else.

/**
 * Charges summed plainly, in two partial sums, before the sum is folded into the compensated one:
 * short enough that plain additions lose little, long enough that folding costs nothing.
 */
export const BLOCK = 128;

/** Charges that all targets of a batch meet before the next ones are read: 64 KiB of x, y, z, q. */
export const TILE = 2048;

// Columns of charges, in units of their stride.
export const CHARGE_X = 0;
export const CHARGE_Y = 1;
export const CHARGE_Z = 2;
export const CHARGE_Q = 3;
export const CHARGE_RADIUS = 4;
export const CHARGE_X_REMAINDER = 5;
export const CHARGE_Y_REMAINDER = 6;
export const CHARGE_Z_REMAINDER = 7;
export const CHARGE_Q_REMAINDER = 8;
export const CHARGE_COLUMNS = 9;

// Parts of a batch of targets, in units of its capacity: columns first …
export const TARGET_X = 0;
export const TARGET_Y = 1;
export const TARGET_Z = 2;
export const TARGET_X_REMAINDER = 3;
export const TARGET_Y_REMAINDER = 4;
export const TARGET_Z_REMAINDER = 5;
export const TARGET_RADIUS = 6;
export const POSITION_COLUMNS = 7;
/** [m²] Squared distance of the nearest charge so far. */
export const TARGET_NEAREST = 7;
// … then rows, one a target.
export const SUMS_AT = 8;
export const BOUND_SUMS_AT = 28;
export const ERRORS_AT = 36;
export const MAGNITUDES_AT = 42;
// … and results, columns again.
export const RESULTS_AT = 48;
export const RESULTS = 13;
export const BATCH_PARTS = 61;
/** Numbers after the parts: room for two charges. */
export const SPARE = 18;

/** Numbers in a row of sums: V, E, gradient, and at CARRIED from each the error carried along. */
export const SUMS = 20;
export const CARRIED = 10;
/** The same in a row of the sums that `fieldErrors` repeats: V and E. */
export const BOUND_SUMS = 8;
export const BOUND_CARRIED = 4;
export const ERRORS = 6;
export const MAGNITUDES = 6;
