import type {RequestHandler, Response} from 'express';

import type {Headers} from './security-headers.ts';
import type {RequestIds} from './request-ids.ts';

interface WithHeaders extends RequestIds {
  security: Headers;
}

/** Remembers what every answer to this request carries. */
export function keepHeaders(res: Response, ids: RequestIds, security: Headers): void {
  const locals = res.locals as WithHeaders;
  locals.requestId = ids.requestId;
  locals.traceId = ids.traceId;
  locals.traceparent = ids.traceparent;
  locals.security = security;
}

/**
 * What every answer to this request carries: names and values in turn, for one `writeHead`. A
 * `setHeader` each would cost a small call more than its computation.
 */
export function headersOf(res: Response): string[] {
  const {requestId, traceparent, security} = res.locals as WithHeaders;
  return ['X-Request-Id', requestId, 'traceparent', traceparent, ...security];
}

/** Sets them on the response, for what Express itself sends. */
export const setHeaders: RequestHandler = (_req, res, next) => {
  setEach(res, headersOf(res));
  next();
};

/** Sets names and values in turn. */
export function setEach(res: Response, headers: Headers): void {
  for (let i = 0; i < headers.length; i += 2) res.setHeader(headers[i], headers[i + 1]);
}
