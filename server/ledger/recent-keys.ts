import type {Database as Driver} from 'better-sqlite3';

import type {ValidKey} from './api-keys.ts';

/** [ms] A change by another process shows after this at the latest. */
const KEPT = 1000;
const MOST = 10_000;

interface Recent {
  readonly key: ValidKey;
  readonly readAt: number;
  readonly endsAt: number;
}

const byDriver = new WeakMap<Driver, Map<string, Recent>>();

/**
 * The key that `token` was found to be within the last second, so that a drag loop reads its key
 * once a second and not on every call. Tokens that are not valid are never kept.
 */
export function find(driver: Driver, token: string, now: Date): ValidKey | null {
  const known = byDriver.get(driver)?.get(token);
  if (!known) return null;
  const time = now.getTime();
  // A clock that was set back makes what was read later than now worthless.
  const isFresh = time >= known.readAt && time < known.readAt + KEPT && time < known.endsAt;
  return isFresh ? known.key : null;
}

/** @param endsAt when the key stops being valid [ms since 1970] */
export function keep(
  driver: Driver,
  token: string,
  key: ValidKey,
  endsAt: number,
  now: Date,
): void {
  let known = byDriver.get(driver);
  if (!known) byDriver.set(driver, (known = new Map<string, Recent>()));
  if (known.size >= MOST) known.clear();
  known.set(token, {key, readAt: now.getTime(), endsAt});
}

/** Whoever changes a key calls this, so that the change holds at once. */
export function forget(driver: Driver): void {
  byDriver.get(driver)?.clear();
}
