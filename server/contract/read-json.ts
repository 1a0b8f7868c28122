import {isUtf8} from 'node:buffer';

import {ServiceError} from '../errors.ts';
import {scanJson} from './scan-json.ts';

/**
 * Reads a body as JSON, refusing what `JSON.parse` would bend or choke on.
 *
 * @throws ServiceError empty-body, invalid-utf8, nested-too-deep, duplicate-member, malformed-json
 */
export function readJson(bytes: Uint8Array): unknown {
  if (bytes.length === 0) throw new ServiceError('empty-body', 'The request has no body.');
  if (!isUtf8(bytes))
    throw new ServiceError('invalid-utf8', 'The body holds bytes that are not UTF-8.');
  scanJson(bytes);
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString('utf8');
  try {
    return JSON.parse(text) as unknown;
  } catch (error) {
    // A SyntaxError; its text quotes the body, so only the place is passed on.
    throw new ServiceError('malformed-json', describe(error, text));
  }
}

function describe(error: unknown, text: string): string {
  if (!text.trim()) return 'The body holds nothing but white space.';
  const message = error instanceof Error ? error.message : '';
  const position = /position (\d+)/.exec(message)?.[1];
  if (position === undefined) return 'The body ends before the JSON text is complete.';
  const before = text.slice(0, Number(position)).split('\n');
  const column = (before.at(-1)?.length ?? 0) + 1;
  return `The body is not JSON at line ${before.length}, column ${column}.`;
}
