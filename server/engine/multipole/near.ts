import {MULTIPOLE_PAIRS_PER_POINT} from '../../../shared/pricing.ts';
import {ServiceError} from '../../errors.ts';
import type {FieldJob, Stop} from '../jobs.ts';
import {ownMemory} from '../memory.ts';
import {DirectSum, RESULT} from '../methods/direct-sum.ts';
import {chargeColumns, type ChargeColumns} from '../sources/charge-columns.ts';
import {targetPositions} from '../targets.ts';
import {ownWorkplace} from '../workplace.ts';
import {note, type Coincidences} from './coincidences.ts';
import type {TargetTree} from './interactions.ts';
import type {MultipoleJob, Part, PartCharges, Work} from './multipole-job.ts';
import {checkStop} from './tools.ts';
import {CHARGE_STRIDE} from './source-tree.ts';

/** Evaluations of a piece of work: some 20 ms of them. */
const PAIRS_OF_WORK = 8e6;

/** Leaves of all parts, in pieces of about the same work, and all pairs that are summed directly. */
export function nearWork(
  {field, mostPairs}: MultipoleJob,
  parts: readonly Part[],
): {work: Work[]; pairs: number} {
  const work: Work[] = [];
  let total = 0;
  parts.forEach(({targets}, part) => {
    const {length} = targets.leaves;
    let first = 0;
    let pairs = 0;
    for (let n = 0; n < length; n++) {
      pairs += pairsOfLeaf(targets, n);
      if (pairs < PAIRS_OF_WORK && n + 1 < length) continue;
      work.push({part, first, last: n + 1});
      total += pairs;
      first = n + 1;
      pairs = 0;
    }
  });
  const most = Math.max(mostPairs, NEAR_OF_PRICE * pointsOf(field));
  if (total > most) throw tooNear(total, most, field);
  return {work, pairs: total};
}

function pairsOfLeaf(targets: TargetTree, leaf: number): number {
  const box = targets.leaves[leaf];
  const {ranges} = targets;
  return (ranges[2 * box + 1] - ranges[2 * box]) * chargesNear(targets, box);
}

/** Near pairs that a charge or a target of a very large sum may have: twice what it is charged. */
const NEAR_OF_PRICE = 2 * MULTIPOLE_PAIRS_PER_POINT;

const pointsOf = ({charges, count}: FieldJob): number => charges.count + count;

function tooNear(pairs: number, most: number, {coincidenceDistance}: FieldJob): ServiceError {
  const detail = `So many charges and targets are within the coincidence distance or at so few places that ${pairs} pairs would be summed directly, and one call sums up to ${most}; use a smaller coincidenceDistance or split the targets over several calls.`;
  const pointer = coincidenceDistance > 0 ? '/coincidenceDistance' : '/targets';
  const code = 'too-large-for-synchronous';
  return new ServiceError(code, detail, {errors: [{pointer, code, detail}]});
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

/**
 * Sums the near part again at targets that may lie on a charge: as the direct sum does, with what
 * was rounded taken into account. Masked targets get NaN.
 */
export function sumFlagged(field: FieldJob, part: Part, found: Coincidences, stop: Stop): void {
  const {targets, values} = part;
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
    const alikes = new Map<number, Int32Array>();
    for (let i = from; i < to; i++) {
      if (values.flags[i] === 0) continue;
      checkStop(stop);
      const target = order[i];
      targetPositions(field.targets, target, 1, sum.positions);
      sum.compute(0, 1, [0, charges.count]);
      const coincident = (sum.coincident.get(0) ?? []).map(n => {
        const head = heads[n];
        const known = alikes.get(head) ?? chargesOf(field, part, head);
        alikes.set(head, known);
        return known;
      });
      if (coincident.length > 0) note(found, target, inOrder(coincident));
      const isMasked = sum.withoutSum.length > 0;
      if (isMasked) found.masked.add(target);
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

/** The charges, but those of zero, that one of a tree stands for. */
function chargesOf({charges: {q}}: FieldJob, {charges, sources}: Part, head: number): Int32Array {
  const {order, members} = sources;
  const all = Int32Array.from({length: members[head]}, (_, n) =>
    chargeAt(charges, order[head + n]),
  );
  return all.filter(index => q[index] !== 0).sort();
}

/** One ascending list of several. */
function inOrder(lists: readonly Int32Array[]): ArrayLike<number> {
  if (lists.length === 1) return lists[0];
  return Int32Array.from(lists.flatMap(list => [...list])).sort();
}
