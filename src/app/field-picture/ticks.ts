/** The 1-2-5 step that is not below `rough`. */
export function niceStep(rough: number): number {
  if (!(rough > 0) || !Number.isFinite(rough)) return 1;
  const power = 10 ** Math.floor(Math.log10(rough));
  const fraction = rough / power;
  const nice = [1, 2, 5, 10].find(step => fraction <= step * (1 + 1e-9)) ?? 10;
  return nice * power;
}

/** The 1-2-5 step that cuts `span` into the number of parts that is, in proportion, nearest to `wanted`. */
export function nearestStep(span: number, wanted: number): number {
  const above = niceStep(span / wanted);
  const below = above / (leadOf(above) === 5 ? 2.5 : 2);
  const distance = (step: number): number => Math.abs(Math.log(span / step / wanted));
  return distance(below) < distance(above) ? below : above;
}

/** 1, 2 or 5. */
const leadOf = (step: number): number =>
  Math.round(step / 10 ** Math.floor(Math.log10(step) + 1e-9));

/** How many decimals write every multiple of `step` exactly. */
export function decimalsOf(step: number): number {
  return Math.max(0, -Math.floor(Math.log10(step) + 1e-9));
}

/** The multiples of `step` between `low` and `high`, without the noise of repeated addition. */
export function multiples(low: number, high: number, step: number): number[] {
  const first = Math.ceil(low / step - 1e-9);
  const last = Math.floor(high / step + 1e-9);
  const decimals = decimalsOf(step);
  const out: number[] = [];
  for (let k = first; k <= last; k++)
    out.push(decimals < 20 ? Number((k * step).toFixed(decimals)) : k * step);
  return out;
}

export interface Ticks {
  readonly major: readonly number[];
  readonly minor: readonly number[];
  readonly decimals: number;
}

/** Major ticks in 1-2-5 steps, about `wanted` of them, with four or five minor parts each. */
export function ticks(low: number, high: number, wanted: number): Ticks {
  const step = niceStep((high - low) / Math.max(1, wanted));
  return {
    major: multiples(low, high, step),
    minor: multiples(low, high, step / (leadOf(step) === 2 ? 4 : 5)),
    decimals: decimalsOf(step),
  };
}
