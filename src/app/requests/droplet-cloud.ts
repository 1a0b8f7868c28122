import type {ChargeColumns} from '../../../shared/api';
import {seededNormal, seededRandom} from './seeded-random';

const round = (value: number, decimals: number): number => Number(value.toFixed(decimals));

/**
 * A spray of charged droplets on its way from a bell cup at z = 58 to a panel at z = 0, in mm and pC. The
 * cone widens downwards; diameters are log-normal and the charge goes with diameter to the power 1.5,
 * as at a fixed fraction of the Rayleigh limit. The numbers are invented.
 */
export function dropletCloud(count: number, seed: number): ChargeColumns {
  const random = seededRandom(seed);
  const normal = seededNormal(random);
  const [x, y, z, charge]: number[][] = [[], [], [], []];
  for (let k = 0; k < count; k++) {
    const height = 4 + 50 * random();
    const spread = 8 + 0.42 * (58 - height);
    const ring = 14 + 0.35 * (58 - height);
    const angle = 2 * Math.PI * random();
    const radius = Math.abs(ring + 0.35 * spread * normal());
    x.push(round(radius * Math.cos(angle), 3));
    y.push(round(radius * Math.sin(angle), 3));
    z.push(round(height, 3));
    charge.push(round(-0.9 * Math.exp(1.5 * 0.35 * normal()), 4));
  }
  return {x, y, z, charge};
}
