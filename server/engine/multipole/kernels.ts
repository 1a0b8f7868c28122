import type {Level} from './tables/levels.ts';

type Range = [first: number, last: number, scratch: number];

/** The exports of assembly/multipole*.ts; every argument but ranges and `reach` is an address. */
export interface MultipoleExports {
  readonly multipolesSingle: (
    sources: number,
    table: number,
    list: number,
    ...range: Range
  ) => void;
  readonly multipolesDouble: MultipoleExports['multipolesSingle'];
  readonly upSingle: (sources: number, table: number, ...range: Range) => void;
  readonly upDouble: MultipoleExports['upSingle'];
  readonly keptSingle: (sources: number, table: number, ...range: Range) => void;
  readonly keptDouble: MultipoleExports['keptSingle'];
  readonly farSingle: (sources: number, targets: number, table: number, ...range: Range) => void;
  readonly farDouble: MultipoleExports['farSingle'];
  readonly downSingle: (targets: number, table: number, ...range: Range) => void;
  readonly downDouble: MultipoleExports['downSingle'];
  readonly valuesSingle: (
    sources: number,
    targets: number,
    table: number,
    list: number,
    ...range: Range
  ) => void;
  readonly valuesDouble: MultipoleExports['valuesSingle'];
  readonly latticeSingle: (
    sources: number,
    targets: number,
    table: number,
    lattice: number,
    order: number,
    list: number,
    ...range: Range
  ) => void;
  readonly latticeDouble: MultipoleExports['latticeSingle'];
  readonly nearSingle: (
    sources: number,
    targets: number,
    list: number,
    first: number,
    last: number,
    reach: number,
    scratch: number,
  ) => void;
  readonly nearDouble: MultipoleExports['nearSingle'];
}

/** The kernels in one precision. */
export interface MultipoleKernels {
  readonly multipoles: MultipoleExports['multipolesSingle'];
  readonly up: MultipoleExports['upSingle'];
  readonly kept: MultipoleExports['keptSingle'];
  readonly far: MultipoleExports['farSingle'];
  readonly down: MultipoleExports['downSingle'];
  readonly values: MultipoleExports['valuesSingle'];
  readonly near: MultipoleExports['nearSingle'];
  readonly lattice: MultipoleExports['latticeSingle'];
}

export function kernelsOf(exports: MultipoleExports, {precision}: Level): MultipoleKernels {
  return precision === 'single'
    ? {
        multipoles: exports.multipolesSingle,
        up: exports.upSingle,
        kept: exports.keptSingle,
        far: exports.farSingle,
        down: exports.downSingle,
        values: exports.valuesSingle,
        near: exports.nearSingle,
        lattice: exports.latticeSingle,
      }
    : {
        multipoles: exports.multipolesDouble,
        up: exports.upDouble,
        kept: exports.keptDouble,
        far: exports.farDouble,
        down: exports.downDouble,
        values: exports.valuesDouble,
        near: exports.nearDouble,
        lattice: exports.latticeDouble,
      };
}

/** [bytes] of scratch that a kernel may need. */
export const SCRATCH = 2 ** 20;
