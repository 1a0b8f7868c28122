import type {Request, Response} from 'express';
import type {Transform} from 'node:stream';
import {createBrotliDecompress, createGunzip, createInflate} from 'node:zlib';

import {ServiceError} from '../errors.ts';

const ENCODINGS = 'gzip, deflate, br';

const decoders: Readonly<Record<string, () => Transform>> = {
  gzip: createGunzip,
  'x-gzip': createGunzip,
  deflate: createInflate,
  br: createBrotliDecompress,
};

/** Reads whole bodies of `application/json`, up to `limit` bytes after decompression. */
export function createBodyReader(limit: number): (req: Request, res: Response) => Promise<Buffer> {
  return async (req, res) => {
    if (!hasBody(req)) return Buffer.alloc(0);
    checkMediaType(req);
    if (Number(req.headers['content-length'] ?? 0) > limit) throw tooLarge(limit);
    const decoder = decoderOf(req);
    // Asked by "Expect: 100-continue", and only now that the caller is known and the length is fit.
    if (/^100-continue$/i.test(req.headers.expect ?? '')) res.writeContinue();
    return collect(req, decoder, limit);
  };
}

/** Not Express's own reader: it reports a body that is too large only once all of it has come. */
function collect(req: Request, decoder: Transform | null, limit: number): Promise<Buffer> {
  return new Promise((done, fail) => {
    const source = decoder ? req.pipe(decoder) : req;
    const chunks: Buffer[] = [];
    let size = 0;
    const stop = (error: ServiceError): void => {
      source.off('data', take);
      if (decoder) {
        req.unpipe(decoder);
        decoder.destroy();
      }
      fail(error);
    };
    const take = (chunk: Buffer): void => {
      size += chunk.length;
      if (size > limit) stop(tooLarge(limit));
      else chunks.push(chunk);
    };
    source.on('data', take);
    source.once('end', () => done(chunks.length === 1 ? chunks[0] : Buffer.concat(chunks, size)));
    decoder?.once('error', () => {
      stop(new ServiceError('bad-request', 'The body is not in its Content-Encoding.'));
    });
    const endsEarly = (): void => {
      if (!req.complete) stop(new ServiceError('bad-request', 'The body ended before its time.'));
    };
    req.once('close', endsEarly);
  });
}

function decoderOf(req: Request): Transform | null {
  const encoding = (req.headers['content-encoding'] ?? 'identity').toLowerCase().trim();
  if (encoding === 'identity') return null;
  if (!Object.hasOwn(decoders, encoding)) {
    throw new ServiceError(
      'unsupported-encoding',
      `The body is encoded as ${shown(encoding)}; expected ${ENCODINGS} or none.`,
      {facts: {acceptEncoding: ENCODINGS}},
    );
  }
  return decoders[encoding]();
}

function hasBody(req: Request): boolean {
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
    `Given ${given ? shown(given) : 'no Content-Type'}; the operation reads application/json in UTF-8.`,
    {facts: {accept: 'application/json'}},
  );
}

function tooLarge(limit: number): ServiceError {
  return new ServiceError(
    'body-too-large',
    `A body may be ${limit} bytes at most, after decompression.`,
  );
}

/** A header as it may stand in a detail. */
function shown(text: string): string {
  return text.slice(0, 100).replaceAll(/[^\x20-\x7e]/g, '?');
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
