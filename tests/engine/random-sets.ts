import type {FieldRequest} from '../../shared/api.ts';
import {randomNumbers} from './random.ts';

type Column = number[];
export interface RandomSet {
  readonly request: FieldRequest;
  readonly count: number;
}

const UNITS = [
  {length: 'm', charge: 'C', potential: 'V', field: 'V/m', scale: 1},
  {length: 'mm', charge: 'nC', potential: 'kV', field: 'kV/cm', scale: 1e3},
  {length: 'in', charge: 'pC', potential: 'V', field: 'V/mm', scale: 39},
  {length: 'angstrom', charge: 'e', potential: 'V', field: 'V/m', scale: 1},
  {length: 'µm', charge: 'fC', potential: 'mV', field: 'V/m', scale: 1e6},
] as const;

interface Choice {
  readonly atMost?: number;
  readonly exactly?: number;
  readonly targets?: number;
  /** Which unit; by the seed if not given. */
  readonly unit?: number;
}

/**
 * A random set: 1 … 1e4 charges (by logarithm), a third of the sets neutral with every charge near
 * its opposite, a fifth 1 m off the origin with gaps of micrometres, a third placed and rotated.
 */
export function randomSet(
  seed: number,
  {atMost = 1e4, exactly, targets = 2, unit: unitIndex = seed}: Choice = {},
): RandomSet {
  const random = randomNumbers(seed);
  const unit = UNITS[unitIndex % UNITS.length];
  const count = exactly ?? Math.max(1, Math.round(atMost ** random()));
  const isCancelling = seed % 3 === 0 && count > 1;
  const isFar = seed % 5 < 1 || seed % 11 === 0;
  const isPlaced = seed % 3 === 1;
  const spread = (isFar ? 1e-6 * Math.cbrt(count) : 1) * unit.scale;
  const offset = isFar ? unit.scale : 0;
  const coordinate = (): number => offset + spread * (random() - 0.5);
  const columns: {x: Column; y: Column; z: Column; charge: Column} = {
    x: [],
    y: [],
    z: [],
    charge: [],
  };
  for (let i = 0; i < count; i++) {
    if (isCancelling && i % 2 === 1) {
      for (const axis of ['x', 'y', 'z'] as const) {
        columns[axis].push(columns[axis][i - 1] + spread * 1e-3 * (random() - 0.5));
      }
      columns.charge.push(-columns.charge[i - 1]);
    } else {
      columns.x.push(coordinate());
      columns.y.push(coordinate());
      columns.z.push(coordinate());
      const size = seed % 7 === 0 ? 10 ** (24 * random() - 12) : 1;
      columns.charge.push(size * (random() - (seed % 2 ? 0.5 : 0)));
    }
  }
  const placement = {
    translate: [unit.scale * (random() - 0.5), unit.scale * (random() - 0.5), 0] as [
      number,
      number,
      number,
    ],
    rotate: {
      axis: [random() - 0.5, random() - 0.5, random() - 0.5] as [number, number, number],
      degrees: 720 * (random() - 0.5),
    },
  };
  const points: {x: Column; y: Column; z: Column} = {x: [], y: [], z: []};
  for (let i = 0; i < targets; i++) {
    points.x.push(coordinate());
    points.y.push(coordinate());
    points.z.push(coordinate());
  }
  const {length, charge, potential, field} = unit;
  return {
    count,
    request: {
      units: {length, charge, potential, field},
      medium: {relativePermittivity: seed % 4 === 0 ? 2.2 : 1},
      bodies: [{id: 'set', charges: columns, ...(isPlaced && {placement})}],
      targets: {points},
      quantities: ['potential', 'field', 'magnitude'],
      accuracy: {bounds: true},
    },
  };
}
