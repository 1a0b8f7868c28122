import {directMilliseconds, multipoleMilliseconds} from '../server/engine/multipole/cost-model.ts';
import {createWorkshop, type Charges, type Points} from '../tests/support/workshop.ts';
import {printMachine} from './compare.ts';
import {printRatio} from './interleave.ts';
import {cube, generator, points, withCharges} from './shapes.ts';

// Question: over a sweep of charges and targets, how much slower than the better of the two methods
// is the one that the cost model chooses? Processor time on one thread, best of all rounds, both in
// turn; where the model sees one ahead by more than CLEARLY it is still measured, once. Beyond
// MOST_PAIRS direct sums are timed at some targets and scaled.
const SIZES = [600, 2000, 6000, 20_000, 60_000];
const TOLERANCES = [1e-3, 1e-6, 1e-9];
const ROUNDS = 3;
const CLEARLY = 8;
const MOST_PAIRS = 2e8;

const workshop = createWorkshop();
const random = generator(3);
printMachine();

let worst = 1;
for (const tolerance of TOLERANCES) {
  for (const charges of SIZES) for (const targets of SIZES) measure(charges, targets, tolerance);
}
printRatio('chosen method ÷ better method, worst of the sweep', worst, {atMost: 1.2});

function measure(chargeCount: number, targetCount: number, tolerance: number): void {
  const charges = withCharges(points(chargeCount, cube(random)), random);
  const targets = points(targetCount, cube(random));
  const expected = {
    direct: directMilliseconds(chargeCount, targetCount, true),
    multipole: multipoleMilliseconds(chargeCount, targetCount, tolerance, true),
  };
  const ahead = Math.max(
    expected.direct / expected.multipole,
    expected.multipole / expected.direct,
  );
  const best = {direct: Infinity, multipole: Infinity};
  for (let round = 0; round < (ahead > CLEARLY ? 1 : ROUNDS); round++) {
    best.direct = Math.min(best.direct, direct(charges, targets));
    best.multipole = Math.min(best.multipole, multipole(charges, targets, tolerance));
  }
  const chosen = expected.multipole < expected.direct ? 'multipole' : 'direct';
  const ratio = best[chosen] / Math.min(best.direct, best.multipole);
  worst = Math.max(worst, ratio);
  const pair = ({direct, multipole}: typeof best): string =>
    `${direct.toFixed(1).padStart(9)} / ${multipole.toFixed(1).padStart(7)}`;
  console.log(
    `${tolerance.toExponential(0)}  ${String(chargeCount).padStart(6)} × ${String(targetCount).padEnd(6)} direct / multipole [ms]: expected ${pair(expected)}   measured ${pair(best)}   ${chosen.padEnd(9)} ${ratio.toFixed(2)}`,
  );
}

function effort(ask: () => ReturnType<typeof workshop.compute>): number {
  return ask().steps.reduce((sum, {name, milliseconds}) => {
    return sum + (name === 'pack' ? 0 : milliseconds);
  }, 0);
}

function direct(charges: Charges, {x, y, z}: Points): number {
  const count = Math.min(x.length, Math.ceil(MOST_PAIRS / charges.x.length));
  const some = {x: x.slice(0, count), y: y.slice(0, count), z: z.slice(0, count)};
  return (effort(() => workshop.compute({charges, targets: some})) * x.length) / count;
}

function multipole(charges: Charges, targets: Points, tolerance: number): number {
  return effort(() => workshop.compute({charges, targets, tolerance}));
}
