import type {Body, EchoedUnits, Grid} from '../../../shared/api';
import {nearestPoint, sheet} from './layout';
import {placedCharges} from './placed-charges';
import {readOut, spoken} from './read-out';
import {extent, sectionOf} from './section';

const units: EchoedUnits = {length: 'mm', charge: 'nC', potential: 'kV', field: 'kV/m'};
const body: Body = {
  id: 'tip',
  charges: {x: [1, 0], y: [0, 0], z: [0, 3], charge: [2, -1]},
  placement: {translate: [10, 0, 5], rotate: {axis: [0, 0, 1], degrees: 90}},
};
const plane: Grid = {
  origin: [-2, 0, 1],
  steps: [
    [0.5, 0, 0],
    [0, 0, 2],
    [0, 0, 0],
  ],
  counts: [5, 3, 1],
};
const count = 15;
const column = (of: (k: number) => number | null): (number | null)[] =>
  Array.from({length: count}, (_, k) => of(k));

describe('a section', () => {
  it('puts charges where the placement of their body puts them: rotate, then translate', () => {
    const [first, second] = placedCharges([body]);
    expect(first.at[0]).toBeCloseTo(10, 12);
    expect(first.at[1]).toBeCloseTo(1, 12);
    expect(first.at[2]).toBeCloseTo(5, 12);
    expect(second.at[2]).toBeCloseTo(8, 12);
  });

  it('reads a matrix row by row, for column vectors', () => {
    const [charge] = placedCharges([
      {
        charges: {x: [1], y: [0], z: [0], charge: [1]},
        placement: {matrix: [0, -1, 0, 10, 1, 0, 0, 20, 0, 0, 1, 30, 0, 0, 0, 1]},
      },
    ]);
    expect(charge.at).toEqual([10, 21, 30]);
  });

  it('is there for exactly two counts above 1, and names axes and plane', () => {
    const section = sectionOf(plane, [body], {potential: column(k => k)}, units);
    expect(section?.axes.map(axis => axis.name)).toEqual(['x', 'z']);
    expect(section?.name).toBe('Section y = 0 mm');
    expect(section && extent(section)).toEqual({u: [-2, 0], v: [1, 5]});
    expect(sectionOf({...plane, counts: [5, 1, 1]}, [], {}, units)).toBeNull();
    expect(sectionOf({...plane, counts: [5, 3, 2]}, [], {}, units)).toBeNull();
  });

  it('draws x to the right whichever step runs along it', () => {
    const [a, b, c] = plane.steps;
    const turned = sectionOf(
      {...plane, steps: [b, a, c], counts: [3, 5, 1]},
      [],
      {potential: column(k => k)},
      units,
    );
    expect(turned?.axes.map(axis => axis.name)).toEqual(['x', 'z']);
    expect(turned && extent(turned)).toEqual({u: [-2, 0], v: [1, 5]});
  });

  it('of oblique steps measures along them from the first grid point', () => {
    const oblique = sectionOf(
      {
        origin: [1, 2, 3],
        steps: [
          [3, 4, 0],
          [0, 0, 2],
          [0, 0, 0],
        ],
        counts: [3, 2, 1],
      },
      [],
      {potential: [0, 0, 0, 0, 0, 0]},
      units,
    );
    expect(oblique?.axes.map(axis => axis.name)).toEqual(['s', 'z']);
    expect(oblique && extent(oblique)).toEqual({u: [0, 10], v: [3, 5]});
    expect(oblique?.name).toContain('s along (0.600, 0.800, 0.000)');
  });

  it('takes the charges within half a step, and counts all', () => {
    const near: Body = {charges: {x: [0, 0], y: [0.2, 0.4], z: [2, 2], charge: [1, 1]}};
    const section = sectionOf(plane, [near], {potential: column(() => 0)}, units);
    expect(section?.thickness).toBe(0.25);
    expect(section?.charges).toHaveLength(1);
    expect(section?.chargesInAll).toBe(2);
  });

  it('finds the grid point under a place on the sheet', () => {
    const section = sectionOf(plane, [], {potential: column(k => k)}, units);
    if (!section) throw new Error('no section');
    const layout = sheet(section, 600, 480);
    const {plot} = layout;
    expect(nearestPoint(section, layout, plot.x, plot.y + plot.height)).toEqual({i: 0, j: 0});
    expect(nearestPoint(section, layout, plot.x + plot.width, plot.y)).toEqual({i: 4, j: 2});
    expect(nearestPoint(section, layout, plot.x - 90, plot.y)).toBeNull();
  });

  it('reads out place, values and direction, and says where a point is masked', () => {
    const section = sectionOf(
      plane,
      [],
      {
        potential: column(k => (k === 0 ? null : -0.5751)),
        fieldX: column(k => (k === 0 ? null : 0)),
        fieldY: column(k => (k === 0 ? null : 0)),
        fieldZ: column(k => (k === 0 ? null : 53.8)),
      },
      units,
    );
    if (!section) throw new Error('no section');
    expect(readOut(section, {i: 1, j: 0})).toEqual([
      {label: 'x, z', value: '−1.5, 1', unit: 'mm'},
      {label: 'V', value: '−0.5751', unit: 'kV'},
      {label: '|E|', value: '53.80', unit: 'kV/m'},
      {label: 'angle', value: '90.0', unit: '°'},
    ]);
    expect(readOut(section, {i: 0, j: 0})[1].value).toBe('masked, on a charge');
    expect(spoken(readOut(section, {i: 1, j: 0}))).toContain('potential minus 0.5751 kV');
  });
});
