import {labelPlaces, type Circle} from './label-places';

const inside = {x: 0, y: 0, width: 1000, height: 400};
const straight = Float64Array.from({length: 402}, (_, k) => (k % 2 === 0 ? 100 + 2 * k : 200));

describe('labels of contours', () => {
  it('lie upright along the line and at least 260 pixels apart', () => {
    const places = labelPlaces(straight, '5', 20, 5, inside, []);
    expect(places.length).toBeGreaterThan(1);
    expect(places.every(({angle}) => Math.abs(angle) <= Math.PI / 2)).toBe(true);
    const xs = places.map(({x}) => x).sort((a, b) => a - b);
    xs.slice(1).forEach((x, k) => expect(x - xs[k]).toBeGreaterThan(200));
  });

  it('keep clear of charges', () => {
    const taken: Circle[] = Array.from({length: 50}, (_, k) => ({x: 20 * k, y: 200, radius: 30}));
    expect(labelPlaces(straight, '5', 20, 5, inside, taken)).toEqual([]);
  });

  it('are left out where the line is too short', () => {
    expect(
      labelPlaces(Float64Array.of(100, 100, 110, 100, 120, 100), '5', 20, 5, inside, []),
    ).toEqual([]);
  });
});
