import type {Body} from '../../../shared/api';
import {seededNormal, seededRandom} from './seeded-random';

/** Few digits, so that the request stays small: tenths of a millimetre, hundredths of a picocoulomb. */
const tenths = (value: number): number => Math.round(10 * value) / 10 + 0;
const hundredths = (value: number): number => Math.round(100 * value) / 100;

const GUN = 150;
const DROPLETS = 30_000;
/** Mean height of the droplets: they are spread evenly from 10 to 120 mm. */
const HEIGHT = 65;
/** The panel is 400 by 200 mm, a charge on every 4 mm². */
const [ALONG, ACROSS, STEP] = [200, 100, 2];

/**
 * A spray of charged droplets from a gun at z = 150 on its way to an earthed panel at z = 0, in mm and pC:
 * 30 000 droplets, and 20 000 charges on the panel for what the cloud induces there. The numbers are
 * invented.
 */
export function sprayAbovePanel(seed: number): Body[] {
  const random = seededRandom(seed);
  const normal = seededNormal(random);
  const [x, y, z, charge]: number[][] = [[], [], [], []];
  let total = 0;
  for (let k = 0; k < DROPLETS; k++) {
    const height = 10 + 110 * random();
    const spread = 6 + 0.3 * (GUN - height);
    // Diameters are log-normal, and the charge goes with diameter to the power 1.5.
    const droplet = hundredths(-0.9 * Math.exp(1.5 * 0.3 * normal()));
    x.push(tenths(spread * normal()));
    y.push(tenths(spread * normal()));
    z.push(tenths(height));
    charge.push(droplet);
    total += droplet;
  }
  return [
    {id: 'spray', charges: {x, y, z, charge}},
    {id: 'panel', charges: inducedBy(total)},
  ];
}

/**
 * What a charge at the mean height of the cloud induces on an earthed plane:
 *
 *     σ(ρ) = −Q h / (2π (ρ² + h²)^(3/2))
 *
 * D. J. Griffiths, Introduction to Electrodynamics, 4th ed., eq. 3.10.
 */
function inducedBy(total: number): Body['charges'] {
  const [x, y, z, charge]: number[][] = [[], [], [], []];
  for (let j = 0; j < ACROSS; j++) {
    for (let i = 0; i < ALONG; i++) {
      const [along, across] = [STEP * (i + 0.5) - ALONG, STEP * (j + 0.5) - ACROSS];
      const distance = Math.sqrt(along ** 2 + across ** 2 + HEIGHT ** 2);
      x.push(along);
      y.push(across);
      z.push(0);
      charge.push(hundredths((-total * HEIGHT * STEP ** 2) / (2 * Math.PI * distance ** 3)));
    }
  }
  return {x, y, z, charge};
}
