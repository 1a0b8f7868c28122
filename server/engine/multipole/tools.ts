import type {Workplace} from '../workplace.ts';
import type {Arena} from './arena.ts';
import type {MultipoleExports} from './kernels.ts';
import type {LoadedTable} from './load-table.ts';

/** What a thread has to compute multipole sums with. */
export interface Tools {
  readonly exports: MultipoleExports;
  /** Address of SCRATCH bytes of this thread. */
  readonly scratch: number;
  /** Memory of the call. */
  readonly arena: Arena;
  /** The table of a level, which stays in the heap once it was asked for. */
  readonly table: (level: string) => LoadedTable;
  readonly workplace: Workplace;
}
