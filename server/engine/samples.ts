/**
 * One of each of `most` parts of equal length of 0 … count − 1, ascending, by a generator with a
 * fixed seed: mulberry32, a counter and a mixing function (after G. Marsaglia, Xorshift RNGs,
 * J. Stat. Softw. 8 (2003)).
 */
export function seededSamples(count: number, most: number): Int32Array {
  const length = Math.min(most, count);
  const indices = new Int32Array(length);
  let state = 0x5eed;
  for (let n = 0; n < length; n++) {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    const share = ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
    indices[n] = Math.floor(((n + share) * count) / length);
  }
  return indices;
}
