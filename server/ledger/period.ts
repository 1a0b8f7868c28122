/** A UTC calendar month: the period of every allowance. */
export interface Period {
  /** `2026-12` */
  readonly month: string;
  readonly start: string;
  readonly end: string;
}

interface Bounded {
  readonly period: Period;
  readonly from: number;
  readonly to: number;
}

// Asked for on every call, and the same for a month.
let latest: Bounded | undefined;

/** The month that an instant falls into. */
export function periodOf(now: Date): Period {
  const time = now.getTime();
  if (!latest || time < latest.from || time >= latest.to) latest = boundedMonthOf(now);
  return latest.period;
}

function boundedMonthOf(now: Date): Bounded {
  const year = now.getUTCFullYear();
  const month = now.getUTCMonth();
  const from = new Date(Date.UTC(year, month, 1));
  const to = new Date(Date.UTC(year, month + 1, 1));
  return {
    period: {month: from.toISOString().slice(0, 7), start: rfc3339(from), end: rfc3339(to)},
    from: from.getTime(),
    to: to.getTime(),
  };
}

/** The UTC day of an instant, `2026-12-01`. */
export function dayOf(now: Date): string {
  return now.toISOString().slice(0, 10);
}

/** RFC 3339 without fractions of a second. */
export function rfc3339(instant: Date): string {
  return `${instant.toISOString().slice(0, 19)}Z`;
}
