import type {Left} from '../ledger/entries.ts';
import {periodOf} from '../ledger/period.ts';
import {BURST_WINDOW, type BurstState} from './burst.ts';

export interface RateLimits {
  readonly burst: number;
  readonly state: BurstState;
  readonly month: Left;
  /** Pairs that this call cost. */
  readonly cost: number;
  readonly at: Date;
}

/**
 * The RateLimit fields (draft-ietf-httpapi-ratelimit-headers): Lists of quoted Strings (RFC 9651).
 *
 * Revision 11 calls what is left `r` and the seconds until more `t`; the text that leads to
 * revision 12 calls it `a`, with the window `w` and the cost `c`. Receivers ignore parameters that
 * they do not know, so both are sent. Pairs are no unit of the draft's registry: a parameter of our
 * own says so.
 */
export function rateLimitFields(
  limits: RateLimits,
): Record<'RateLimit' | 'RateLimit-Policy', string> {
  const {burst, state, month, cost, at} = limits;
  const {start, end} = periodOf(at);
  const length = (Date.parse(end) - Date.parse(start)) / 1000;
  const untilEnd = Math.ceil((Date.parse(end) - at.getTime()) / 1000);
  const unit = 'fst-unit="pair"';
  return {
    'RateLimit-Policy': `"burst";q=${burst};w=${BURST_WINDOW}, "month";q=${integer(month.allowance)};w=${length};${unit}`,
    RateLimit:
      `"burst";a=${state.left};w=${BURST_WINDOW};c=1;r=${state.left};t=${state.resets}, ` +
      `"month";a=${integer(month.left)};w=${length};c=${cost};r=${integer(month.left)};t=${untilEnd};${unit}`,
  };
}

/** RFC 9651 integers have 15 digits at most. */
function integer(value: number): number {
  return Math.min(value, 999_999_999_999_999);
}
