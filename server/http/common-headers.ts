import type {RequestHandler, Response} from 'express';

import type {Headers} from './security-headers.ts';
import type {RequestIds} from './request-ids.ts';

interface WithHeaders extends RequestIds {
  commonHeaders: Readonly<Record<string, string>>;
}

/** Remembers what every answer to this request carries. */
export function keepHeaders(res: Response, ids: RequestIds, security: Headers): void {
  (res.locals as WithHeaders).commonHeaders = {
    'X-Request-Id': ids.requestId,
    traceparent: ids.traceparent,
    ...security,
  };
}

/**
 * What every answer to this request carries, for one `writeHead`: a `setHeader` each would cost a
 * small call more than its computation.
 */
export function headersOf(res: Response): Readonly<Record<string, string>> {
  return (res.locals as WithHeaders).commonHeaders;
}

/** Sets them on the response, for what Express itself sends. */
export const setHeaders: RequestHandler = (_req, res, next) => {
  for (const [name, value] of Object.entries(headersOf(res))) res.setHeader(name, value);
  next();
};
