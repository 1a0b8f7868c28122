import {UNIT_ROUNDOFF} from '../exact.ts';
import {POSITION_COLUMNS} from '../kernels/layout.ts';
import {MIN_DISTANCE} from '../limits.ts';
import {positionColumns} from '../positions.ts';
import {targetPositions} from '../targets.ts';
import type {Arena} from './arena.ts';
import {efforts} from './effort.ts';
import {targetTree} from './interactions.ts';
import {atPhase, type MultipoleJob, type Part, type PartCharges} from './multipole-job.ts';
import {nearWork} from './near.ts';
import {chooseSamples, samplingWork} from './samples.ts';
import {
  boundsOf,
  COLUMN_PADDING,
  rootCube,
  sourceTree,
  type Positions,
  type SourceTree,
} from './source-tree.ts';
import type {Cube} from './boxes.ts';
import {largestCell, latticeCube, latticeOf} from './lattice.ts';
import type {LoadedTable} from './load-table.ts';
import {writeSources, writeTargets} from './structs.ts';
import {checkStop, tableOf, type Tools} from './tools.ts';

const BATCH = 256;

/** Sorts charges and targets into trees and finds who is near whom. */
export function begin(job: MultipoleJob, tools: Tools): MultipoleJob {
  const {field} = job;
  const {arena} = tools;
  const {targets, radius} = positionsOf(job, tools.spare);
  const rounding = field.charges.largestRadius + radius;
  const reach = Math.max(field.coincidenceDistance, rounding, MIN_DISTANCE);
  const table = tableOf(tools, efforts[job.effort].level.name);
  const parts = job.charges.map(charges => {
    return partOf(job, charges, targets, reach, table, tools);
  });
  const samples = chooseSamples(field, arena);
  const near = nearWork(job, parts);
  return atPhase(job, 'near', [...near.work, ...samplingWork(field, samples)], {
    nearPairs: near.pairs,
    table,
    parts,
    samples,
    reach: Math.max(field.coincidenceDistance, rounding),
    coincident: [],
    coincidentCount: 0,
  });
}

/** All targets as placed, and their largest radius. */
function positionsOf({field}: MultipoleJob, spare: Arena): {targets: Positions; radius: number} {
  const {count} = field;
  const [x, y, z] = [0, 1, 2].map(() => spare.doubles(count));
  const batch = positionColumns(new Float64Array(POSITION_COLUMNS * BATCH), BATCH);
  let radius = 0;
  for (let start = 0; start < count; start += BATCH) {
    const length = Math.min(BATCH, count - start);
    targetPositions(field.targets, start, length, batch);
    x.set(batch.x.subarray(0, length), start);
    y.set(batch.y.subarray(0, length), start);
    z.set(batch.z.subarray(0, length), start);
    for (let i = 0; i < length; i++) radius = Math.max(radius, batch.radius[i]);
  }
  return {targets: {count, x, y, z}, radius};
}

function partOf(
  {field, effort}: MultipoleJob,
  charges: PartCharges,
  placed: Positions,
  placedReach: number,
  table: LoadedTable,
  {arena, spare, forms, stop}: Tools,
): Part {
  const {pairs, capacity} = efforts[effort];
  const targets = inFrame(charges, placed, spare);
  const bounds = boundsOf(targets);
  // Turning targets into the frame rounds them, and what is coincident must still be near.
  const largest = Math.max(...bounds.high.map(Math.abs), ...bounds.low.map(Math.abs));
  const reach = placedReach + (charges.placement ? 64 * UNIT_ROUNDOFF * largest : 0);
  const lattice = charges.placement ? undefined : latticeOf(field.targets);
  const root = lattice ? latticeCube(lattice, boundsOf(charges)) : rootCube(charges, bounds);
  const {digest} = charges;
  const make = (own: Arena): SourceTree => sourceTree(own, spare, charges, root, capacity);
  const key = digest && treeKey(digest, root, capacity);
  const sources = key === undefined ? make(arena) : forms.get(key, make);
  checkStop(stop);
  const tree = targetTree(arena, spare, targets, sources, table, {
    pairs,
    smallestBox: reach,
    ...(lattice && {largestBox: largestCell(lattice)}),
  });
  checkStop(stop);
  const column = (): Float64Array => arena.doubles(targets.count + COLUMN_PADDING);
  const values = {
    v: column(),
    e: field.sum === 'potential' ? [] : [column(), column(), column()],
    flags: arena.flags(targets.count),
  };
  return {
    charges,
    sources,
    treeKey: key,
    ...(lattice && {lattice}),
    targets: tree,
    values,
    reach,
    sourcesAddress: writeSources(arena, sources),
    targetsAddress: writeTargets(arena, tree, values, 0),
  };
}

/** p = Rᵀ (p′ − t) */
function inFrame({placement}: PartCharges, placed: Positions, spare: Arena): Positions {
  if (!placement) return placed;
  const {count} = placed;
  const [a, b, c, d, e, f, g, h, i] = placement.rotation;
  const [tx, ty, tz] = placement.shift;
  const [x, y, z] = [0, 1, 2].map(() => spare.doubles(count));
  for (let n = 0; n < count; n++) {
    const px = placed.x[n] - tx;
    const py = placed.y[n] - ty;
    const pz = placed.z[n] - tz;
    x[n] = a * px + d * py + g * pz;
    y[n] = b * px + e * py + h * pz;
    z[n] = c * px + f * py + i * pz;
  }
  return {count, x, y, z};
}

const treeKey = (digest: string, {x, y, z, size}: Cube, capacity: number): string =>
  `tree:${digest}:${x},${y},${z},${size}:${capacity}`;
