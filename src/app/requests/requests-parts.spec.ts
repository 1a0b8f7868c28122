import type {FieldAnswer, FieldRequest} from '../../../shared/api';
import {columnsOf, csvOf} from './columns';
import {compactJson} from './compact-json';
import {curl} from './curl';
import {dropletCloud} from './droplet-cloud';
import {samples} from './samples';
import {sprayAbovePanel} from './spray-above-panel';
import {placesOfTargets} from './targets';

describe('compact JSON', () => {
  it('says the same as JSON.stringify, in shorter lines', () => {
    for (const {text} of samples) {
      const written = text();
      expect(compactJson(JSON.parse(written))).toBe(written);
      expect(Math.max(...written.split('\n').map(line => line.length))).toBeLessThan(60);
    }
  });

  it('keeps what fits on one line', () => {
    expect(compactJson([1, 'a, b', true], 8)).toBe('[\n 1,\n "a, b",\n true\n]');
    expect(compactJson({a: [1, 2], b: {c: 'd'}})).toBe('{"a": [1, 2], "b": {"c": "d"}}');
  });
});

describe('samples', () => {
  it('have charges in columns of equal length, 50 000 in the largest of them', () => {
    const counts = samples.map(({text}) => {
      const {bodies} = JSON.parse(text()) as {bodies: {charges: Record<string, number[]>}[]};
      for (const {charges} of bodies) {
        expect(new Set(Object.values(charges).map(column => column.length)).size).toBe(1);
      }
      return bodies.reduce((sum, {charges}) => sum + charges['charge'].length, 0);
    });
    expect(Math.max(...counts)).toBe(50_000);
  });

  it('the spray states a tolerance, and fits into one call in bytes and in pairs', () => {
    const text = samples.find(({name}) => name.startsWith('Spray'))?.text() ?? '';
    const request = JSON.parse(text) as FieldRequest;
    expect(request.accuracy).toEqual({tolerance: 1e-4});
    expect(text.length).toBeLessThan(1.5 * 2 ** 20);
    expect(50_000 * placesOfTargets(request.targets).count).toBeLessThanOrEqual(2e9);
  });

  it('the panel under the spray has the opposite charge, and less of it than the spray', () => {
    const [spray, panel] = sprayAbovePanel(7).map(({charges}) =>
      charges.charge.reduce((sum, charge) => sum + charge, 0),
    );
    expect(spray).toBeLessThan(0);
    expect(panel).toBeGreaterThan(0);
    // A panel without end would have all of it; this one subtends most of the half space.
    expect(panel / -spray).toBeGreaterThan(0.5);
    expect(panel / -spray).toBeLessThan(1);
  });

  it('the cloud is the same for the same seed, and another for another', () => {
    expect(dropletCloud(50, 7)).toEqual(dropletCloud(50, 7));
    expect(dropletCloud(50, 7)).not.toEqual(dropletCloud(50, 8));
    expect(dropletCloud(500, 7).charge.every(charge => charge < 0)).toBe(true);
  });
});

describe('targets', () => {
  it('of a path are at equal distances along it, corners included', () => {
    const {at, arcLength} = placesOfTargets({
      path: {
        vertices: [
          [0, 0, 0],
          [3, 0, 0],
          [3, 0, 5],
        ],
        samples: 9,
      },
    });
    expect(at(0)).toEqual([0, 0, 0]);
    expect(at(3)).toEqual([3, 0, 0]);
    expect(at(8)).toEqual([3, 0, 5]);
    expect(arcLength?.(4)).toBe(4);
  });

  it('of a grid run along the first step first', () => {
    const {at, count} = placesOfTargets({
      grid: {
        origin: [1, 1, 1],
        steps: [
          [1, 0, 0],
          [0, 2, 0],
          [0, 0, 3],
        ],
        counts: [2, 2, 2],
      },
    });
    expect(count).toBe(8);
    expect([at(1), at(2), at(4)]).toEqual([
      [2, 1, 1],
      [1, 3, 1],
      [1, 1, 4],
    ]);
  });
});

describe('the CSV of an answer', () => {
  it('leads with the places, keeps every bit, and leaves masked cells empty', () => {
    const answer = {
      columns: {potential: [0.1 + 0.2, null]},
      units: {length: 'mm', charge: 'nC', potential: 'V'},
    } as unknown as FieldAnswer;
    const columns = columnsOf({points: {x: [1, 2], y: [0, 0], z: [0, 0]}}, answer);
    expect(csvOf(columns, 2)).toBe('x,y,z,potential\r\n1,0,0,0.30000000000000004\r\n2,0,0,\r\n');
  });
});

describe('the call as curl', () => {
  it('leaves the key to the environment and quotes the body for a shell', () => {
    const call = curl('https://api.example', '/v1/fields', `{"bodies": [{"id": "o'ring"}]}`);
    expect(call).toContain('Bearer $FIELDSTEAD_KEY');
    expect(call).toContain(`"o'\\''ring"`);
    expect(call).not.toContain('fst_');
  });

  it('puts a long body into a file', () => {
    expect(curl('https://api.example', '/v1/fields', ' '.repeat(5000))).toContain('@request.json');
  });
});
