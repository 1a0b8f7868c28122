import type {Response} from 'express';

import type {Problem, ProblemCode} from '../../shared/api.ts';
import {problemCatalogue} from '../../shared/problem-catalogue.ts';
import {ServiceError} from '../errors.ts';
import {headersOf, setEach} from './common-headers.ts';

const REALM = 'realm="fieldstead"';

/** Headers that go with a problem: challenges (RFC 6750 §3), what would be accepted, when to retry. */
function headersFor(error: ServiceError): Record<string, string> {
  const headers: Record<string, string> = {};
  switch (error.code) {
    case 'key-required':
      headers['WWW-Authenticate'] = `Bearer ${REALM}`;
      break;
    case 'invalid-key':
      headers['WWW-Authenticate'] = `Bearer ${REALM}, error="invalid_token"`;
      break;
    case 'malformed-authorization':
    case 'misplaced-credential':
      headers['WWW-Authenticate'] = `Bearer ${REALM}, error="invalid_request"`;
      break;
    case 'insufficient-scope':
      headers['WWW-Authenticate'] =
        `Bearer ${REALM}, error="insufficient_scope", scope="${error.facts['scope'] ?? ''}"`;
      break;
    case 'sign-in-required':
    case 'sign-in-failed':
      headers['WWW-Authenticate'] = `Session ${REALM}`;
      break;
    case 'method-not-allowed':
      headers['Allow'] = error.facts['allow'] ?? '';
      break;
    case 'unsupported-media-type':
      headers['Accept'] = error.facts['accept'] ?? '';
      break;
    case 'unsupported-encoding':
      headers['Accept-Encoding'] = error.facts['acceptEncoding'] ?? '';
      break;
    default:
  }
  if (error.retryAfter !== undefined) headers['Retry-After'] = String(Math.ceil(error.retryAfter));
  return headers;
}

export function problemType(publicUrl: string, code: ProblemCode): string {
  return `${publicUrl}/problems/${code}`;
}

export function problemOf(error: ServiceError, publicUrl: string, requestId: string): Problem {
  const {status, title} = problemCatalogue[error.code];
  return {
    type: problemType(publicUrl, error.code),
    title,
    status,
    detail: error.message,
    instance: requestId,
    code: error.code,
    ...(error.errors.length > 0 && {errors: error.errors, errorCount: error.errorCount}),
  };
}

/** What the caller is told of a fault of our own: nothing. */
export const internalError = (): ServiceError =>
  new ServiceError('internal', 'Nothing was charged.');

/** Writes a problem document (RFC 9457), whatever form of answer the caller would have accepted. */
export function writeProblem(
  res: Response,
  error: ServiceError,
  publicUrl: string,
  requestId: string,
): void {
  const problem = problemOf(error, publicUrl, requestId);
  const body = Buffer.from(JSON.stringify(problem));
  setEach(res, headersOf(res));
  res.writeHead(problem.status, {
    ...headersFor(error),
    'Content-Type': 'application/problem+json',
    'Content-Length': body.length,
    'Cache-Control': 'no-store',
  });
  res.end(body);
}
