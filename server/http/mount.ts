import type {Express, Request, Response} from 'express';

import type {OperationId} from '../../shared/api.ts';
import {operations, type ContractOperation} from '../contract/document.ts';
import {readJson} from '../contract/read-json.ts';
import {compileContract, validateRequest} from '../contract/validate.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';
import * as entries from '../ledger/entries.ts';
import {refuseBeyond, type Bursts, type BurstState} from './burst.ts';
import type {Call, Caller, Handler, Reply, Routes} from './call.ts';
import {createCallerCheck, refuseKeyInBody} from './callers.ts';
import {factsOf} from './facts.ts';
import {headersOf} from './common-headers.ts';
import {createParameterCheck} from './parameters.ts';
import {rateLimitFields} from './rate-limit-fields.ts';
import {createBodyReader} from './read-body.ts';

const JSON_TYPE = 'application/json';
const ONE_WRITE = 16 * 1024;

/**
 * Puts every operation of the contract in its place, and a 405 beside it.
 *
 * @throws RangeError if the routes and the contract name different operations
 */
export function mountOperations(app: Express, deps: Deps, routes: Routes, bursts: Bursts): void {
  const named = new Set(Object.keys(routes));
  const missing = operations.filter(({id}) => !named.delete(id)).map(({id}) => id);
  if (missing.length > 0 || named.size > 0) {
    throw new RangeError(
      `operations without a route or route without operation: ${[...missing, ...named].join()}`,
    );
  }
  compileContract(operations.filter(({object}) => object.requestBody).map(({id}) => id));
  for (const operation of operations) mountOne(app, deps, operation, routes, bursts);
  for (const path of new Set(operations.map(one => one.path))) {
    const methods = operations
      .filter(one => one.path === path)
      .map(one => one.method.toUpperCase());
    refuseOtherMethods(app, expressPath(path), methods);
  }
}

/** `/console/keys/{id}` → `/console/keys/:id`. */
function expressPath(path: string): string {
  return path.replaceAll(/\{(\w+)\}/g, ':$1');
}

/** Answers a known path with an unknown method. A path that has GET has HEAD. */
export function refuseOtherMethods(app: Express, path: string, methods: readonly string[]): void {
  const allow = [...methods, ...(methods.includes('GET') ? ['HEAD'] : []), 'OPTIONS'].join(', ');
  app.all(path, (req, res) => {
    if (req.method === 'OPTIONS') {
      res.writeHead(204, [...headersOf(res), 'Allow', allow]).end();
      return;
    }
    throw new ServiceError(
      'method-not-allowed',
      `${req.method} is not possible here; ${allow} are.`,
      {
        facts: {allow},
      },
    );
  });
}

function mountOne(
  app: Express,
  deps: Deps,
  operation: ContractOperation,
  routes: Routes,
  bursts: Bursts,
): void {
  const {limits} = deps.config;
  const route = routes[operation.id];
  const handle = route.handle as Handler<OperationId>;
  const callerOf = createCallerCheck(deps, operation);
  const parametersOf = createParameterCheck(operation);
  const {requestBody} = operation.object;
  const readBody = createBodyReader(route.readsBytes ? limits.bodyBytes : limits.formBytes);

  // The order of a request: key → burst → body with limits → contract → handler.
  app[operation.method](expressPath(operation.path), async (req, res) => {
    const at = deps.now();
    const facts = factsOf(res);
    facts.operation = operation.id;
    const caller = await identify(callerOf, bursts, req, at);
    let burst: BurstState | null = null;
    if (caller.kind === 'key') {
      facts.key = caller.key.id;
      const {key} = caller;
      const state = await bursts.count(key.id, key.burst);
      facts.headersOf429 = () => {
        const month = entries.left(deps.database.driver, key, at);
        return rateLimitFields({burst: key.burst, state, month, cost: 0, at});
      };
      refuseBeyond(key.burst, state);
      burst = state;
    } else if (caller.kind === 'person') {
      facts.person = caller.person.personId;
    }
    checkAccept(req);
    const {path, query} = parametersOf(req);
    const bytes = requestBody ? await readBody(req, res) : Buffer.alloc(0);
    if (caller.kind === 'key') refuseKeyInBody(bytes);
    const isRead =
      !requestBody || route.readsBytes || (bytes.length === 0 && !requestBody.required);
    const body = isRead ? undefined : readJson(bytes);
    if (!isRead) validateRequest(operation.id, body);
    // Paths, queries and bodies were just checked against the contract that their types come from.
    const call = {
      caller,
      path,
      query,
      body,
      bytes,
      idempotencyKey: idempotencyKeyOf(req, operation),
      address: req.ip ?? '',
      signal: () => signalOf(res),
      at,
    } as unknown as Call<OperationId>;
    const reply = await handle(call);
    facts.pairs = reply.pairs;
    send(res, reply, caller, burst, at);
  });
}

async function identify(
  callerOf: (req: Request, at: Date) => Caller,
  bursts: Bursts,
  req: Request,
  at: Date,
): Promise<Caller> {
  try {
    return callerOf(req, at);
  } catch (error) {
    // A stranger: knocking too often is answered before it is looked at again.
    const isStranger =
      error instanceof ServiceError &&
      (error.code === 'key-required' || error.code === 'invalid-key');
    if (isStranger) await bursts.countStranger(req.ip ?? '');
    throw error;
  }
}

function checkAccept(req: Request): void {
  const {accept} = req.headers;
  if (accept === undefined || accept === '*/*' || accept === JSON_TYPE) return;
  if (!req.accepts(JSON_TYPE)) {
    throw new ServiceError('not-acceptable', `The answer is available as ${JSON_TYPE}.`);
  }
}

/** The text of the header: a quoted string (RFC 9651) or bare; of operations that have it. */
function idempotencyKeyOf(req: Request, {parameters}: ContractOperation): string | null {
  const given = req.headers['idempotency-key'];
  if (typeof given !== 'string' || !parameters.some(({name}) => name === 'Idempotency-Key')) {
    return null;
  }
  const text = /^"(.*)"$/.exec(given)?.[1].replaceAll(/\\(["\\])/g, '$1') ?? given;
  if (!text) throw new ServiceError('invalid-header', 'Idempotency-Key holds nothing.');
  return text;
}

/** Aborts when the response closes before it is finished. The request closes as soon as it is read. */
function signalOf(res: Response): AbortSignal {
  const controller = new AbortController();
  if (res.destroyed) controller.abort();
  res.once('close', () => {
    if (!res.writableFinished) controller.abort();
  });
  return controller.signal;
}

function send(
  res: Response,
  reply: Reply<OperationId>,
  caller: Caller,
  burst: BurstState | null,
  at: Date,
): void {
  const status = reply.status ?? 200;
  const bytes = reply.bytes ?? (reply.body ? Buffer.from(JSON.stringify(reply.body)) : null);
  const headers = headersOf(res);
  headers.push('Cache-Control', 'no-store');
  for (const name in reply.headers) headers.push(name, reply.headers[name]);
  if (bytes) headers.push('Content-Type', JSON_TYPE, 'Content-Length', String(bytes.length));
  if (caller.kind === 'key' && burst && reply.left) {
    const limits = {
      burst: caller.key.burst,
      state: burst,
      month: reply.left,
      cost: reply.pairs ?? 0,
      at,
    };
    const fields = rateLimitFields(limits);
    headers.push('RateLimit', fields.RateLimit, 'RateLimit-Policy', fields['RateLimit-Policy']);
  }
  res.writeHead(status, headers);
  // Node joins a text with the headers into one write; bytes take two.
  if (bytes && bytes.length <= ONE_WRITE) res.end(textOf(bytes));
  else res.end(bytes ?? undefined);
}

function textOf({buffer, byteOffset, byteLength}: Uint8Array): string {
  return Buffer.from(buffer, byteOffset, byteLength).toString('utf8');
}
