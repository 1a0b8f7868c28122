import {plain, significant} from '../format/numbers';
import type {Section} from './section';
import {decimalsOf} from './ticks';

export interface GridPoint {
  readonly i: number;
  readonly j: number;
}

export interface ReadOutRow {
  readonly label: string;
  readonly value: string;
  readonly unit: string;
}

/** Enough decimals to tell neighbouring points apart. */
function place(value: number, step: number): string {
  const decimals = step > 0 ? Math.min(6, decimalsOf(step)) : 1;
  return plain({
    digits: value
      .toFixed(decimals)
      .replace(/^-(?=[0.]*$)/, '')
      .replace('-', '−'),
    exponent: null,
  });
}

/** What the picture says about one grid point. */
export function readOut(section: Section, {i, j}: GridPoint): ReadOutRow[] {
  const {origin, iStep, jStep, axes, units, counts} = section;
  const index = i + j * counts[0];
  const u = origin.u + i * iStep.u + j * jStep.u;
  const v = origin.v + i * iStep.v + j * jStep.v;
  const [uStep, vStep] = [
    Math.max(Math.abs(iStep.u), Math.abs(jStep.u)),
    Math.max(Math.abs(iStep.v), Math.abs(jStep.v)),
  ];
  const rows: ReadOutRow[] = [
    {
      label: axes.map(axis => axis.name).join(', '),
      value: `${place(u, uStep)}, ${place(v, vStep)}`,
      unit: units.length,
    },
  ];
  const quantity = (label: string, values: Float64Array | null, unit: string | undefined): void => {
    if (!values) return;
    const value = values[index];
    if (Number.isNaN(value)) rows.push({label, value: 'masked, on a charge', unit: ''});
    else rows.push({label, value: plain(significant(value)), unit: unit ?? ''});
  };
  quantity('V', section.potential, units.potential);
  quantity('|E|', section.strength, units.field);
  if (section.fieldU && section.fieldV && !Number.isNaN(section.fieldU[index])) {
    const degrees = (Math.atan2(section.fieldV[index], section.fieldU[index]) * 180) / Math.PI;
    rows.push({label: 'angle', value: plain(significant(degrees, 3)), unit: '°'});
  }
  return rows;
}

/** The same in one sentence, for a screen reader. */
export function spoken(rows: readonly ReadOutRow[]): string {
  const names: Readonly<Record<string, string>> = {
    V: 'potential',
    '|E|': 'field strength',
    angle: 'direction',
  };
  return rows
    .map(({label, value, unit}) =>
      `${names[label] ?? label} ${value.replaceAll('−', 'minus ')} ${unit}`.trim(),
    )
    .join('; ');
}
