import type {FieldJob} from './jobs.ts';
import type {Memory} from './memory.ts';
import {beginningOf, type MultipoleJob, type PartCharges} from './multipole/multipole-job.ts';
import type {PackedAssembly} from './pack-charges.ts';
import type {Plan} from './plan.ts';

/** Bodies of so many charges have trees of their own, which outlive a new placement … */
const OWN_TREE = 4096;
/** … but only the largest few, since every tree of charges takes one of all targets. */
const MOST_TREES = 4;

/** A field job to be computed by the multipole method. */
export function packMultipole(
  {mostPairs, request}: Plan,
  field: FieldJob,
  assembly: PackedAssembly,
  memory: Memory,
): MultipoleJob {
  const {starts} = assembly;
  const sizeOf = (body: number): number => starts[body + 1] - starts[body];
  const own = request.bodies
    .map((_, body) => body)
    .filter(body => sizeOf(body) >= OWN_TREE && assembly.unplaced[body])
    .sort((a, b) => sizeOf(b) - sizeOf(a) || a - b)
    .slice(0, MOST_TREES);
  const rest = request.bodies.map((_, body) => body).filter(body => !own.includes(body));
  const charges = own.map(body => ownPart(body, field, assembly, memory));
  if (rest.length > 0) charges.push(sharedPart(rest, field, assembly, memory));
  return beginningOf(field, charges, mostPairs);
}

/** A body where it was given: its placement comes on top. */
function ownPart(
  body: number,
  {charges}: FieldJob,
  {starts, placements, digests, unplaced}: PackedAssembly,
  memory: Memory,
): PartCharges {
  const ranges = [starts[body], starts[body + 1]];
  const count = ranges[1] - ranges[0];
  const {rotation, shift, isIdentity} = placements[body];
  const given = unplaced[body];
  if (isIdentity || !given) {
    const of = (column: Float64Array): Float64Array => column.subarray(ranges[0], ranges[1]);
    const {x, y, z, q} = charges;
    return {count, x: of(x), y: of(y), z: of(z), q: of(q), ranges, digest: digests[body]};
  }
  const copy = (column: Float64Array): Float64Array => {
    const out = memory(count);
    out.set(column);
    return out;
  };
  return {
    count,
    x: copy(given.x),
    y: copy(given.y),
    z: copy(given.z),
    q: copy(given.q),
    ranges,
    placement: {rotation: rotation.matrix, shift: [shift.x, shift.y, shift.z]},
    digest: digests[body],
  };
}

/** All other bodies as they are placed. */
function sharedPart(
  bodies: readonly number[],
  {charges}: FieldJob,
  {starts}: PackedAssembly,
  memory: Memory,
): PartCharges {
  const ranges = bodies.flatMap(body => [starts[body], starts[body + 1]]);
  const count = bodies.reduce((sum, body) => sum + starts[body + 1] - starts[body], 0);
  const gather = (column: Float64Array): Float64Array => {
    const out = memory(count);
    let at = 0;
    for (const body of bodies) {
      out.set(column.subarray(starts[body], starts[body + 1]), at);
      at += starts[body + 1] - starts[body];
    }
    return out;
  };
  const [x, y, z, q] = [charges.x, charges.y, charges.z, charges.q].map(gather);
  return {count, x, y, z, q, ranges};
}
