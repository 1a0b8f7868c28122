import {addFieldErrors} from '../sources/point-charge-errors.ts';
import {addMagnitudes} from '../sources/point-charge-magnitudes.ts';
import {addField, addFieldGradient, addPotential} from '../sources/point-charge.ts';
import {CARRIED, RESULTS_AT, SUMS, SUMS_AT} from './layout.ts';
import type {SumKernels} from './sum-kernels.ts';

/** The kernels in TypeScript: the definition, and the fallback. */
export const plainKernels: SumKernels = {
  clear({values, capacity}, at, row, first, last) {
    const start = at * capacity;
    values.fill(0, start + row * first, start + row * last);
  },
  finish({values, capacity}, columns, first, last) {
    for (let i = first; i < last; i++) {
      const row = SUMS_AT * capacity + SUMS * i;
      for (let n = 0; n < columns; n++) {
        values[(RESULTS_AT + n) * capacity + i] = values[row + n] + values[row + CARRIED + n];
      }
    }
  },
  potential: addPotential,
  field: addField,
  fieldGradient: addFieldGradient,
  fieldErrors: addFieldErrors,
  magnitudes: addMagnitudes,
};
