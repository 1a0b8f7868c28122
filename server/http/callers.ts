import type {Request} from 'express';

import type {Role, Scope} from '../../shared/api.ts';
import * as sessions from '../accounts/sessions.ts';
import type {ContractOperation} from '../contract/document.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';
import * as apiKeys from '../ledger/api-keys.ts';
import type {Caller} from './call.ts';

const BEARER = /^Bearer +[A-Za-z0-9._~+/-]+=*$/i;
export const SESSION_COOKIE = '__Host-fieldstead';
// A key of ours anywhere in an address or a body, or the parameter of RFC 6750 §2.2 and §2.3.
const ANY_KEY = /fst_[0-9A-Za-z]{12}_[0-9A-Za-z]{6}/;

/** Finds out who calls an operation, before its body is read. */
export type CallerCheck = (req: Request, at: Date) => Caller;

export function createCallerCheck(deps: Deps, operation: ContractOperation): CallerCheck {
  const {callers, scopes, roles} = operation;
  const isReading = operation.method === 'get';
  if (callers === 'anybody') {
    return req => {
      // Or another site could sign somebody in as somebody else.
      if (!isReading) refuseOtherSites(deps, req);
      return {kind: 'nobody'};
    };
  }
  if (callers === 'apiKey') return (req, at) => withKey(deps, req, scopes, at);
  return (req, at) => withSession(deps, req, roles, isReading, at);
}

function withKey(deps: Deps, req: Request, scopes: readonly Scope[], at: Date): Caller {
  refuseKeyInAddress(req);
  const header = req.headers.authorization;
  // Node drops a second Authorization header; the raw list shows it.
  const isTwice = header !== undefined && hasTwo(req, 'authorization');
  if (!isTwice && (header === undefined || !/^Bearer\b/i.test(header))) {
    throw new ServiceError('key-required', 'Send a key as Authorization: Bearer <key>.');
  }
  if (isTwice || !BEARER.test(header)) {
    throw new ServiceError(
      'malformed-authorization',
      'The Authorization header is not "Bearer" and one token.',
    );
  }
  const key = apiKeys.authenticate(deps.database.driver, header.slice(6).trim(), at);
  if (!key) {
    throw new ServiceError('invalid-key', 'The bearer token is not a key that is valid now.');
  }
  const lacking = scopes.find(scope => !key.scopes.includes(scope));
  if (lacking) {
    throw new ServiceError(
      'insufficient-scope',
      `This operation needs the scope ${lacking}; the key has ${key.scopes.join(', ')}.`,
      {facts: {scope: lacking}},
    );
  }
  return {kind: 'key', key};
}

/** Whether a header was sent more than once; Node keeps the first of some and says nothing. */
export function hasTwo(req: Request, name: string): boolean {
  const {rawHeaders} = req;
  // As many names as lines: none stands twice.
  if (rawHeaders.length === 2 * Object.keys(req.headers).length) return false;
  let count = 0;
  for (let i = 0; i < rawHeaders.length; i += 2) {
    if (rawHeaders[i].toLowerCase() === name) count++;
  }
  return count > 1;
}

function refuseKeyInAddress(req: Request): void {
  const mark = req.url.indexOf('?');
  if (mark < 0) return;
  const query = new URLSearchParams(req.url.slice(mark));
  if (query.has('access_token') || ANY_KEY.test(query.toString())) throw misplaced('address');
}

/** @throws ServiceError misplaced-credential if a body holds a key, wherever in it */
export function refuseKeyInBody(bytes: Buffer): void {
  if (!bytes.includes('fst_') && !bytes.includes('"access_token"')) return;
  if (bytes.includes('"access_token"') || ANY_KEY.test(bytes.toString('latin1'))) {
    throw misplaced('body');
  }
}

function misplaced(place: string): ServiceError {
  return new ServiceError(
    'misplaced-credential',
    `There is a key in the ${place} of the request; a key belongs in the Authorization header only.`,
  );
}

function withSession(
  deps: Deps,
  req: Request,
  roles: readonly Role[],
  isReading: boolean,
  at: Date,
): Caller {
  const sessionToken = sessionTokenOf(req);
  const person = sessionToken ? sessions.find(deps.database.driver, sessionToken, at) : null;
  if (!person || !sessionToken) {
    throw new ServiceError('sign-in-required', 'There is no session, or it has ended.');
  }
  if (!isReading) {
    refuseOtherSites(deps, req);
    if (req.headers['x-csrf-token'] !== person.csrfToken) {
      throw new ServiceError(
        'cross-site-request',
        'The X-CSRF-Token header is missing or belongs to another session.',
      );
    }
  }
  if (roles.length > 0 && !roles.includes(person.role)) {
    throw new ServiceError(
      'insufficient-role',
      `This is for the role ${roles.join(' or ')}; yours is ${person.role}.`,
    );
  }
  return {kind: 'person', person, sessionToken};
}

/** @throws ServiceError cross-site-request if the browser says that another site sent the request */
function refuseOtherSites({config}: Deps, req: Request): void {
  const site = req.headers['sec-fetch-site'];
  const origin = req.headers.origin;
  const isOther =
    (site !== undefined && site !== 'same-origin' && site !== 'none') ||
    (site === undefined &&
      origin !== undefined &&
      origin !== config.publicUrl &&
      origin !== `${req.protocol}://${req.headers.host}`);
  if (isOther) throw new ServiceError('cross-site-request', 'The request came from another site.');
}

function sessionTokenOf(req: Request): string | null {
  const cookie = req.headers.cookie ?? '';
  const prefix = `${SESSION_COOKIE}=`;
  const pair = cookie.split('; ').find(one => one.startsWith(prefix));
  return pair ? pair.slice(prefix.length) : null;
}
