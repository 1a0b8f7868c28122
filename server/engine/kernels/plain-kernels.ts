import {addFieldErrors} from '../sources/point-charge-errors.ts';
import {addMagnitudes} from '../sources/point-charge-magnitudes.ts';
import {addField, addFieldGradient, addPotential} from '../sources/point-charge.ts';
import type {SumKernels} from './sum-kernels.ts';

/** The kernels in TypeScript: the definition, and the fallback. */
export const plainKernels: SumKernels = {
  potential: addPotential,
  field: addField,
  fieldGradient: addFieldGradient,
  fieldErrors: addFieldErrors,
  magnitudes: addMagnitudes,
};
