import {ServiceError} from '../../errors.ts';
import type {FieldJob} from '../jobs.ts';
import {COINCIDENCES_LISTED} from '../limits.ts';
import {ownMemory} from '../memory.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import {chargeColumns, type ChargeColumns} from '../sources/charge-columns.ts';
import {targetPositions} from '../targets.ts';
import {ownWorkplace} from '../workplace.ts';
import type {TargetTree} from './interactions.ts';
import type {MultipoleJob, Part, PartCharges, Work} from './multipole-job.ts';
import {CHARGE_STRIDE} from './source-tree.ts';

/** Evaluations of a piece of work: some 20 ms of them. */
const PAIRS_OF_WORK = 8e6;

/** Leaves of all parts, in pieces of about the same work. */
export function nearWork({mostPairs}: MultipoleJob, parts: readonly Part[]): Work[] {
  const work: Work[] = [];
  let total = 0;
  parts.forEach(({targets}, part) => {
    const {leaves, ranges} = targets;
    let first = 0;
    let pairs = 0;
    for (let n = 0; n < leaves.length; n++) {
      const box = leaves[n];
      const own = (ranges[2 * box + 1] - ranges[2 * box]) * chargesNear(targets, box);
      total += own;
      pairs += own;
      if (pairs < PAIRS_OF_WORK && n + 1 < leaves.length) continue;
      work.push({part, first, last: n + 1});
      first = n + 1;
      pairs = 0;
    }
  });
  if (total > mostPairs) throw tooNear(total, mostPairs);
  return work;
}

function tooNear(pairs: number, most: number): ServiceError {
  return new ServiceError(
    'too-large-for-synchronous',
    `So many charges and targets are within the coincidence distance or at so few places that ${pairs} pairs would be summed directly, and one call sums up to ${most}; use a smaller coincidenceDistance or split the targets over several calls.`,
    {errors: []},
  );
}

/** How many charges are near a box or one of its ancestors. */
function chargesNear(targets: TargetTree, box: number): number {
  let count = 0;
  forRuns(targets, box, (from, to) => (count += to - from));
  return count;
}

function forRuns(
  {parents, nearStarts, nearEntries}: TargetTree,
  box: number,
  visit: (from: number, to: number) => void,
): void {
  for (let at = box; at >= 0; at = parents[at]) {
    for (let n = nearStarts[at]; n < nearStarts[at + 1]; n++) {
      visit(nearEntries[2 * n], nearEntries[2 * n + 1]);
    }
  }
}

/** What `sumFlagged` found. */
export interface Coincidences {
  /** Target and charge; the first MOST_NOTED, in the order of the trees. */
  readonly pairs: (readonly [target: number, charge: number])[];
  coincidentCount: number;
}

const MOST_NOTED = 100_000;

/** Those that an answer may list, in the order of the request. */
export function listed({pairs}: Coincidences): number[] {
  const sorted = [...pairs].sort((a, b) => a[0] - b[0] || a[1] - b[1]);
  return sorted.slice(0, COINCIDENCES_LISTED).flat();
}

/**
 * Sums the near part again at targets that may lie on a charge: as the direct sum does, with what
 * was rounded taken into account. Masked targets get NaN.
 */
export function sumFlagged(field: FieldJob, part: Part, found: Coincidences): void {
  const {targets, values, sources} = part;
  const {leaves, ranges, order} = targets;
  for (const box of leaves) {
    const from = ranges[2 * box];
    const to = ranges[2 * box + 1];
    if (!values.flags.subarray(from, to).includes(1)) continue;
    const heads: number[] = [];
    forRuns(targets, box, (start, end) => {
      for (let j = start; j < end; j++) heads.push(j);
    });
    const charges = nearCharges(field, part, heads);
    const options = {
      kind: field.sum,
      bounds: 'none',
      coincidenceDistance: field.coincidenceDistance,
      isExcluding: field.onCoincidence === 'exclude',
      chargeRoundings: 0,
    } as const;
    const sum = new DirectSum(charges, options, 1, ownWorkplace);
    for (let i = from; i < to; i++) {
      if (values.flags[i] === 0) continue;
      const target = order[i];
      targetPositions(field.targets, target, 1, sum.positions);
      sum.compute(0, 1, [0, charges.count]);
      for (const head of sum.coincident.get(0) ?? []) {
        note(found, target, part.charges, sources, heads[head], field);
      }
      const isMasked = sum.withoutSum.length > 0;
      const [v, ex, ey, ez] = [RESULT.v, RESULT.e, RESULT.e + 1, RESULT.e + 2].map(place =>
        isMasked ? NaN : sum.result(place)[0],
      );
      values.v[i] = v;
      turnIn(part, [ex, ey, ez], i);
    }
  }
}

/** Stores a field of the common frame in that of a part: Rᵀ E. */
function turnIn(
  {charges: {placement}, values: {e}}: Part,
  field: readonly number[],
  i: number,
): void {
  if (e.length === 0) return;
  const rotation = placement?.rotation ?? [1, 0, 0, 0, 1, 0, 0, 0, 1];
  for (let column = 0; column < 3; column++) {
    let sum = 0;
    for (let row = 0; row < 3; row++) sum += rotation[3 * row + column] * field[row];
    e[column][i] = sum;
  }
}

/** The charges that stand at places of a tree, as the assembly has them. */
function nearCharges(
  {charges}: FieldJob,
  {charges: own, sources}: Part,
  heads: readonly number[],
): ChargeColumns {
  const out = chargeColumns(heads.length, ownMemory);
  const names = ['x', 'y', 'z', 'radius', 'xRemainder', 'yRemainder', 'zRemainder'] as const;
  heads.forEach((head, i) => {
    const index = chargeAt(own, sources.order[head]);
    for (const name of names) out[name][i] = charges[name][index];
    const charge = sources.charges[CHARGE_STRIDE * head + 3] / sources.chargeScale;
    // What stands for charges that cancel is still there.
    out.q[i] = charge === 0 && sources.members[head] > 1 ? Number.MIN_VALUE : charge;
  });
  return {...out, largestRadius: charges.largestRadius};
}

/** Which charge of the assembly the charge of a part is. */
export function chargeAt({ranges}: PartCharges, index: number): number {
  let left = index;
  for (let n = 0; n < ranges.length; n += 2) {
    const length = ranges[n + 1] - ranges[n];
    if (left < length) return ranges[n] + left;
    left -= length;
  }
  throw new RangeError(`expected a charge of the part; got ${index}`);
}

function note(
  found: Coincidences,
  target: number,
  own: PartCharges,
  {order, members}: Part['sources'],
  head: number,
  {charges}: FieldJob,
): void {
  const all = Array.from({length: members[head]}, (_, n) => chargeAt(own, order[head + n]));
  for (const index of all.sort((a, b) => a - b)) {
    if (charges.q[index] === 0) continue;
    found.coincidentCount++;
    if (found.pairs.length < MOST_NOTED) found.pairs.push([target, index]);
  }
}
