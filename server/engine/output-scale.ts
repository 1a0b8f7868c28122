import {COULOMB_CONSTANT} from '../../shared/physical-constants.ts';
import {unitOf, type Dimension, type Unit} from '../../shared/units.ts';
import {UNIT_ROUNDOFF} from './exact.ts';

/** From sums without 1/(4π ε₀ ε_r) to values in the unit of the answer, with what that rounds. */
export interface OutputScale {
  /** 1/(4π ε₀ ε_r) [N·m²/C²] */
  readonly constant: number;
  readonly unit: Unit;
  /** Largest relative error of a scaled value through the scaling alone. */
  readonly error: number;
}

/**
 * Roundings: of the constant, of its division by ε_r, of the product, of the unit of charge where
 * that is a measured number (it is the same for every charge), and of the unit of the answer.
 */
export function outputScale(
  dimension: Dimension,
  symbol: string,
  relativePermittivity: number,
  charge: Unit,
): OutputScale {
  const unit = unitOf(dimension, symbol);
  const roundings =
    2 + (relativePermittivity === 1 ? 0 : 1) + (charge.factor === 1 ? 0 : 1) + unit.roundings;
  return {
    constant: COULOMB_CONSTANT / relativePermittivity,
    unit,
    error: roundings * UNIT_ROUNDOFF * (1 + 1e-12),
  };
}

/** A sum as a value of the answer; adding 0 takes away the sign of −0, which JSON cannot keep. */
export const scaled = (scale: OutputScale, sum: number): number =>
  scale.unit.fromSI(scale.constant * sum) + 0;

/**
 * The bound of a scaled value.
 *
 * @param size absolute value of the sum, or length of the vector of sums
 * @param bound of the sum
 * @param extra relative error that the value has besides
 */
export function scaledBound(scale: OutputScale, size: number, bound: number, extra = 0): number {
  const error = bound * (1 + 1e-12) + size * (scale.error + extra);
  return scale.unit.fromSI(scale.constant * error) * (1 + 1e-14);
}
