import type {FirstPassword} from '../../shared/api.ts';
import {hashPassword} from '../accounts/passwords.ts';
import * as people from '../accounts/people.ts';
import * as links from '../accounts/sign-in-links.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';
import {refuseInsecure, startSession, type Started} from './sign-in.ts';

/**
 * Sets the password of the person that a one-time link was made for, and signs in.
 *
 * @throws ServiceError link-spent, insecure-origin
 */
export async function setFirstPassword(
  deps: Deps,
  {link, password}: FirstPassword,
  at: Date,
): Promise<Started> {
  refuseInsecure(deps);
  const passwordHash = await hashPassword(password);
  const personId = links.redeem(deps.database, link, at);
  if (!personId) {
    throw new ServiceError(
      'link-spent',
      'The link is unknown, was used, or is older than 24 hours.',
    );
  }
  await people.setPassword(deps.database, personId, passwordHash);
  return startSession(deps, personId, at);
}
