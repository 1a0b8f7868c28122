import type {OperationId} from '../../shared/api.ts';
import type {operations} from '../../shared/api.gen.ts';
import type {SignedIn} from '../accounts/sessions.ts';
import type {ValidKey} from '../ledger/api-keys.ts';
import type {Left} from '../ledger/entries.ts';

type Content<Response> = Response extends {content: {'application/json': infer Body}}
  ? Body
  : undefined;
type Responses<Id extends OperationId> = operations[Id]['responses'];

/** What an operation answers when it succeeds, as the contract says it. */
export type Success<Id extends OperationId> =
  Responses<Id> extends {200: infer Ok}
    ? Content<Ok>
    : Responses<Id> extends {201: infer Created}
      ? Content<Created>
      : undefined;

export type BodyOf<Id extends OperationId> = operations[Id] extends {
  requestBody?: infer Body;
}
  ? Content<Body>
  : undefined;

type Parameters<Id extends OperationId, Place extends string> =
  operations[Id]['parameters'] extends Partial<Record<Place, infer Values>>
    ? NonNullable<Values>
    : never;

export type Caller =
  | {readonly kind: 'key'; readonly key: ValidKey}
  | {readonly kind: 'person'; readonly person: SignedIn; readonly sessionToken: string}
  | {readonly kind: 'nobody'};

/** One request to one operation, after all checks, with nothing of Express in it. */
export interface Call<Id extends OperationId> {
  readonly caller: Caller;
  readonly path: Parameters<Id, 'path'>;
  readonly query: Parameters<Id, 'query'>;
  readonly body: BodyOf<Id>;
  /** The body as it came, for operations that read it off the HTTP thread. */
  readonly bytes: Uint8Array;
  readonly idempotencyKey: string | null;
  readonly address: string;
  /** A signal that is aborted when the caller has gone; made when it is asked for. */
  readonly signal: () => AbortSignal;
  /** The instant at which the request arrived. */
  readonly at: Date;
}

export interface Reply<Id extends OperationId> {
  readonly status?: 201 | 204;
  readonly body?: Success<Id>;
  /** An answer that is encoded already. */
  readonly bytes?: Uint8Array;
  readonly headers?: Readonly<Record<string, string>>;
  /** For the RateLimit fields and the log. */
  readonly pairs?: number;
  readonly left?: Left;
}

export type Handler<Id extends OperationId> = (call: Call<Id>) => Reply<Id> | Promise<Reply<Id>>;

/** How an operation is answered, and who reads its body. */
export interface Route<Id extends OperationId> {
  readonly handle: Handler<Id>;
  readonly readsBytes: boolean;
}

/** The body is read and checked before the handler sees it. */
export function withBody<Id extends OperationId>(handle: Handler<Id>): Route<Id> {
  return {handle, readsBytes: false};
}

/** The handler gets the bytes, and reads and checks them where it does not hold up others. */
export function withBytes<Id extends OperationId>(handle: Handler<Id>): Route<Id> {
  return {handle, readsBytes: true};
}

export type Routes = {readonly [Id in OperationId]: Route<Id>};

/** @throws RangeError if the operation is not one for keys */
export function keyOf(call: {readonly caller: Caller}): ValidKey {
  if (call.caller.kind !== 'key') throw new RangeError('the operation is not called with a key');
  return call.caller.key;
}

/** @throws RangeError if the operation is not one of the console */
export function personOf(call: {readonly caller: Caller}): SignedIn {
  if (call.caller.kind !== 'person')
    throw new RangeError('the operation is not called by a person');
  return call.caller.person;
}
