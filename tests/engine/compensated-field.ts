import type {Charges, Points} from '../support/workshop.ts';

/** 1/(4π ε₀) [N·m²/C²], ε₀ = 8.8541878188e-12 F/m (CODATA 2022). */
export const COULOMB = 1 / (4 * Math.PI * 8.8541878188e-12);

/** V [V] and E [V/m] at some targets; NaN where a target lies on a charge that is not zero. */
export interface Field {
  /** Which of the targets. */
  readonly indices: Int32Array;
  /** V, Eₓ, E_y, E_z */
  readonly columns: readonly Float64Array[];
}

/**
 * The field of every charge, one by one, added up with what every addition loses (A. Neumaier, Z.
 * Angew. Math. Mech. 54 (1974)): off by a few roundings of single terms, however many there are and
 * however they cancel. Written apart from the engine's sums, to hold them against.
 *
 * @param indices which targets; all if not given
 */
export function compensatedField(charges: Charges, targets: Points, indices?: Int32Array): Field {
  const which = indices ?? Int32Array.from(targets.x, (_, n) => n);
  const columns = [0, 1, 2, 3].map(() => new Float64Array(which.length));
  const {x, y, z, charge} = charges;
  which.forEach((target, n) => {
    const tx = targets.x[target];
    const ty = targets.y[target];
    const tz = targets.z[target];
    let [v, ex, ey, ez] = [0, 0, 0, 0];
    let [vLost, xLost, yLost, zLost] = [0, 0, 0, 0];
    let isMasked = false;
    for (let j = 0; j < x.length; j++) {
      if (charge[j] === 0) continue;
      const dx = tx - x[j];
      const dy = ty - y[j];
      const dz = tz - z[j];
      const r = Math.sqrt(dx * dx + dy * dy + dz * dz);
      if (r === 0) isMasked = true;
      const potential = charge[j] / r;
      const strength = potential / r / r;
      let sum = v + potential;
      vLost += lost(v, potential, sum);
      v = sum;
      sum = ex + strength * dx;
      xLost += lost(ex, strength * dx, sum);
      ex = sum;
      sum = ey + strength * dy;
      yLost += lost(ey, strength * dy, sum);
      ey = sum;
      sum = ez + strength * dz;
      zLost += lost(ez, strength * dz, sum);
      ez = sum;
    }
    [v + vLost, ex + xLost, ey + yLost, ez + zLost].forEach((value, column) => {
      columns[column][n] = isMasked ? NaN : COULOMB * value;
    });
  });
  return {indices: which, columns};
}

/** What a + b loses when it is rounded to `sum`. */
const lost = (a: number, b: number, sum: number): number =>
  Math.abs(a) >= Math.abs(b) ? a - sum + b : b - sum + a;
