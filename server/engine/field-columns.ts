import {unitOf} from '../../shared/units.ts';
import {UNIT_ROUNDOFF} from './exact.ts';
import type {FieldColumn, FieldJob} from './jobs.ts';
import {RESULT} from './methods/direct-sum.ts';
import {outputScale, scaled, scaledBound, type OutputScale} from './output-scale.ts';

/** Rounding of a length of three squares, their sum and a root, relative. */
const MAGNITUDE_ERROR = 3 * UNIT_ROUNDOFF;

export type Scales = Readonly<Record<'potential' | 'field' | 'gradient', OutputScale>>;

export function scalesOf({symbols, relativePermittivity}: FieldJob): Scales {
  const charge = unitOf('charge', symbols.charge);
  const scaleOf = (dimension: 'potential' | 'field' | 'fieldGradient') =>
    outputScale(dimension, symbols[dimension], relativePermittivity, charge);
  return {
    potential: scaleOf('potential'),
    field: scaleOf('field'),
    gradient: scaleOf('fieldGradient'),
  };
}

/** Columns of sums, by place in RESULT: [C/m, C/m², C/m³] and their bounds. */
export interface Results {
  result(place: number): Float64Array;
}

/** Writes one column of the answer from sums. */
export function writeColumn(
  column: FieldColumn,
  sum: Results,
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

function fieldLengths(sum: Results, out: Float64Array): void {
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

function frobeniusNorms(sum: Results, out: Float64Array): void {
  const [xx, xy, xz, yy, yz, zz] = GRADIENT_ORDER.map((_, n) => sum.result(RESULT.g + n));
  for (let i = 0; i < out.length; i++) {
    const diagonal = vectorLength(xx[i], yy[i], zz[i]);
    const rest = vectorLength(xy[i], xz[i], yz[i]);
    out[i] = vectorLength(diagonal, Math.SQRT2 * rest, 0);
  }
}
