import {randomUUID} from 'node:crypto';
import type {IncomingMessage} from 'node:http';

// Not a key: it would be in every log on the way.
const REQUEST_ID = /^(?!fst_)[A-Za-z0-9._-]{1,64}$/;
// W3C Trace Context §3.2: version 00, neither id all zero.
const TRACEPARENT = /^00-(?!0{32})([0-9a-f]{32})-(?!0{16})[0-9a-f]{16}-[0-9a-f]{2}$/;

export interface RequestIds {
  requestId: string;
  traceId: string;
  /** For the answer: the caller's trace, a span of our own. */
  traceparent: string;
}

/** Keeps the caller's ids where they are well formed, else makes new ones. */
export function requestIds({headers}: IncomingMessage): RequestIds {
  const random = randomUUID().replaceAll('-', '');
  const given = headers['x-request-id'];
  const requestId =
    typeof given === 'string' && REQUEST_ID.test(given) ? given : `req_${random.slice(0, 24)}`;
  const parent = headers['traceparent'];
  const match = typeof parent === 'string' ? TRACEPARENT.exec(parent) : null;
  const traceId = match?.[1] ?? random;
  return {requestId, traceId, traceparent: `00-${traceId}-${random.slice(16)}-01`};
}
