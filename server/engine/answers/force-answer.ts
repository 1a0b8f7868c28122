import {unitOf} from '../../../shared/units.ts';
import {ServiceError, type Issue} from '../../errors.ts';
import {CompensatedSum} from '../compensated-sum.ts';
import {UNIT_ROUNDOFF} from '../exact.ts';
import {vectorLength} from '../field-columns.ts';
import {ISSUES_LISTED} from '../limits.ts';
import {FORCE_STRIDE, type BlockReport, type ForceJob} from '../jobs.ts';
import {outputScale, scaled, scaledBound, type OutputScale} from '../output-scale.ts';
import {numbersIn, resultDigest} from './digests.ts';
import {placeOf} from './field-answer.ts';
import {answerTail, usedCoincidenceDistance, type AnswerHeader, type Timing} from './header.ts';

interface Scales {
  readonly force: OutputScale;
  readonly torque: OutputScale;
  readonly energy: OutputScale;
}

interface Xyz {
  readonly x: number;
  readonly y: number;
  readonly z: number;
}

/**
 * Writes the answer of a force job, whose blocks are all done, as JSON.
 *
 * The result digest is over the numbers of `bodies`, `energy`, `interactions`, `charges` and `probes`
 * in the order of the answer: for each body charge, force, torque, about, then forceBound and
 * internalEnergy where they are answered; for each interaction force and energy; then columns.
 *
 * @throws ServiceError overlapping-charges
 */
export function forceAnswer(
  header: AnswerHeader,
  job: ForceJob,
  reports: readonly BlockReport[],
  timing: Timing,
): Uint8Array {
  refuseOverlaps(header, job, reports);
  const charge = unitOf('charge', job.symbols.charge);
  const scaleOf = (dimension: 'force' | 'torque' | 'energy'): OutputScale =>
    outputScale(dimension, job.symbols[dimension], job.relativePermittivity, charge);
  const scales = {force: scaleOf('force'), torque: scaleOf('torque'), energy: scaleOf('energy')};

  const energy = new CompensatedSum();
  const bodies = header.bodyIds.map((id, body) => bodyForce(job, scales, id, body, energy));
  const values = {
    bodies,
    energy: scaled(scales.energy, energy.value / 2),
    ...(job.hasInteractions && {interactions: interactions(header, job, reports, scales)}),
    ...(job.hasCharges && {charges: forceColumns(job, scales, 0, job.charges.count)}),
    ...(job.probes && {probes: probeColumns(job, scales)}),
  };
  let reach = 0;
  for (const report of reports) reach = Math.max(reach, report.reach);
  const numbers = numbersIn(values);
  if (!numbers.every(Number.isFinite)) {
    throw new ServiceError('number-overflow', 'A force is larger than a double can hold.');
  }
  const text = JSON.stringify({...values, units: header.units}).slice(0, -1);
  const used = usedCoincidenceDistance(header, reach);
  return Buffer.from(text + answerTail(header, used, resultDigest(numbers), timing), 'utf8');
}

function bodyForce(
  job: ForceJob,
  scales: Scales,
  id: string,
  body: number,
  energy: CompensatedSum,
) {
  const {charges, out} = job;
  const force = [0, 1, 2].map(() => new CompensatedSum());
  const torque = [0, 1, 2].map(() => new CompensatedSum());
  const internal = new CompensatedSum();
  const [ax, ay, az] = job.about[body];
  let bound = 0;
  for (let i = job.starts[body]; i < job.starts[body + 1]; i++) {
    const place = FORCE_STRIDE * i;
    const q = charges.q[i];
    const fx = q * out[place];
    const fy = q * out[place + 1];
    const fz = q * out[place + 2];
    force[0].add(fx);
    force[1].add(fy);
    force[2].add(fz);
    const x = charges.x[i] - ax;
    const y = charges.y[i] - ay;
    const z = charges.z[i] - az;
    torque[0].add(y * fz);
    torque[0].add(-z * fy);
    torque[1].add(z * fx);
    torque[1].add(-x * fz);
    torque[2].add(x * fy);
    torque[2].add(-y * fx);
    energy.add(q * out[place + 3]);
    internal.add(q * out[place + 4]);
    // The field's bound, the rounding of the charge, of the product, and of sums over bodies.
    const size = vectorLength(out[place], out[place + 1], out[place + 2]);
    const lost = Math.abs(charges.qRemainder[i]) + Math.abs(q) * SUMMING;
    bound += Math.abs(q) * out[place + 5] + lost * size;
  }
  const [x, y, z] = force.map(sum => sum.value);
  return {
    id,
    charge: job.totalCharges[body] + 0,
    force: vector(scales.force, x, y, z),
    torque: vector(scales.torque, torque[0].value, torque[1].value, torque[2].value),
    about: point(job.aboutAsGiven[body]),
    ...(job.hasBounds && {
      forceBound: scaledBound(scales.force, vectorLength(x, y, z), bound * (1 + 1e-9)),
    }),
    ...(job.hasInternalEnergy && {internalEnergy: scaled(scales.energy, internal.value / 2)}),
  };
}

/** Relative: one product, and the additions of compensated sums, which round once at the end. */
const SUMMING = 3 * UNIT_ROUNDOFF;

const vector = (scale: OutputScale, x: number, y: number, z: number): Xyz => ({
  x: scaled(scale, x),
  y: scaled(scale, y),
  z: scaled(scale, z),
});

const point = ([x, y, z]: readonly number[]): Xyz => ({x: x + 0, y: y + 0, z: z + 0});

function interactions(
  header: AnswerHeader,
  job: ForceJob,
  reports: readonly BlockReport[],
  scales: Scales,
) {
  const {bodyIds} = header;
  const listed: {of: string; on: string; force: Xyz; energy: number}[] = [];
  for (let of = 0; of < bodyIds.length; of++) {
    for (let on = of + 1; on < bodyIds.length; on++) {
      const sums = [0, 1, 2, 3].map(() => new CompensatedSum());
      for (let block = 0; block < reports.length; block++) {
        const start = job.blocks[block];
        if (start < job.starts[on] || start >= job.starts[on + 1]) continue;
        sums.forEach((sum, n) => sum.add(reports[block].interactions?.[4 * of + n] ?? 0));
      }
      const [x, y, z, energy] = sums.map(sum => sum.value);
      listed.push({
        of: bodyIds[of],
        on: bodyIds[on],
        force: vector(scales.force, x, y, z),
        energy: scaled(scales.energy, energy),
      });
    }
  }
  return listed;
}

function forceColumns(
  job: ForceJob,
  scales: Scales,
  from: number,
  to: number,
  feeling = job.charges,
) {
  const component = (n: number): number[] => {
    const column: number[] = [];
    for (let i = from; i < to; i++) {
      column.push(scaled(scales.force, feeling.q[i - from] * job.out[FORCE_STRIDE * i + n]));
    }
    return column;
  };
  return {forceX: component(0), forceY: component(1), forceZ: component(2)};
}

function probeColumns(job: ForceJob, scales: Scales) {
  const {charges, probes} = job;
  if (!probes) throw new RangeError('expected probes');
  return forceColumns(job, scales, charges.count, charges.count + probes.count, probes);
}

function refuseOverlaps(
  header: AnswerHeader,
  job: ForceJob,
  reports: readonly BlockReport[],
): void {
  const {count} = job.charges;
  const found = new Set<string>();
  const issues: Issue[] = [];
  let errorCount = 0;
  reports.forEach(({coincident, coincidentCount}, block) => {
    // Two charges of the assembly find each other, and each of the two is at fault once.
    errorCount += job.blocks[block] < count ? coincidentCount : 2 * coincidentCount;
    for (let n = 0; n < coincident.length; n += 2) {
      const [i, j] = [coincident[n], coincident[n + 1]];
      if (found.has(`${j} ${i}`)) continue;
      found.add(`${i} ${j}`);
      if (issues.length < ISSUES_LISTED) issues.push(...issuesOf(header, job, i, j));
    }
  });
  if (issues.length === 0) return;
  throw new ServiceError('overlapping-charges', `${issues[0].detail} Move one of them.`, {
    errors: issues,
    errorCount,
  });
}

function issuesOf(header: AnswerHeader, job: ForceJob, i: number, j: number): Issue[] {
  const [one, other] = [nameOf(header, job, i), nameOf(header, job, j)];
  const [initial, ...rest] = one.name;
  const detail = `${initial.toUpperCase()}${rest.join('')} and ${other.name} are at one place, so the force between them is not defined.`;
  return [one, other].map(({pointer}) => ({pointer, code: 'overlapping-charges', detail}));
}

function nameOf(
  header: AnswerHeader,
  job: ForceJob,
  index: number,
): {pointer: string; name: string} {
  if (index >= job.charges.count) {
    const probe = index - job.charges.count;
    return {pointer: `/probes/x/${probe}`, name: `probe ${probe}`};
  }
  const {body, charge} = placeOf(job.starts, index);
  return {
    pointer: `/bodies/${body}/charges/x/${charge}`,
    name: `charge ${charge} of body ${JSON.stringify(header.bodyIds[body])}`,
  };
}
