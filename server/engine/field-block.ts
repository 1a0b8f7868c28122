import {unitOf} from '../../shared/units.ts';
import {UNIT_ROUNDOFF} from './exact.ts';
import {COINCIDENCES_LISTED, ISSUES_LISTED} from './limits.ts';
import {DirectSum, RESULT} from './methods/direct-sum.ts';
import type {BlockReport, FieldColumn, FieldJob, Stop} from './jobs.ts';
import {outputScale, scaled, scaledBound, type OutputScale} from './output-scale.ts';
import {targetPositions} from './targets.ts';
import type {Workplace} from './workplace.ts';

/** Rounding of a length of three squares, their sum and a root, relative. */
const MAGNITUDE_ERROR = 3 * UNIT_ROUNDOFF;

/** Computes one block of a field job into `job.out`: columns, each as long as there are targets. */
export function computeFieldBlock(
  job: FieldJob,
  block: number,
  stop: Stop,
  workplace: Workplace,
): BlockReport {
  const {charges, columns} = job;
  const from = job.blocks[block];
  const to = job.blocks[block + 1];
  const options = {
    kind: job.sum,
    bounds: job.bounds,
    coincidenceDistance: job.coincidenceDistance,
    isExcluding: job.onCoincidence === 'exclude',
    chargeRoundings: unitOf('charge', job.symbols.charge).roundings,
  };
  const sum = new DirectSum(charges, options, to - from, workplace);
  const scales = scalesOf(job);
  const ranges = [0, charges.count];
  const most = job.onCoincidence === 'reject' ? ISSUES_LISTED : COINCIDENCES_LISTED;
  const listed: number[] = [];
  let coincidentCount = 0;

  for (let start = from; start < to; start += sum.capacity) {
    if (stop()) break;
    const count = Math.min(sum.capacity, to - start);
    targetPositions(job.targets, start, count, sum.positions);
    sum.compute(0, count, ranges);
    for (const [i, coincident] of sum.coincident) {
      coincidentCount += coincident.length;
      for (const j of coincident) if (listed.length < 2 * most) listed.push(start + i, j);
    }
    for (let c = 0; c < columns.length; c++) {
      const at = c * job.count + start;
      const column = job.out.subarray(at, at + count);
      writeColumn(columns[c], sum, scales, column);
      for (const i of sum.withoutSum) column[i] = NaN;
    }
  }
  return {coincident: listed, coincidentCount, reach: sum.reach};
}

type Scales = Readonly<Record<'potential' | 'field' | 'gradient', OutputScale>>;

function scalesOf({symbols, relativePermittivity}: FieldJob): Scales {
  const charge = unitOf('charge', symbols.charge);
  const scaleOf = (dimension: 'potential' | 'field' | 'fieldGradient') =>
    outputScale(dimension, symbols[dimension], relativePermittivity, charge);
  return {
    potential: scaleOf('potential'),
    field: scaleOf('field'),
    gradient: scaleOf('fieldGradient'),
  };
}

/** Writes one column of the answer from the results of a batch. */
function writeColumn(
  column: FieldColumn,
  sum: DirectSum,
  {potential, field, gradient}: Scales,
  out: Float64Array,
): void {
  switch (column) {
    case 'potential':
      writeScaled(potential, sum.result(RESULT.v), out);
      return;
    case 'fieldX':
      writeScaled(field, sum.result(RESULT.e), out);
      return;
    case 'fieldY':
      writeScaled(field, sum.result(RESULT.e + 1), out);
      return;
    case 'fieldZ':
      writeScaled(field, sum.result(RESULT.e + 2), out);
      return;
    case 'fieldMagnitude': {
      fieldLengths(sum, out);
      writeScaled(field, out, out);
      return;
    }
    case 'potentialBound': {
      const v = sum.result(RESULT.v);
      for (let i = 0; i < out.length; i++) out[i] = Math.abs(v[i]);
      writeBounds(potential, sum.result(RESULT.vBound), 0, out);
      return;
    }
    case 'fieldBound': {
      fieldLengths(sum, out);
      writeBounds(field, sum.result(RESULT.eBound), MAGNITUDE_ERROR, out);
      return;
    }
    case 'fieldGradientBound': {
      frobeniusNorms(sum, out);
      writeBounds(gradient, sum.result(RESULT.gBound), 0, out);
      return;
    }
    default: {
      const place = RESULT.g + GRADIENT_ORDER.indexOf(column.slice(-2));
      writeScaled(gradient, sum.result(place), out);
      return;
    }
  }
}

function writeScaled(scale: OutputScale, sums: Float64Array, out: Float64Array): void {
  for (let i = 0; i < out.length; i++) out[i] = scaled(scale, sums[i]);
}

/** Replaces the sizes of values in `out` by the bounds of those values. */
function writeBounds(
  scale: OutputScale,
  bounds: Float64Array,
  extra: number,
  out: Float64Array,
): void {
  for (let i = 0; i < out.length; i++) out[i] = scaledBound(scale, out[i], bounds[i], extra);
}

function fieldLengths(sum: DirectSum, out: Float64Array): void {
  const x = sum.result(RESULT.e);
  const y = sum.result(RESULT.e + 1);
  const z = sum.result(RESULT.e + 2);
  for (let i = 0; i < out.length; i++) out[i] = vectorLength(x[i], y[i], z[i]);
}

const GRADIENT_ORDER = ['XX', 'XY', 'XZ', 'YY', 'YZ', 'ZZ'];

/** √(x² + y² + z²) for values of any size. */
export function vectorLength(x: number, y: number, z: number): number {
  const largest = Math.max(Math.abs(x), Math.abs(y), Math.abs(z));
  if (largest > 1e-140 && largest < 1e140) return Math.sqrt(x * x + y * y + z * z);
  if (largest === 0) return 0;
  // A power of two rounds nothing.
  const scale = 2 ** Math.floor(Math.log2(largest));
  return scale * Math.sqrt((x / scale) ** 2 + (y / scale) ** 2 + (z / scale) ** 2);
}

function frobeniusNorms(sum: DirectSum, out: Float64Array): void {
  const [xx, xy, xz, yy, yz, zz] = GRADIENT_ORDER.map((_, n) => sum.result(RESULT.g + n));
  for (let i = 0; i < out.length; i++) {
    const diagonal = vectorLength(xx[i], yy[i], zz[i]);
    const rest = vectorLength(xy[i], xz[i], yz[i]);
    out[i] = vectorLength(diagonal, Math.SQRT2 * rest, 0);
  }
}
