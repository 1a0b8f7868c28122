import {bridged, contoursOf} from './contour-rings';

const SIZE = 101;
const MIDDLE = 50;

/** 1/r about the middle of a square grid; infinite, so masked, on the charge itself. */
const oneOverR = Float64Array.from({length: SIZE * SIZE}, (_, k) => {
  const r = Math.hypot((k % SIZE) - MIDDLE, Math.floor(k / SIZE) - MIDDLE);
  return r === 0 ? NaN : 1 / r;
});

describe('contours', () => {
  it('of 1/r are circles of radius 1/level about the charge', () => {
    const [{rings}] = contoursOf(oneOverR, [SIZE, SIZE], [1 / 20]);
    expect(rings).toHaveLength(1);
    for (let k = 0; k < rings[0].length; k += 2) {
      const radius = Math.hypot(rings[0][k] - MIDDLE, rings[0][k + 1] - MIDDLE);
      // Linear interpolation of 1/r over one cell at r = 20 errs by less than h²/(8 r) = 0.007 cells a side.
      expect(Math.abs(radius - 20)).toBeLessThan(0.02);
    }
  });

  it('close around a masked point as if the strongest value beside it went on', () => {
    const filled = bridged(oneOverR, [SIZE, SIZE]);
    expect(filled[MIDDLE + MIDDLE * SIZE]).toBe(1);
    expect(contoursOf(oneOverR, [SIZE, SIZE], [0.6])[0].rings).toHaveLength(1);
  });

  it('leave values without masks as they are', () => {
    const values = Float64Array.of(1, 2, 3, 4);
    expect(bridged(values, [2, 2])).toBe(values);
  });
});
