import type {EchoedUnits, FieldAnswer, FieldColumns, Targets} from '../../../shared/api';
import {placesOfTargets} from './targets';

export interface Column {
  readonly name: string;
  /** "V, kV" */
  readonly head: string;
  readonly valueAt: (index: number) => number | null;
}

const HEADS: readonly (readonly [keyof FieldColumns, string, keyof EchoedUnits])[] = [
  ['potential', 'V', 'potential'],
  ['fieldX', 'Ex', 'field'],
  ['fieldY', 'Ey', 'field'],
  ['fieldZ', 'Ez', 'field'],
  ['fieldMagnitude', '|E|', 'field'],
  ['fieldGradientXX', 'Gxx', 'fieldGradient'],
  ['fieldGradientXY', 'Gxy', 'fieldGradient'],
  ['fieldGradientXZ', 'Gxz', 'fieldGradient'],
  ['fieldGradientYY', 'Gyy', 'fieldGradient'],
  ['fieldGradientYZ', 'Gyz', 'fieldGradient'],
  ['fieldGradientZZ', 'Gzz', 'fieldGradient'],
  ['potentialBound', 'bound of V', 'potential'],
  ['fieldBound', 'bound of E', 'field'],
  ['fieldGradientBound', 'bound of G', 'fieldGradient'],
];

/** Places first, then the columns of the answer in their own order. */
export function columnsOf(targets: Targets, {columns, units}: FieldAnswer): Column[] {
  const places = placesOfTargets(targets);
  const out: Column[] = (['x', 'y', 'z'] as const).map((name, axis) => ({
    name,
    head: `${name}, ${units.length}`,
    valueAt: index => places.at(index)[axis],
  }));
  const {arcLength} = places;
  if (arcLength) out.push({name: 'arcLength', head: `along, ${units.length}`, valueAt: arcLength});
  for (const [name, head, unit] of HEADS) {
    const values = columns[name];
    if (values)
      out.push({name, head: `${head}, ${units[unit] ?? ''}`, valueAt: index => values[index]});
  }
  return out;
}

/** RFC 4180, no grouping, shortest digits that read back to the same double; masked cells are empty. */
export function csvOf(columns: readonly Column[], count: number): string {
  const lines = [columns.map(column => column.name).join(',')];
  for (let index = 0; index < count; index++) {
    lines.push(columns.map(column => column.valueAt(index) ?? '').join(','));
  }
  return `${lines.join('\r\n')}\r\n`;
}
