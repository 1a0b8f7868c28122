import {unitOf} from '../../shared/units.ts';
import {UNIT_ROUNDOFF} from './exact.ts';
import {COINCIDENCES_LISTED, ISSUES_LISTED} from './limits.ts';
import {DirectSum, RESULT} from './methods/direct-sum.ts';
import {
  PAIRS_BETWEEN_STOPS,
  type BlockReport,
  type FieldColumn,
  type FieldJob,
  type Stop,
} from './jobs.ts';
import {outputScale, scaled, scaledBound} from './output-scale.ts';
import {POSITION_STRIDE, targetPosition} from './targets.ts';

/** Rounding of a length of three squares, their sum and a root, relative. */
const MAGNITUDE_ERROR = 3 * UNIT_ROUNDOFF;

/** Computes one block of a field job into `job.out`: columns, each as long as there are targets. */
export function computeFieldBlock(job: FieldJob, block: number, stop: Stop): BlockReport {
  const {charges, symbols, relativePermittivity, columns, count, out} = job;
  const from = job.blocks[block];
  const to = job.blocks[block + 1];
  const charge = unitOf('charge', symbols.charge);
  const method = new DirectSum(charges, {
    kind: job.sum,
    bounds: job.bounds,
    coincidenceDistance: job.coincidenceDistance,
    isExcluding: job.onCoincidence === 'exclude',
    chargeRoundings: charge.roundings,
  });
  const write = columns.map(column =>
    columnWriter(column, method.result, relativePermittivity, job),
  );
  const target = new Float64Array(POSITION_STRIDE);
  const ranges = [0, charges.count];
  const listed: number[] = [];
  let coincidentCount = 0;
  let reach = job.coincidenceDistance;
  const everyTargets = Math.max(1, Math.floor(PAIRS_BETWEEN_STOPS / charges.count));
  const most = job.onCoincidence === 'reject' ? ISSUES_LISTED : COINCIDENCES_LISTED;

  for (let i = from; i < to; i++) {
    if ((i - from) % everyTargets === 0 && stop()) break;
    targetPosition(job.targets, i, target);
    reach = Math.max(reach, method.reach(target[6]));
    const hasSum = method.at(target, ranges);
    if (method.coincident.length > 0) {
      coincidentCount += method.coincident.length;
      for (const j of method.coincident) if (listed.length < 2 * most) listed.push(i, j);
    }
    for (let c = 0; c < columns.length; c++) out[c * count + i] = hasSum ? write[c]() : NaN;
  }
  return {coincident: listed, coincidentCount, reach};
}

/** Reads the value of one column from the result of a sum. */
function columnWriter(
  column: FieldColumn,
  result: Float64Array,
  relativePermittivity: number,
  {symbols}: FieldJob,
): () => number {
  const charge = unitOf('charge', symbols.charge);
  const scaleOf = (dimension: 'potential' | 'field' | 'fieldGradient') =>
    outputScale(dimension, symbols[dimension], relativePermittivity, charge);
  const potential = scaleOf('potential');
  const field = scaleOf('field');
  const gradient = scaleOf('fieldGradient');
  const length = (): number =>
    vectorLength(result[RESULT.e], result[RESULT.e + 1], result[RESULT.e + 2]);
  switch (column) {
    case 'potential':
      return () => scaled(potential, result[RESULT.v]);
    case 'fieldX':
      return () => scaled(field, result[RESULT.e]);
    case 'fieldY':
      return () => scaled(field, result[RESULT.e + 1]);
    case 'fieldZ':
      return () => scaled(field, result[RESULT.e + 2]);
    case 'fieldMagnitude':
      return () => scaled(field, length());
    case 'potentialBound':
      return () => scaledBound(potential, Math.abs(result[RESULT.v]), result[RESULT.vBound]);
    case 'fieldBound':
      return () => scaledBound(field, length(), result[RESULT.eBound], MAGNITUDE_ERROR);
    case 'fieldGradientBound':
      return () => scaledBound(gradient, frobenius(result), result[RESULT.gBound]);
    default: {
      const place = RESULT.g + GRADIENT_ORDER.indexOf(column.slice(-2));
      return () => scaled(gradient, result[place]);
    }
  }
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

/** Frobenius norm of the gradient in a result. */
function frobenius(result: Float64Array): number {
  const [xx, xy, xz, yy, yz, zz] = result.subarray(RESULT.g, RESULT.g + 6);
  const diagonal = vectorLength(xx, yy, zz);
  const rest = vectorLength(xy, xz, yz);
  return vectorLength(diagonal, Math.SQRT2 * rest, 0);
}
