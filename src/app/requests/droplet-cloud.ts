import type {ChargeColumns} from '../../../shared/api';

/** Mulberry32, a small generator with 32 bits of state: the same seed gives the same cloud everywhere. */
function generator(seed: number): () => number {
  let state = seed | 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const round = (value: number, decimals: number): number => Number(value.toFixed(decimals));

/**
 * A spray of charged droplets on its way from a bell cup at z = 58 to a panel at z = 0, in mm and pC. The
 * cone widens downwards; diameters are log-normal and the charge goes with diameter to the power 1.5,
 * as at a fixed fraction of the Rayleigh limit. The numbers are invented.
 */
export function dropletCloud(count: number, seed: number): ChargeColumns {
  const random = generator(seed);
  const normal = (): number =>
    Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
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
