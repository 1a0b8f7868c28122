import type {FieldAnswer} from '../../../shared/api';
import {plain, significant, type WrittenNumber} from '../format/numbers';
import type {Answer} from './requests-api';

/** What an answer says of its own accuracy: a label over a number, and a smaller number under it. */
export interface AccuracyFact {
  readonly label: string;
  readonly value: WrittenNumber;
  /** Null where the number is a ratio. */
  readonly unit: string | null;
  /** The largest error at a single target, where that was looked at. */
  readonly largest?: WrittenNumber;
}

const ratio = (label: string, value: number): AccuracyFact => ({
  label,
  value: significant(value, 2),
  unit: null,
});

/** The tolerance asked, in the digits it was given in, of which there are few. */
export function toleranceOf({accuracy}: Answer): WrittenNumber | null {
  if (accuracy.tolerance === undefined) return null;
  const [mantissa, exponent] = accuracy.tolerance.toExponential().split('e');
  return {digits: mantissa, exponent: Number(exponent)};
}

/** Bounds or estimates, quantity by quantity; none if neither was asked for. */
export function accuracyFacts(answer: Answer): AccuracyFact[] {
  if ('assembly' in answer) return [];
  if (!('columns' in answer)) {
    const bounds = answer.bodies.flatMap(({forceBound}) => forceBound ?? []);
    return bounds.length === 0 ? [] : [bound('F', bounds, answer.units.force)];
  }
  const {estimated, reached} = answer.accuracy;
  return [
    ...(reached === undefined ? [] : [ratio('Reached', reached)]),
    ...estimatesOf(estimated),
    ...boundsOf(answer),
  ];
}

function boundsOf({columns, units}: FieldAnswer): AccuracyFact[] {
  const {potentialBound, fieldBound, fieldGradientBound} = columns;
  return [
    ...(potentialBound ? [bound('V', potentialBound, units.potential)] : []),
    ...(fieldBound ? [bound('E', fieldBound, units.field)] : []),
    ...(fieldGradientBound ? [bound('G', fieldGradientBound, units.fieldGradient)] : []),
  ];
}

function bound(
  symbol: string,
  column: readonly (number | null)[],
  unit: string | undefined,
): AccuracyFact {
  const largest = column.reduce<number>((most, value) => Math.max(most, value ?? 0), 0);
  return {
    label: `Largest bound of ${symbol}`,
    value: significant(largest, 2),
    unit: unit ?? null,
  };
}

function estimatesOf(estimated: FieldAnswer['accuracy']['estimated']): AccuracyFact[] {
  if (!estimated) return [];
  const {potential, field, largestPotential, largestField} = estimated;
  const estimate = (symbol: string, value: number, largest?: number): AccuracyFact => ({
    ...ratio(`Estimated error of ${symbol}`, value),
    ...(largest === undefined ? {} : {largest: significant(largest, 2)}),
  });
  return [
    estimate('V', potential, largestPotential),
    ...(field === undefined ? [] : [estimate('E', field, largestField)]),
  ];
}

/** What the numbers mean, for somebody who has not read the reference. */
export function accuracyNote(answer: Answer): string | null {
  if (!('columns' in answer)) return null;
  const {method, tolerance, estimated, reached} = answer.accuracy;
  if (estimated) {
    return `Estimated at ${estimated.samples} targets that were summed directly as well: expected, not a bound. Errors are relative to the root mean square over all targets; single targets may be off by more.`;
  }
  if (reached !== undefined) {
    return 'The rounding of direct sums alone may exceed the tolerance asked; they are within the relative error under “Reached”.';
  }
  return method === 'direct' && tolerance !== undefined
    ? 'Summed directly, which is more accurate than was asked.'
    : null;
}

/** One line for a title block in which the picture is of one quantity. */
export function accuracyLine(
  answer: Answer,
  symbol: 'V' | 'E',
): {label: string; value: string} | null {
  const fact = accuracyFacts(answer).find(({label}) => label.endsWith(` of ${symbol}`));
  if (!fact) return null;
  return {
    label: fact.label,
    value: fact.unit === null ? plain(fact.value) : `${plain(fact.value)} ${fact.unit}`,
  };
}
