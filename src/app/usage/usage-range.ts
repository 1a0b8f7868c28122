import {addDays, isoDay, monthUtc} from '../format/times';

export type RangeName = 'today' | '7-days' | 'month' | 'last-month' | 'custom';

/** Days in UTC, both included. `end` is where the chart ends: days to come stay empty. */
export interface UsageRange {
  readonly name: RangeName;
  readonly since: string;
  readonly until: string;
  readonly end: string;
}

const DAY = /^\d{4}-\d{2}-\d{2}$/;
const MOST_DAYS = 366;

const isDay = (text: string | undefined): text is string =>
  text !== undefined && DAY.test(text) && !Number.isNaN(Date.parse(text));

/** The range that the address names; this month if it names none that makes sense. */
export function usageRange(
  name: string | undefined,
  since: string | undefined,
  until: string | undefined,
  now: Date,
): UsageRange {
  const today = isoDay(now);
  const [year, month] = [now.getUTCFullYear(), now.getUTCMonth()];
  const first = isoDay(new Date(Date.UTC(year, month, 1)));
  if (name === 'today') return {name, since: today, until: today, end: today};
  if (name === '7-days') return {name, since: addDays(today, -6), until: today, end: today};
  if (name === 'last-month') {
    const last = addDays(first, -1);
    return {name, since: isoDay(new Date(Date.UTC(year, month - 1, 1))), until: last, end: last};
  }
  if (name === 'custom' && isDay(since) && isDay(until) && since <= until) {
    const end = [until, addDays(since, MOST_DAYS)].sort()[0];
    return {name, since, until: end, end};
  }
  return {
    name: 'month',
    since: first,
    until: today,
    end: isoDay(new Date(Date.UTC(year, month + 1, 0))),
  };
}

/** The ranges one can choose; the months go by their names. */
export function rangeChoices(
  now: Date,
): readonly {readonly name: RangeName; readonly word: string}[] {
  const last = new Date(Date.UTC(now.getUTCFullYear(), now.getUTCMonth() - 1, 1));
  return [
    {name: 'today', word: 'Today'},
    {name: '7-days', word: '7 days'},
    {name: 'month', word: monthUtc(now)},
    {name: 'last-month', word: monthUtc(last)},
    {name: 'custom', word: 'Custom'},
  ];
}

/** Every day from `since` to `end`. */
export function daysOf({since, end}: UsageRange): string[] {
  const days: string[] = [];
  for (let day = since; day <= end; day = addDays(day, 1)) days.push(day);
  return days;
}
