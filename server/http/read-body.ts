import express, {type Request, type Response} from 'express';

import {ServiceError} from '../errors.ts';

const ENCODINGS = 'gzip, deflate, br';

/** What the reader of bodies throws; only these members are looked at, since others hold the body itself. */
interface ReaderError {
  readonly type?: unknown;
  readonly status?: unknown;
}

/** Reads whole bodies of `application/json`, up to `limit` bytes after decompression. */
export function createBodyReader(limit: number): (req: Request, res: Response) => Promise<Buffer> {
  const read = express.raw({type: () => true, limit});
  return async (req, res) => {
    if (!hasBody(req)) return Buffer.alloc(0);
    checkMediaType(req);
    if (Number(req.headers['content-length'] ?? 0) > limit) throw tooLarge(limit);
    // Asked by "Expect: 100-continue", and only now that the caller is known and the length is fit.
    if (req.headers.expect !== undefined) res.writeContinue();
    await new Promise<void>((done, fail) => {
      read(req, res, error =>
        error ? fail(readerError(error as ReaderError, req, limit)) : done(),
      );
    });
    return req.body as Buffer;
  };
}

export function hasBody(req: Request): boolean {
  return (
    req.headers['transfer-encoding'] !== undefined || Number(req.headers['content-length'] ?? 0) > 0
  );
}

function checkMediaType(req: Request): void {
  const given = req.headers['content-type'];
  if (given === 'application/json') return;
  const [type, ...parameters] = (given ?? '').toLowerCase().split(';');
  const charset = parameters.map(one => one.trim()).find(one => one.startsWith('charset='));
  const isUtf8 = charset === undefined || /^charset="?utf-8"?$/.test(charset);
  if (type.trim() === 'application/json' && isUtf8) return;
  throw new ServiceError(
    'unsupported-media-type',
    `Given ${given ? given.slice(0, 100).replaceAll(/[^\x20-\x7e]/g, '?') : 'no Content-Type'}; the operation reads application/json in UTF-8.`,
    {facts: {accept: 'application/json'}},
  );
}

function tooLarge(limit: number): ServiceError {
  return new ServiceError(
    'body-too-large',
    `A body may be ${limit} bytes at most, after decompression.`,
  );
}

function readerError({type, status}: ReaderError, req: Request, limit: number): Error {
  switch (type) {
    case 'entity.too.large':
      return tooLarge(limit);
    case 'encoding.unsupported':
      return new ServiceError(
        'unsupported-encoding',
        `The body is encoded as ${String(req.headers['content-encoding']).slice(0, 60)}; expected ${ENCODINGS} or none.`,
        {facts: {acceptEncoding: ENCODINGS}},
      );
    case 'request.aborted':
    case 'request.size.invalid':
      return new ServiceError('bad-request', 'The body ended before its Content-Length.');
    default:
      // What zlib throws on bytes that are not in the encoding that they claim.
      if (status === 400)
        return new ServiceError('bad-request', 'The body is not in its Content-Encoding.');
      return new Error(`the body could not be read (${String(type)})`);
  }
}

/**
 * After a refusal: reads what is still coming and throws it away for a while, so that a client that
 * only looks for an answer once it has sent everything gets to see it; then closes.
 */
export function discardRest(req: Request, bytes: number, milliseconds: number): void {
  if (req.complete || !hasBody(req)) return;
  let left = bytes;
  const {socket} = req;
  const timer = setTimeout(() => socket.destroy(), milliseconds).unref();
  req.on('data', (chunk: Buffer) => {
    left -= chunk.length;
    if (left < 0) socket.destroy();
  });
  req.once('end', () => clearTimeout(timer));
  req.once('close', () => clearTimeout(timer));
  req.once('error', () => clearTimeout(timer));
  req.resume();
}
