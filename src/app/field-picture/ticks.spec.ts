import {decimalsOf, multiples, nearestStep, niceStep, ticks} from './ticks';

describe('ticks', () => {
  it('steps are 1, 2 or 5 times a power of ten, not below what was asked for', () => {
    expect([0.7, 1, 1.1, 2.4, 5.1, 17, 226].map(niceStep)).toEqual([1, 1, 2, 5, 10, 20, 500]);
  });

  it('the nearest step gives about as many parts as wanted, above or below', () => {
    expect(nearestStep(3000, 13)).toBe(200);
    expect(nearestStep(14, 13)).toBe(1);
    expect(nearestStep(0.4, 13)).toBeCloseTo(0.02, 12);
  });

  it('multiples carry no noise of repeated addition', () => {
    expect(multiples(-0.3, 0.3, 0.1)).toEqual([-0.3, -0.2, -0.1, 0, 0.1, 0.2, 0.3]);
  });

  it('knows the decimals of its steps', () => {
    expect([500, 1, 0.2, 0.05].map(decimalsOf)).toEqual([0, 0, 1, 2]);
  });

  it('puts minor ticks in quarters of twos and in fifths of ones and fives', () => {
    expect(ticks(0, 100, 5)).toMatchObject({major: [0, 20, 40, 60, 80, 100], decimals: 0});
    expect(ticks(0, 100, 5).minor).toHaveLength(21);
    expect(ticks(0, 10, 10).minor).toHaveLength(51);
  });
});
