import {COULOMB_CONSTANT} from '../../../shared/physical-constants';
import {sectionOf, type Section} from '../field-picture/section';

/** Potentials in V from charges in nC and distances in mm: 1e-9 C/nC and 1e3 mm/m. */
const COULOMB = COULOMB_CONSTANT * 1e-6;

const CHARGES_PER_ROD = 81;
const ROD_CHARGE = 400; // nC
const ROD_LENGTH = 400; // mm
/** Neighbouring rods are 52 mm apart. */
const REACH = 52 / Math.SQRT2; // mm
const HALF_WIDTH = 84; // mm
const POINTS = 141;
const CLOSEST = 2.5; // mm

const RODS: readonly (readonly [number, number, number])[] = [
  [REACH, 0, 1],
  [0, REACH, -1],
  [-REACH, 0, 1],
  [0, -REACH, -1],
];

/** Squares of the heights of the charges of a rod above the section. */
const HEIGHTS = Array.from({length: CHARGES_PER_ROD}, (_, k) => {
  const height = (k / (CHARGES_PER_ROD - 1) - 0.5) * ROD_LENGTH;
  return height * height;
});

/** V, and E in V/mm, in the middle of the rods: the plain sum over all 324 charges. */
function evaluate(x: number, z: number): {v: number; ex: number; ez: number} {
  const q = (COULOMB * ROD_CHARGE) / CHARGES_PER_ROD;
  let [v, ex, ez] = [0, 0, 0];
  for (const [rodX, rodZ, sign] of RODS) {
    const [dx, dz] = [x - rodX, z - rodZ];
    for (const height of HEIGHTS) {
      const inverse = 1 / Math.sqrt(dx * dx + dz * dz + height);
      const part = sign * q * inverse;
      v += part;
      ex += part * inverse * inverse * dx;
      ez += part * inverse * inverse * dz;
    }
  }
  return {v, ex, ez};
}

/** Lines of force from the two positive rods, by steps of half a millimetre (midpoint rule). */
function fieldLines(): Float64Array[] {
  const starts = RODS.filter(([, , sign]) => sign > 0).flatMap(([x, z]) =>
    Array.from({length: 14}, (_, k) => {
      const angle = ((k + 0.5) / 14) * 2 * Math.PI;
      return [x + CLOSEST * Math.cos(angle), z + CLOSEST * Math.sin(angle)];
    }),
  );
  return starts.map(([x, z]) => {
    const line: number[] = [x, z];
    for (let step = 0; step < 500; step++) {
      const here = evaluate(x, z);
      const size = Math.hypot(here.ex, here.ez);
      const middle = evaluate(x + (0.25 * here.ex) / size, z + (0.25 * here.ez) / size);
      const length = Math.hypot(middle.ex, middle.ez);
      x += (0.5 * middle.ex) / length;
      z += (0.5 * middle.ez) / length;
      line.push(x, z);
      const hasArrived = RODS.some(([rodX, rodZ]) => Math.hypot(x - rodX, z - rodZ) < CLOSEST);
      if (hasArrived || Math.max(Math.abs(x), Math.abs(z)) > HALF_WIDTH + 10) break;
    }
    return Float64Array.from(line);
  });
}

export interface FourRods {
  readonly section: Section;
  readonly lines: readonly Float64Array[];
  /** Field strength in the centre, V/m. */
  readonly centre: number;
}

/** The picture beside the sign-in form: four charged rods, summed charge by charge. */
export function fourRods(): FourRods {
  const step = (2 * HALF_WIDTH) / (POINTS - 1);
  const potential: number[] = [];
  for (let j = 0; j < POINTS; j++) {
    for (let i = 0; i < POINTS; i++) {
      potential.push(evaluate(i * step - HALF_WIDTH, j * step - HALF_WIDTH).v / 1000);
    }
  }
  const bodies = RODS.map(([x, z, sign], k) => ({
    id: `rod ${k}`,
    charges: {x: [x], y: [0], z: [z], charge: [sign * ROD_CHARGE]},
  }));
  const section = sectionOf(
    {
      origin: [-HALF_WIDTH, 0, -HALF_WIDTH],
      steps: [
        [step, 0, 0],
        [0, 0, step],
        [0, 0, 0],
      ],
      counts: [POINTS, POINTS, 1],
    },
    bodies,
    {potential},
    {length: 'mm', charge: 'nC', potential: 'kV'},
  );
  if (section === null) throw new RangeError('the grid of the four rods is a section');
  const {ex, ez} = evaluate(0, 0);
  return {section, lines: fieldLines(), centre: Math.hypot(ex, ez) * 1000};
}
