/** A measured or defined quantity of nature. */
export interface PhysicalConstant {
  readonly value: number;
  /** Standard uncertainty, in the same unit; 0 where the value is exact by definition. */
  readonly uncertainty: number;
  readonly unit: string;
  readonly edition: string;
}

/** What answers name as the source of their constants. */
export const CONSTANTS_EDITION = 'CODATA 2022';

// E. Tiesinga, P. J. Mohr, D. B. Newell, B. N. Taylor, The 2022 CODATA Recommended Values of the
// Fundamental Physical Constants (Web Version 9.0), NIST, 2024.
const codata = (value: number, uncertainty: number, unit: string): PhysicalConstant => ({
  value,
  uncertainty,
  unit,
  edition: CONSTANTS_EDITION,
});

/** CODATA values; the exact ones follow from the definition of the SI (2019). */
export const physicalConstants = {
  vacuumPermittivity: codata(8.8541878188e-12, 1.4e-21, 'F/m'),
  elementaryCharge: codata(1.602176634e-19, 0, 'C'),
  atomicMassConstant: codata(1.66053906892e-27, 5.2e-37, 'kg'),
  electronMass: codata(9.1093837139e-31, 2.8e-40, 'kg'),
  bohrRadius: codata(5.29177210544e-11, 8.2e-21, 'm'),
  speedOfLight: codata(299792458, 0, 'm/s'),
} as const satisfies Record<string, PhysicalConstant>;

/**
 * 1/(4π ε₀) [N·m²/C²] with ε₀ = 8.8541878188e-12 F/m taken as exact. The quotient is
 * 8987551786.170798670481201…; written as the nearest double, since π and a division in double precision would be off
 * in the last place. Its physical uncertainty is that of ε₀, 1.6e-10 of the value.
 */
export const COULOMB_CONSTANT = 8987551786.1708;
