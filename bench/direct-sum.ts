import {cpus} from 'node:os';

import {ownMemory} from '../server/engine/memory.ts';
import {DirectSum, type BoundKind, type SumKind} from '../server/engine/methods/direct-sum.ts';
import {chargeColumns, type ChargeColumns} from '../server/engine/sources/charge-columns.ts';
import {POSITION_STRIDE} from '../server/engine/targets.ts';

/** How many pairs a second does one thread sum, by kernel and by the shape of the input? */

const CHARGES = 10_000;
const TARGETS = 200;
const RUNS = 9;

/** The same numbers in every run: a linear congruential generator (Numerical Recipes, §7.1). */
let state = 1;
const random = (): number => {
  state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
  return state / 2 ** 32;
};

interface Shape {
  readonly name: string;
  readonly point: () => [number, number, number];
}

const centres = Array.from({length: 20}, () => [random(), random(), random()]);
const shapes: readonly Shape[] = [
  {name: 'uniform', point: () => [random(), random(), random()]},
  {
    name: 'clustered',
    point: () => {
      const [x, y, z] = centres[Math.floor(random() * centres.length)];
      return [x + 1e-3 * random(), y + 1e-3 * random(), z + 1e-3 * random()];
    },
  },
  // All on one line, many at the same place, targets among them.
  {name: 'degenerate', point: () => [Math.floor(1000 * random()) / 1000, 0, 0]},
];

function chargesOf({point}: Shape): ChargeColumns {
  const charges = chargeColumns(CHARGES, ownMemory);
  for (let i = 0; i < CHARGES; i++) {
    [charges.x[i], charges.y[i], charges.z[i]] = point();
    charges.q[i] = random() - 0.5;
  }
  return charges;
}

const median = (values: number[]): number =>
  [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];

function measure(shape: Shape, kind: SumKind, bounds: BoundKind): void {
  const charges = chargesOf(shape);
  const sum = new DirectSum(charges, {
    kind,
    bounds,
    coincidenceDistance: 0,
    isExcluding: true,
    chargeRoundings: 1,
  });
  const target = new Float64Array(POSITION_STRIDE);
  const targets = Array.from({length: bounds === 'errors' ? TARGETS / 5 : TARGETS}, shape.point);
  const run = (): number => {
    const start = performance.now();
    for (const point of targets) {
      target.set(point);
      sum.at(target, [0, CHARGES]);
    }
    return (CHARGES * targets.length) / (performance.now() - start) / 1000;
  };
  for (let warm = 0; warm < 3; warm++) run();
  const rates = Array.from({length: RUNS}, run);
  const spread = (100 * (Math.max(...rates) - Math.min(...rates))) / median(rates);
  const name = `${kind}${bounds === 'none' ? '' : ` + ${bounds}`}`;
  console.log(
    `${name.padEnd(28)}${shape.name.padEnd(12)}${median(rates).toFixed(1).padStart(8)} Mpairs/s   spread ${spread.toFixed(0)} %`,
  );
}

console.log(`Node ${process.version}, ${cpus()[0].model.trim()}; one thread, ${CHARGES} charges`);
const kernels: readonly (readonly [SumKind, BoundKind])[] = [
  ['potential', 'none'],
  ['field', 'none'],
  ['fieldGradient', 'none'],
  ['field', 'errors'],
  ['field', 'magnitudes'],
];
for (const [kind, bounds] of kernels) for (const shape of shapes) measure(shape, kind, bounds);
