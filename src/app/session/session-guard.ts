import {inject} from '@angular/core';
import {RedirectCommand, Router, type CanActivateFn} from '@angular/router';
import {Session} from './session';

/** Lets the signed-in through and sends everybody else to sign in, with the way back. */
export const sessionGuard: CanActivateFn = async (_route, {url}) => {
  const session = inject(Session);
  const router = inject(Router);
  try {
    await session.restore();
  } catch {
    // No answer, or a failure of the service. The address stays, so that loading again is the way on.
    return new RedirectCommand(router.parseUrl('/no-answer'), {skipLocationChange: true});
  }
  if (session.person() !== null) return true;
  return router.createUrlTree(['/sign-in'], url === '/' ? {} : {queryParams: {returnTo: url}});
};

/** A page of this console that `returnTo` names; anything else is the start page. */
export function safeReturnTo(returnTo: string | null | undefined): string {
  return returnTo && /^\/(?![/\\])/.test(returnTo) && !returnTo.startsWith('/sign-in')
    ? returnTo
    : '/';
}
