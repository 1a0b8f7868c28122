const DAY = 86_400_000;

const MONTHS = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
];

/** "15 Oct 2026", a calendar day in UTC. */
export function dayUtc(time: string | Date): string {
  const date = new Date(time);
  return `${date.getUTCDate()} ${MONTHS[date.getUTCMonth()].slice(0, 3)} ${date.getUTCFullYear()}`;
}

/** "1 Nov 00:00 UTC". */
export function momentUtc(time: string | Date): string {
  const date = new Date(time);
  const clock = date.toISOString().slice(11, 16);
  return `${date.getUTCDate()} ${MONTHS[date.getUTCMonth()].slice(0, 3)} ${clock} UTC`;
}

/** "01:00", the viewer's own clock. */
export function ownClock(time: string | Date): string {
  return new Intl.DateTimeFormat('en-GB', {hour: '2-digit', minute: '2-digit'}).format(
    new Date(time),
  );
}

/** "16 Oct 2026, 10:44 GMT+2 · 16 Oct 08:44 UTC", for tooltips. */
export function fullTime(time: string | Date): string {
  const own = new Intl.DateTimeFormat('en-GB', {
    day: 'numeric',
    month: 'short',
    year: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
    timeZoneName: 'short',
  }).format(new Date(time));
  return `${own} · ${momentUtc(time)}`;
}

/** "2 min ago" up to three days, then the day itself. */
export function ago(time: string | Date, now: Date): string {
  const elapsed = now.getTime() - new Date(time).getTime();
  if (elapsed < 60_000) return 'just now';
  if (elapsed < 3_600_000) return `${Math.floor(elapsed / 60_000)} min ago`;
  if (elapsed < DAY) return `${Math.floor(elapsed / 3_600_000)} h ago`;
  if (elapsed < 4 * DAY) return `${Math.floor(elapsed / DAY)} d ago`;
  return dayUtc(time);
}

/** "22 h left", "14 min left". */
export function timeLeft(until: string | Date, now: Date): string {
  const left = new Date(until).getTime() - now.getTime();
  if (left <= 0) return 'over';
  if (left < 3_600_000) return `${Math.max(1, Math.floor(left / 60_000))} min left`;
  if (left < 3 * DAY) return `${Math.floor(left / 3_600_000)} h left`;
  return `${Math.floor(left / DAY)} d left`;
}

/** The name of the UTC month of a time. */
export function monthUtc(time: string | Date): string {
  return MONTHS[new Date(time).getUTCMonth()];
}

/** "2026-10-15", the UTC day of a time. */
export function isoDay(time: Date): string {
  return time.toISOString().slice(0, 10);
}

export function addDays(day: string, count: number): string {
  return isoDay(new Date(Date.parse(`${day}T00:00:00Z`) + count * DAY));
}
