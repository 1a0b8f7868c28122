import * as people from '../accounts/people.ts';
import * as sessions from '../accounts/sessions.ts';
import type {Deps} from '../deps.ts';
import {personOf, type Handler, type Reply} from '../http/call.ts';
import {SESSION_COOKIE} from '../http/callers.ts';
import {setFirstPassword} from '../services/first-password.ts';
import {createSignIn, type Started} from '../services/sign-in.ts';

export const createSession = (deps: Deps): Handler<'createSession'> => {
  const signIn = createSignIn(deps);
  return async call => started(await signIn(call.body, call.address, call.at));
};

/** Redeems the one-time link of an invitation to the service. */
export const createPassword =
  (deps: Deps): Handler<'createPassword'> =>
  async call =>
    started(await setFirstPassword(deps, call.body, call.at));

export const getSession =
  ({database}: Deps): Handler<'getSession'> =>
  async call => {
    const {personId, csrfToken} = personOf(call);
    return {body: {person: await people.findPerson(database, personId), csrfToken}};
  };

export const deleteSession =
  ({database}: Deps): Handler<'deleteSession'> =>
  call => {
    if (call.caller.kind === 'person') sessions.end(database.driver, call.caller.sessionToken);
    return {
      status: 204,
      headers: {
        'Set-Cookie': cookie('', 'Max-Age=0'),
        'Clear-Site-Data': '"cache", "cookies", "storage"',
      },
    };
  };

function started({session, token}: Started): Reply<'createSession'> {
  return {body: session, headers: {'Set-Cookie': cookie(token)}};
}

function cookie(value: string, ...more: string[]): string {
  const parts = [`${SESSION_COOKIE}=${value}`, 'Path=/', 'Secure', 'HttpOnly', 'SameSite=Lax'];
  return [...parts, ...more].join('; ');
}
