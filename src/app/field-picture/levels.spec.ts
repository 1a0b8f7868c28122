import {bandColours, potentialScale, strengthScale} from './levels';
import {luminance, ramps} from './ramps';

const line = (from: number, to: number, count = 1001): Float64Array =>
  Float64Array.from({length: count}, (_, k) => from + ((to - from) * k) / (count - 1));

describe('levels', () => {
  it('a potential of both signs has a level at zero and steps of 1, 2 or 5', () => {
    const {levels, decimals} = potentialScale(line(-7, 7));
    expect(levels).toContain(0);
    expect(levels[1] - levels[0]).toBe(1);
    expect(decimals).toBe(0);
  });

  it('opposite potentials get opposite places on the ramp', () => {
    const {positions} = potentialScale(line(-7, 7));
    positions.forEach((position, k) =>
      expect(position + positions[positions.length - 1 - k]).toBeCloseTo(1, 9),
    );
  });

  it('a peak on a charge does not flatten the rest: the scale is cut there and says so', () => {
    const values = line(-7, 7);
    values[1000] = 4000;
    const {levels, isCutAbove, isCutBelow} = potentialScale(values);
    expect(levels[levels.length - 1]).toBeLessThan(10);
    expect(isCutAbove).toBe(true);
    expect(isCutBelow).toBe(false);
  });

  it('masked points do not count', () => {
    const values = line(1, 2);
    values[3] = NaN;
    expect(potentialScale(values).levels.every(Number.isFinite)).toBe(true);
    expect(strengthScale(values).levels.every(Number.isFinite)).toBe(true);
  });

  it('nothing but masked points has no levels', () => {
    expect(potentialScale(Float64Array.of(NaN, NaN)).levels).toEqual([]);
    expect(strengthScale(Float64Array.of(NaN, NaN)).levels).toEqual([]);
  });

  it('a constant has no levels and one colour', () => {
    const scale = potentialScale(new Float64Array(50).fill(3));
    expect(scale.levels).toEqual([]);
    expect(bandColours(scale, false)).toHaveLength(1);
  });

  it('a field strength over decades is cut at 1, 2, 3, 5, 7', () => {
    const values = line(0, 2, 2001).map(power => 10 ** power);
    expect(strengthScale(values).levels).toEqual([2, 3, 5, 7, 10, 20, 30, 50, 70]);
  });

  it('there is one band more than levels, each with its colour', () => {
    const scale = strengthScale(line(1, 100));
    expect(bandColours(scale, true)).toHaveLength(scale.levels.length + 1);
  });

  it('lightness never turns back along an arm of a ramp', () => {
    for (const {light, dark} of [ramps.sequential]) {
      for (const ramp of [light, [...dark].reverse()]) {
        const steps = ramp.map(luminance);
        expect(steps).toEqual([...steps].sort((a, b) => b - a));
      }
    }
    const {light, dark} = ramps.diverging;
    for (const [ramp, sign] of [
      [light, 1],
      [dark, -1],
    ] as const) {
      const arm = ramp.slice(8).map(colour => sign * luminance(colour));
      expect(arm).toEqual([...arm].sort((a, b) => b - a));
      const other = ramp.slice(0, 9).map(colour => sign * luminance(colour));
      expect(other).toEqual([...other].sort((a, b) => a - b));
    }
  });
});
