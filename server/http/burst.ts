import {randomInt} from 'node:crypto';
import {RateLimiterMemory, RateLimiterRes} from 'rate-limiter-flexible';

import {ServiceError} from '../errors.ts';

/** Seconds in which a key may make as many calls as its burst says: half of it is the steady rate. */
export const BURST_WINDOW = 2;
const STRANGER_WINDOW = 10;

export interface BurstState {
  readonly left: number;
  /** Until the window ends [s]. */
  readonly resets: number;
  /** Of a call beyond the burst: when to come back [s]. */
  readonly retryAfter?: number;
}

/**
 * Counts the calls of keys and of strangers in short windows of memory. Months are the ledger's.
 *
 * The limiter keeps its windows in timers, so they must stay short, and it takes any number for a
 * burst, so bursts come checked from the contract.
 */
export class Bursts {
  readonly #limiters = new Map<number, RateLimiterMemory>();
  readonly #strangers: RateLimiterMemory;

  constructor(strangerCalls: number) {
    this.#strangers = new RateLimiterMemory({points: strangerCalls, duration: STRANGER_WINDOW});
  }

  /** Counts a call of a key, whether it is one too many or not. */
  async count(keyId: string, burst: number): Promise<BurstState> {
    let limiter = this.#limiters.get(burst);
    if (!limiter) {
      limiter = new RateLimiterMemory({
        points: burst,
        duration: BURST_WINDOW,
        keyPrefix: String(burst),
      });
      this.#limiters.set(burst, limiter);
    }
    return consume(limiter, keyId);
  }

  /** Counts a call without a valid key. @throws ServiceError rate-limited */
  async countStranger(address: string): Promise<void> {
    const {retryAfter} = await consume(this.#strangers, address);
    if (retryAfter === undefined) return;
    throw new ServiceError(
      'rate-limited',
      `Without a valid key, an address may make ${this.#strangers.points} calls in ${STRANGER_WINDOW} s.`,
      {retryAfter},
    );
  }
}

/** @throws ServiceError rate-limited if a call was beyond the burst of its key */
export function refuseBeyond(burst: number, {retryAfter}: BurstState): void {
  if (retryAfter === undefined) return;
  const text = `The key allows ${burst} calls in ${BURST_WINDOW} s.`;
  throw new ServiceError('rate-limited', text, {retryAfter});
}

async function consume(limiter: RateLimiterMemory, name: string): Promise<BurstState> {
  try {
    const state = await limiter.consume(name);
    return {left: state.remainingPoints, resets: Math.ceil(state.msBeforeNext / 1000)};
  } catch (state) {
    // The limiter rejects with its state when the window is used up, and with an Error for a bug.
    if (!(state instanceof RateLimiterRes)) throw state;
    const resets = Math.max(1, Math.ceil(state.msBeforeNext / 1000));
    // Spread over a second more, or all that were refused come back at the same instant.
    return {left: 0, resets, retryAfter: resets + randomInt(2)};
  }
}
