import {ServiceError} from '../../errors.ts';
import type {Forms} from '../forms.ts';
import type {Stop} from '../jobs.ts';
import type {Arena} from './arena.ts';
import {findTable} from './find-table.ts';
import type {MultipoleExports} from './kernels.ts';
import {loadTable, type LoadedTable} from './load-table.ts';

/** The kernels of a thread, and SCRATCH bytes of its own at an address. */
export interface MultipoleStation {
  readonly exports: MultipoleExports;
  readonly scratch: number;
}

/** What the steps between phases need besides. */
export interface Tools extends MultipoleStation {
  /** Memory of the call. */
  readonly arena: Arena;
  /** Memory that is given back at the end of the step. */
  readonly spare: Arena;
  readonly forms: Forms;
  readonly stop: Stop;
}

/** The table of a level, which stays in the heap once it was asked for. */
export const tableOf = ({forms}: Tools, level: string): LoadedTable =>
  forms.shared(`table:${level}`, arena => loadTable(findTable(level), arena));

/** Ends a step of a call that nobody waits for any more. */
export function checkStop(stop: Stop): void {
  if (stop()) throw new ServiceError('time-out', 'The call was stopped.');
}
