import {at, ramps, type Rgb} from './ramps';
import {decimalsOf, multiples, nearestStep, niceStep} from './ticks';

export type Quantity = 'potential' | 'strength';

/** A stepped scale: bands between levels, with a colour each, and one more beyond either end. */
export interface Scale {
  readonly levels: readonly number[];
  /** `levels.length + 1` positions on the ramp, 0 to 1: below the first level, between, above the last. */
  readonly positions: readonly number[];
  /** Whether values lie beyond the first or the last level. */
  readonly isCutBelow: boolean;
  readonly isCutAbove: boolean;
  readonly decimals: number;
  readonly ramp: 'diverging' | 'sequential';
}

/** Parts of the values left out at either end, so that a peak on a charge does not flatten the rest. */
const CUT = 0.02;
const BANDS = 13;

function quantiles(values: Float64Array, shares: readonly number[]): number[] {
  const stride = Math.max(1, Math.floor(values.length / 20_000));
  const sample: number[] = [];
  for (let i = 0; i < values.length; i += stride)
    if (Number.isFinite(values[i])) sample.push(values[i]);
  const sorted = Float64Array.from(sample).sort();
  return shares.map(share => sorted[Math.round(share * (sorted.length - 1))] ?? NaN);
}

function extremes(values: Float64Array): [number, number] {
  let low = Infinity;
  let high = -Infinity;
  for (const value of values) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  return [low, high];
}

/** A cut that would leave out little is not worth its pointed end. */
const worthCutting = (kept: number, whole: number): boolean => whole > 1.6 * kept;

function scaleOf(
  levels: readonly number[],
  [low, high]: readonly [number, number],
  positionOf: (value: number) => number,
  decimals: number,
  ramp: Scale['ramp'],
): Scale {
  if (levels.length === 0) {
    return {
      levels,
      positions: [positionOf((low + high) / 2)],
      isCutBelow: false,
      isCutAbove: false,
      decimals,
      ramp,
    };
  }
  const last = levels.length - 1;
  const positions = levels.map((level, k) =>
    positionOf(k === 0 ? level : (levels[k - 1] + level) / 2),
  );
  positions[0] = last > 0 ? positionOf(levels[0] - (levels[1] - levels[0]) / 2) : positionOf(low);
  positions.push(
    positionOf(last > 0 ? levels[last] + (levels[last] - levels[last - 1]) / 2 : high),
  );
  return {
    levels,
    positions,
    isCutBelow: low < levels[0],
    isCutAbove: high > levels[last],
    decimals,
    ramp,
  };
}

/** A diverging scale about zero in 1-2-5 steps. NaN marks masked values. */
export function potentialScale(values: Float64Array, bands = BANDS): Scale {
  const all = extremes(values);
  if (!(all[1] >= all[0])) return scaleOf([], [0, 0], () => 0.5, 0, 'diverging');
  let [low, high] = quantiles(values, [CUT, 1 - CUT]);
  const reach = high - low;
  if (!worthCutting(reach, high - all[0])) low = all[0];
  if (!worthCutting(reach, all[1] - low)) high = all[1];
  if (high - low <= 1e-12 * Math.max(Math.abs(low), Math.abs(high))) {
    return scaleOf([], all, value => 0.5 + 0.4 * Math.sign(value), 0, 'diverging');
  }
  const step = nearestStep(high - low, bands);
  const levels = multiples(low - step * 0.499, high + step * 0.499, step);
  const most = Math.max(Math.abs(levels[0]), Math.abs(levels[levels.length - 1])) + step / 2;
  const hasBothSigns = low < step && high > -step;
  const least = hasBothSigns ? 0 : Math.min(Math.abs(low), Math.abs(high));
  const positionOf = (value: number): number => {
    const share = (Math.abs(value) - least) / (most - least);
    return (
      0.5 +
      0.5 * Math.sign(value) * Math.min(1, Math.max(0, hasBothSigns ? share : 0.12 + 0.88 * share))
    );
  };
  return scaleOf(levels, all, positionOf, decimalsOf(step), 'diverging');
}

/** Steps of a decade, the densest first; the first only where there is little more than one. */
const LADDERS = [[1, 1.5, 2, 3, 5, 7], [1, 2, 3, 5, 7], [1, 2, 5], [1, 3], [1]];

/** A logarithmic scale, 1-2-3-5-7 a decade or fewer where there are many; linear for little variation. */
export function strengthScale(values: Float64Array): Scale {
  const all = extremes(values);
  const [low, high] = quantiles(values, [CUT, 1 - CUT / 4]);
  if (!(high > 0)) return scaleOf([], [0, 0], () => 0, 0, 'sequential');
  const floor = Math.max(low, high * 1e-6);
  if (high / floor < 3) {
    const step = niceStep((high - floor) / 10);
    const levels = high > floor ? multiples(floor, high, step) : [];
    const share = (value: number): number => 0.1 + (0.8 * (value - floor)) / (high - floor || 1);
    return scaleOf(levels, all, share, decimalsOf(step), 'sequential');
  }
  const decades = (ladder: readonly number[]): number[] => {
    const out: number[] = [];
    for (let power = Math.floor(Math.log10(floor)); power <= Math.log10(high); power++) {
      for (const step of ladder) {
        const level = Number((step * 10 ** power).toPrecision(3));
        if (level >= floor && level <= high) out.push(level);
      }
    }
    return out;
  };
  const levels =
    LADDERS.map(decades).find((ladder, k) => ladder.length <= (k === 0 ? 8 : 13)) ?? [];
  const last = levels.length - 1;
  const share = (value: number): number => {
    const place = levels.findIndex(level => value < level);
    return (place < 0 ? levels.length : place) / Math.max(1, last + 1);
  };
  const decimals =
    levels.length > 0 ? decimalsOf(levels[0] / (/^0*\.?0*15/.test(String(levels[0])) ? 10 : 1)) : 0;
  return scaleOf(levels, all, share, decimals, 'sequential');
}

/** The colours of the bands in the present scheme. */
export function bandColours(scale: Scale, isDark: boolean, reach = 1): Rgb[] {
  const ramp = ramps[scale.ramp][isDark ? 'dark' : 'light'];
  const centre = scale.ramp === 'diverging' ? 0.5 : 0;
  return scale.positions.map(position => at(ramp, centre + (position - centre) * reach));
}
