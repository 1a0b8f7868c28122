/**
 * Where far boxes of one size lie, in box sizes, up to reflections: components from 0 to
 * 2 · separation + 1, the largest above `separation`. The 8 sources at ±a, ±b, ±c share one matrix.
 */
export function offsetClasses(separation: number): (readonly [number, number, number])[] {
  const classes: [number, number, number][] = [];
  const most = 2 * separation + 1;
  for (let a = 0; a <= most; a++) {
    for (let b = 0; b <= most; b++) {
      for (let c = 0; c <= most; c++) {
        if (Math.max(a, b, c) > separation) classes.push([a, b, c]);
      }
    }
  }
  return classes;
}

/** Axes that are not 0, as bits: the reflections that tell sources of a class apart. */
export const reflectionsOf = (offset: readonly number[]): number =>
  offset.reduce((bits, value, axis) => bits + (value === 0 ? 0 : 1 << axis), 0);

/** 2 to the number of bits of `mask`. */
export const signCount = (mask: number): number =>
  1 << ((mask & 1) + ((mask >> 1) & 1) + ((mask >> 2) & 1));
