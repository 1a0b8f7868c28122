// What multipole/structs.ts writes to memory. Addresses are usize, the rest is i32.

/** A matrix: multipole/tables/operator.ts. */
// @ts-ignore: decorator
@unmanaged
export class Operator {
  groupCount: i32;
  groups: usize;
  data: usize;
  /** Inputs that are summed with signs; 1, 2, 4 or 8. */
  signs: i32;
  /** Where the runs of the inputs go: multipole/tables/build-table.ts. */
  moves: usize;
  inputLength: i32;
}

/** The matrices and factors of one level. */
// @ts-ignore: decorator
@unmanaged
export class Table {
  degree: i32;
  /** Numbers of an expansion, padding included, and of what is kept of it between far boxes. */
  size: i32;
  sourceSize: i32;
  targetSize: i32;
  /** Factors of the recurrences, and for every order and degree the places of cosine and sine. */
  factors: usize;
  places: usize;
  /** Harmonics in the order of the recurrences: how many, and their places. */
  rowCount: i32;
  sequence: usize;
  /** Derivatives: axis, place, row; and their factors. */
  termCount: i32;
  terms: usize;
  termFactors: usize;
  compress: usize;
  expand: usize;
  up: usize;
  down: usize;
  farCount: i32;
  /** `farCount` operators, one after the other. */
  far: usize;
}

/** Charges in the order of their tree, and its boxes; both are padded. */
// @ts-ignore: decorator
@unmanaged
export class Sources {
  /** What charges are multiplied by. */
  chargeScale: f64;
  /** x, y, z [m] and the charge, already multiplied, of one after the other. */
  charges: usize;
  /** Centre x, y, z and size of every box [m]. */
  boxes: usize;
  /** First charge, and the one after the last, of every box. */
  ranges: usize;
  /** First child and number of children of every box, and the octant it is of its parent. */
  children: usize;
  octants: usize;
  multipoles: usize;
  compressed: usize;
  /** An expansion of zeros. */
  zeros: usize;
}

/** Targets in the order of their tree, its boxes, and what they interact with. */
// @ts-ignore: decorator
@unmanaged
export class Targets {
  x: usize;
  y: usize;
  z: usize;
  v: usize;
  /** 0 where only the potential is wanted. */
  ex: usize;
  ey: usize;
  ez: usize;
  boxes: usize;
  ranges: usize;
  children: usize;
  octants: usize;
  locals: usize;
  /** Far boxes of every box: where they begin, and (slot | box << 11). */
  farStarts: usize;
  farEntries: usize;
  /** Runs of charges near every box: where they begin, and (first, after the last). */
  nearStarts: usize;
  nearEntries: usize;
  /** Not 0 where a target is too near a charge for the kernel. */
  flags: usize;
  parents: usize;
}

/** Boxes whose targets are a whole regular lattice, of one size: multipole/lattice.ts. */
// @ts-ignore: decorator
@unmanaged
export class Lattice {
  operator: usize;
  /** Points on the positive side, padded, and along each axis. */
  rows: i32;
  halfX: i32;
  halfY: i32;
  halfZ: i32;
  /** Points along each axis, and whether those of an axis lie on both sides of the centre. */
  sideX: i32;
  sideY: i32;
  sideZ: i32;
  mirrors: i32;
  /** Counts of the whole grid; the sign of its steps. */
  countX: i32;
  countY: i32;
  /** Places that terms of derivatives go to. */
  places: usize;
}
