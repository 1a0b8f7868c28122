/** A UTC calendar month: the period of every allowance. */
export interface Period {
  /** `2026-12` */
  readonly month: string;
  readonly start: string;
  readonly end: string;
}

/** The month that an instant falls into. */
export function periodOf(now: Date): Period {
  const year = now.getUTCFullYear();
  const month = now.getUTCMonth();
  return {
    month: now.toISOString().slice(0, 7),
    start: rfc3339(new Date(Date.UTC(year, month, 1))),
    end: rfc3339(new Date(Date.UTC(year, month + 1, 1))),
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
