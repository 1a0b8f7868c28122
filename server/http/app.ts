import express, {
  type ErrorRequestHandler,
  type Express,
  type Request,
  type Response,
} from 'express';

import {problemCatalogue} from '../../shared/problem-catalogue.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';
import {hideKeys} from '../ledger/key-form.ts';
import {createRoutes} from '../routes/index.ts';
import {Bursts} from './burst.ts';
import {keepHeaders, setHeaders} from './common-headers.ts';
import {hasTwo} from './callers.ts';
import {factsOf} from './facts.ts';
import {mountOperations} from './mount.ts';
import {mountPages} from './pages.ts';
import {internalError, writeProblem} from './problem.ts';
import {discardRest} from './read-body.ts';
import {requestIds} from './request-ids.ts';
import {apiHeaders} from './security-headers.ts';

/** The service as one Express application; from top to bottom is the order of a request. */
export function createApp(deps: Deps): Express {
  const {config} = deps;
  const app = express();
  app.disable('x-powered-by');
  app.disable('etag');
  app.set('env', 'production');
  app.set('query parser', false);
  // A path has one spelling, that of the contract.
  app.set('case sensitive routing', true);
  app.set('strict routing', true);
  app.set('trust proxy', config.trustProxy);

  const common = apiHeaders(config.publicUrl.startsWith('https:'));
  app.use((req, res, next) => {
    const ids = requestIds(req);
    keepHeaders(res, ids, common);
    logWhenDone(deps, req, res);
    if (req.url.length > config.limits.urlBytes) {
      throw new ServiceError(
        'url-too-long',
        `An address may be ${config.limits.urlBytes} bytes at most.`,
      );
    }
    if (!req.url.startsWith('/')) {
      throw new ServiceError('bad-request', 'The address is no path.');
    }
    // Node is told not to insist on Host, since it would answer without a body.
    if (req.headers.host === undefined) {
      throw new ServiceError('bad-request', 'The request has no Host header.');
    }
    if (hasTwo(req, 'host')) {
      throw new ServiceError('bad-request', 'The request has more than one Host header.');
    }
    next();
  });
  mountOperations(app, deps, createRoutes(deps), new Bursts(config.limits.strangerCalls));
  app.use(setHeaders);
  mountPages(app, deps);
  app.use((): never => {
    throw new ServiceError('not-found', 'There is nothing at this address.');
  });
  app.use(problemWriter(deps));
  return app;
}

/** One line a request, of facts that were chosen to be there. */
function logWhenDone({log}: Deps, req: Request, res: Response): void {
  const started = performance.now();
  res.once('close', () => {
    const {operation, key, person, pairs, problem, requestId, traceId} = factsOf(res);
    log.info({
      requestId,
      traceId,
      method: req.method,
      operation,
      status: res.writableFinished ? res.statusCode : 499,
      problem,
      key,
      person,
      pairs,
      milliseconds: Math.round((performance.now() - started) * 100) / 100,
    });
  });
}

/** The last in line: every failure of every layer becomes a problem document. */
function problemWriter({config, log}: Deps): ErrorRequestHandler {
  // Express knows an error handler by its four parameters.
  return (thrown: unknown, req, res, _next) => {
    if (res.destroyed) return; // The caller has gone, and nobody is left to be told.
    const facts = factsOf(res);
    const error = toServiceError(thrown);
    facts.problem = error.code;
    if (error.code === 'internal') {
      const {name, message, stack} = thrown instanceof Error ? thrown : new Error(String(thrown));
      log.error({
        requestId: facts.requestId,
        operation: facts.operation,
        name,
        message: hideKeys(message),
        stack: hideKeys(stack ?? ''),
      });
    }
    if (res.headersSent) {
      res.destroy();
      return;
    }
    // Who asked for a 100 may now leave the body out. Anybody else sends on, and must not meet a
    // closed socket before the answer was seen.
    if (!req.complete && req.headers.expect !== undefined) res.setHeader('Connection', 'close');
    if (problemCatalogue[error.code].status === 429) {
      for (const [name, value] of Object.entries(facts.headersOf429?.() ?? {})) {
        res.setHeader(name, value);
      }
    }
    discardRest(req, config.limits.discardBytes, config.limits.discardMilliseconds);
    writeProblem(res, error, config.publicUrl, facts.requestId);
  };
}

function toServiceError(thrown: unknown): ServiceError {
  if (thrown instanceof ServiceError) return thrown;
  // Express's router throws a URIError for a path that can not be decoded.
  if (thrown instanceof URIError) {
    return new ServiceError('bad-request', 'The address is not well encoded.');
  }
  // What Express throws for a file that is not as If-Match or If-Unmodified-Since want it.
  if (thrown instanceof Error && thrown.name === 'PreconditionFailedError') {
    return new ServiceError('bad-request', 'The conditions in the headers do not hold.');
  }
  return internalError();
}
