import {RateLimiterMemory, RateLimiterRes} from 'rate-limiter-flexible';

import type {Session, SignIn} from '../../shared/api.ts';
import {passwordFits} from '../accounts/passwords.ts';
import * as people from '../accounts/people.ts';
import * as sessions from '../accounts/sessions.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';

export interface Started {
  readonly session: Session;
  /** For the cookie. */
  readonly token: string;
}

export type SignInWith = (form: SignIn, address: string, at: Date) => Promise<Started>;

/** Sign-in with e-mail and password; failures are counted for a person at an address, and for an address. */
export function createSignIn(deps: Deps): SignInWith {
  const {database, config} = deps;
  const {signInFailures, signInFailuresOfAddress} = config.limits;
  const ofPerson = new RateLimiterMemory({points: signInFailures, duration: 15 * 60});
  const ofAddress = new RateLimiterMemory({points: signInFailuresOfAddress, duration: 60 * 60});

  return async ({email, password}, address, at) => {
    refuseInsecure(deps);
    const name = `${email.toLowerCase()} ${address}`;
    // Counted before the password is looked at, or tries sent at once would all pass the count.
    await countTry(ofPerson, name);
    await countTry(ofAddress, address);
    const found = await people.findByEmail(database, email);
    if (!(await passwordFits(found?.password_hash ?? null, password)) || !found) {
      throw new ServiceError(
        'sign-in-failed',
        'The e-mail address and the password do not belong together.',
      );
    }
    await ofPerson.delete(name);
    await ofAddress.reward(address);
    return startSession(deps, found.id, at);
  };
}

export async function startSession({database}: Deps, personId: string, at: Date): Promise<Started> {
  const token = sessions.start(database, personId, at);
  const person = await people.findPerson(database, personId);
  return {session: {person, csrfToken: sessions.csrfTokenOf(token)}, token};
}

/** @throws ServiceError insecure-origin where browsers would not send the cookie back */
export function refuseInsecure({config}: Deps): void {
  if (config.isSecureOrigin) return;
  throw new ServiceError(
    'insecure-origin',
    `The console was opened at ${config.publicUrl}. Session cookies need https or the loopback address; set PUBLIC_URL to the https address in front of the service.`,
  );
}

/** @throws ServiceError rate-limited */
async function countTry(limiter: RateLimiterMemory, name: string): Promise<void> {
  try {
    await limiter.consume(name);
  } catch (state) {
    // The limiter rejects with its state when the tries are used up, and with an Error for a bug.
    if (!(state instanceof RateLimiterRes)) throw state;
    const seconds = Math.ceil(state.msBeforeNext / 1000);
    throw new ServiceError(
      'rate-limited',
      `Too many failed sign-ins; the next try is possible in ${seconds} s.`,
      {retryAfter: seconds},
    );
  }
}
