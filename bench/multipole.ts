import {filledRequest, type FilledRequest} from '../server/engine/filled-request.ts';
import {Forms, type KnownForms} from '../server/engine/forms.ts';
import {packAssembly} from '../server/engine/pack-charges.ts';
import {createWorkshop, type Charges, type Done, type Points} from '../tests/support/workshop.ts';
import {printMachine} from './compare.ts';
import {printRatio} from './interleave.ts';
import {clusters, cube, generator, points, sphere, withCharges, type Shape} from './shapes.ts';

// Question: how much quicker than the direct sum is the multipole method, at which errors, how does
// that grow with size, what memory does it take, and what does a kept tree save? Processor time on
// one thread, best of all rounds, both sides in turn. Direct sums are timed at some targets and
// scaled: at 1e6 charges 10,000 of them, spread over the rounds. Errors are measured at targets
// summed apart from the engine, over the norm at all targets.
const ROUNDS = 9;
const DIRECT_TARGETS = 10_000;
const CHECKED = 100;
/** Of the error measured: the tolerance asked for, which both V and E must keep. */
const TOLERANCE = 1e-6;

const workshop = createWorkshop();
const random = generator(1);

interface Case {
  readonly charges: Charges;
  readonly targets: Points;
}

function caseOf(count: number, shape: Shape): Case {
  const place = shape(random);
  return {charges: withCharges(points(count, place), random), targets: points(count, place)};
}

const part = ({x, y, z}: Points, from: number, count: number): Points => ({
  x: x.slice(from, from + count),
  y: y.slice(from, from + count),
  z: z.slice(from, from + count),
});

/** [ms] of all steps but packing, which both methods share. */
const effortOf = ({steps}: Done): number =>
  steps.reduce((sum, {name, milliseconds}) => sum + (name === 'pack' ? 0 : milliseconds), 0);

/** @returns [ms] the best time of the multipole method */
function compare(name: string, count: number, shape: Shape, bar: {atLeast: number}): number {
  const {charges, targets} = caseOf(count, shape);
  const perRound = Math.ceil(DIRECT_TARGETS / ROUNDS);
  let direct = Infinity;
  let multipole = Infinity;
  let done: Done | undefined;
  for (let round = 0; round < ROUNDS; round++) {
    const some = part(targets, round * perRound, perRound);
    const sum = workshop.compute({charges, targets: some});
    direct = Math.min(direct, (effortOf(sum) * count) / some.x.length);
    done = workshop.compute({charges, targets, tolerance: TOLERANCE});
    multipole = Math.min(multipole, effortOf(done));
  }
  if (done?.method !== 'multipole') throw new Error(`${name} was not computed by multipoles`);
  const errors = errorsOf({charges, targets}, done);
  console.log(
    `${name}: ${(multipole / 1000).toFixed(2)} s against ${(direct / 1000).toFixed(1)} s; error of V ${errors.potential.toExponential(1)}, of E ${errors.field.toExponential(1)} (asked ${TOLERANCE})`,
  );
  if (Math.max(errors.potential, errors.field) > TOLERANCE) {
    throw new Error('the error is larger than what was asked');
  }
  printRatio(`${name}: direct ÷ multipole`, direct / multipole, bar);
  return multipole;
}

const COULOMB_CONSTANT = 8.9875517862e9;

/** Relative errors in least squares, from plain sums at some targets. */
function errorsOf({charges, targets}: Case, {columns}: Done): {potential: number; field: number} {
  const count = targets.x.length;
  const error = {potential: 0, field: 0};
  const sums = [0, 0, 0, 0];
  for (let n = 0; n < CHECKED; n++) {
    const target = Math.floor((n * count) / CHECKED);
    sums.fill(0);
    for (let j = 0; j < charges.x.length; j++) {
      const x = targets.x[target] - charges.x[j];
      const y = targets.y[target] - charges.y[j];
      const z = targets.z[target] - charges.z[j];
      const inverse = 1 / Math.sqrt(x * x + y * y + z * z);
      const potential = charges.charge[j] * inverse;
      const strength = potential * inverse * inverse;
      sums[0] += potential;
      sums[1] += strength * x;
      sums[2] += strength * y;
      sums[3] += strength * z;
    }
    const differences = sums.map((sum, axis) => columns[axis][target] / COULOMB_CONSTANT - sum);
    error.potential += differences[0] ** 2;
    error.field += differences[1] ** 2 + differences[2] ** 2 + differences[3] ** 2;
  }
  const norm = {potential: 0, field: 0};
  for (let i = 0; i < count; i++) {
    norm.potential += (columns[0][i] / COULOMB_CONSTANT) ** 2;
    for (let axis = 1; axis < 4; axis++) norm.field += (columns[axis][i] / COULOMB_CONSTANT) ** 2;
  }
  const relative = (sum: number, all: number): number => Math.sqrt(sum / CHECKED / (all / count));
  return {
    potential: relative(error.potential, norm.potential),
    field: relative(error.field, norm.field),
  };
}

function growth(atMillion: number): void {
  const {charges, targets} = caseOf(125_000, cube);
  let least = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    least = Math.min(least, effortOf(workshop.compute({charges, targets, tolerance: TOLERANCE})));
  }
  printRatio('growth: time at 1e6 ÷ time at 1.25e5', atMillion / least, {atMost: 10});
}

/** What the first sum of that size adds to the memory of the process, packed columns included. */
function memoryAtOneMillion(): void {
  const {charges, targets} = caseOf(1e6, cube);
  const before = process.memoryUsage().rss;
  const {resident} = workshop.compute({charges, targets, tolerance: TOLERANCE});
  const added = (resident - before) / 1e6;
  printRatio('1e6 charges at 1e6 targets: resident memory added [MB]', added, {atMost: 400});
}

/** 1e5 charges that stay, 1e4 targets that are new in every call; packing included. */
function dragLoop(): void {
  const {charges} = caseOf(1e5, cube);
  const request = requestOf(charges);
  let first = Infinity;
  let second = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    const place = cube(random);
    const asked = {charges, tolerance: TOLERANCE, digest: `round-${round}`};
    const made = packing(request, {});
    const fresh = workshop.compute({...asked, targets: points(1e4, place)});
    const found = packing(request, made.known);
    const kept = workshop.compute({...asked, targets: points(1e4, place)});
    if (fresh.hits > 0 || kept.misses > 0) throw new Error('expected the tree to be kept');
    first = Math.min(first, made.milliseconds + effortOf(fresh));
    second = Math.min(second, found.milliseconds + effortOf(kept));
    made.release();
  }
  console.log(`drag loop: ${first.toFixed(0)} ms, then ${second.toFixed(0)} ms`);
  const name = 'drag loop, 1e5 charges, 1e4 targets: second call ÷ first';
  printRatio(name, second / first, {atMost: 0.5});
}

function requestOf({x, y, z, charge}: Charges): FilledRequest {
  const columns = {x: [...x], y: [...y], z: [...z], charge: [...charge]};
  return filledRequest('fields', {
    units: {length: 'mm', charge: 'nC'},
    bodies: [{charges: columns}],
    targets: {points: {x: [0], y: [0], z: [0]}},
  });
}

let formTag = -2_000_000;

/** [ms] of packing a body that is known, or not yet. */
function packing(
  request: FilledRequest,
  known: KnownForms,
): {milliseconds: number; known: KnownForms; release: () => void} {
  const {heap} = workshop;
  const forms = new Forms(known, heap, () => --formTag);
  const start = process.cpuUsage();
  packAssembly(request, heap.memoryOf(PACKING), forms);
  const {user, system} = process.cpuUsage(start);
  heap.release(PACKING);
  const {made} = forms.report;
  return {
    milliseconds: (user + system) / 1000,
    known: Object.fromEntries(made.map(({key, value}) => [key, value])),
    release: () => {
      for (const {tag} of made) heap.release(tag);
    },
  };
}

/** Tag of memory for packing. */
const PACKING = 1_000_000;

printMachine();
memoryAtOneMillion();
const atMillion = compare('1e6, cube', 1e6, cube, {atLeast: 250});
compare('1e5, cube', 1e5, cube, {atLeast: 26});
compare('1e6, 20 clusters', 1e6, clusters, {atLeast: 170});
compare('1e6, sphere surface', 1e6, sphere, {atLeast: 300});
growth(atMillion);
dragLoop();
