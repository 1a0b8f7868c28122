import {randomUUID} from 'node:crypto';
import {
  createServer,
  STATUS_CODES,
  type IncomingMessage,
  type Server,
  type ServerResponse,
} from 'node:http';
import type {Duplex} from 'node:stream';

import type {ProblemCode} from '../../shared/api.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';
import {createApp} from './app.ts';
import {problemOf} from './problem.ts';

/** The HTTP server: what has to be right before Express sees a request. */
export function createHttpServer(deps: Deps): Server {
  const {limits} = deps.config;
  const app = createApp(deps);
  const listener = (req: IncomingMessage, res: ServerResponse): void => {
    const socket: WithLast = req.socket;
    socket[lastRequest] = req;
    socket[lastResponse] = res;
    req.url = originForm(req.url ?? '');
    app(req, res);
  };
  const server = createServer(
    {
      maxHeaderSize: limits.headerBytes,
      headersTimeout: limits.headersMilliseconds,
      requestTimeout: limits.requestMilliseconds,
      // Longer than the idle time of common proxies, or they meet closed sockets.
      keepAliveTimeout: limits.keepAliveMilliseconds,
      connectionsCheckingInterval: 1000,
      requireHostHeader: false,
    },
    listener,
  );
  // Node would answer 100 by itself; here the body reader does, once the caller is known.
  server.on('checkContinue', listener);
  // Any other expectation may be passed over (RFC 9110 §10.1.1); Node would refuse it with no body.
  server.on('checkExpectation', listener);
  server.on('clientError', (error: NodeJS.ErrnoException, socket: Duplex) => {
    if (isAnswered(socket)) socket.destroy();
    else answerUnreadable(deps, error.code ?? '', socket);
  });
  server.on('connect', (_req, socket) => answerUnreadable(deps, 'CONNECT', socket));
  return server;
}

const lastRequest = Symbol('the last request of a connection');
const lastResponse = Symbol('its response');

interface WithLast extends Duplex {
  [lastRequest]?: IncomingMessage;
  [lastResponse]?: ServerResponse;
}

/** Whether an answer to what just turned out unreadable would be a second one, or come too early. */
function isAnswered(socket: WithLast): boolean {
  const req = socket[lastRequest];
  const res = socket[lastResponse];
  if (!req || !res) return false;
  return req.complete ? !res.writableEnded : res.headersSent;
}

/** The path and query of an address; `*` if there are none, which Express would choke on. */
function originForm(url: string): string {
  if (url.startsWith('/')) return url;
  if (!URL.canParse(url)) return '*';
  const {pathname, search} = new URL(url);
  return pathname.startsWith('/') ? pathname + search : '*';
}

const codes: Readonly<Record<string, ProblemCode>> = {
  HPE_HEADER_OVERFLOW: 'headers-too-large',
  ERR_HTTP_REQUEST_TIMEOUT: 'request-timeout',
};

/** Answers what Node's parser refused, in the form of every other problem. */
function answerUnreadable({config, log}: Deps, cause: string, socket: Duplex): void {
  if (cause === 'ECONNRESET' || !socket.writable) {
    socket.destroy();
    return;
  }
  const code = codes[cause] ?? 'bad-request';
  const detail = {
    'headers-too-large': `The headers of a request may be ${config.limits.headerBytes} bytes in all.`,
    'request-timeout': 'The request did not arrive in time.',
  };
  const text = detail[code as keyof typeof detail] ?? 'The bytes received are not an HTTP request.';
  const requestId = `req_${randomUUID().replaceAll('-', '').slice(0, 24)}`;
  const problem = problemOf(new ServiceError(code, text), config.publicUrl, requestId);
  const body = JSON.stringify(problem);
  socket.end(
    [
      `HTTP/1.1 ${problem.status} ${STATUS_CODES[problem.status]}`,
      'Content-Type: application/problem+json',
      `Content-Length: ${Buffer.byteLength(body)}`,
      `X-Request-Id: ${requestId}`,
      'X-Content-Type-Options: nosniff',
      "Content-Security-Policy: default-src 'none';frame-ancestors 'none'",
      'Referrer-Policy: no-referrer',
      'Cache-Control: no-store',
      'Connection: close',
      '',
      body,
    ].join('\r\n'),
  );
  log.info({requestId, status: problem.status, problem: code});
}
