import {hash} from 'node:crypto';

import type {FilledRequest} from '../filled-request.ts';

/** `sha-256:` and the hexadecimal digest. */
export const digestOf = (data: string | Uint8Array): string =>
  `sha-256:${hash('sha256', data, 'hex')}`;

/**
 * The digest of a request: of its RFC 8785 form, with defaults filled in. A filled request has its
 * members in the order of RFC 8785, whose numbers and strings are those of JSON.stringify.
 */
export const inputDigest = (request: FilledRequest): string => digestOf(JSON.stringify(request));

/**
 * The digest of results: of their doubles, little-endian, in the order of the answer, with null as
 * the quiet NaN 0x7FF8000000000000.
 *
 * @param values canonical NaN for null; in shared memory or not
 */
export function resultDigest(values: Float64Array): string {
  return digestOf(new Uint8Array(values.buffer, values.byteOffset, values.byteLength));
}

const QUIET_NAN = 0x7ff80000;

/** Gives every NaN the bits of the one quiet NaN, since processors make others as well. */
export function canonicalNaN(values: Float64Array): void {
  const halves = new Uint32Array(values.buffer, values.byteOffset, 2 * values.length);
  for (let i = 0; i < values.length; i++) {
    if (values[i] === values[i]) continue;
    halves[2 * i] = 0;
    halves[2 * i + 1] = QUIET_NAN;
  }
}

/** All numbers below `value`, and null as NaN, in the order of its JSON text. */
export function numbersIn(...values: readonly unknown[]): Float64Array {
  const found: number[] = [];
  const walk = (value: unknown): void => {
    if (typeof value === 'number') found.push(value);
    else if (value === null) found.push(NaN);
    else if (Array.isArray(value)) value.forEach(walk);
    else if (typeof value === 'object') Object.values(value).forEach(walk);
  };
  values.forEach(walk);
  const numbers = Float64Array.from(found);
  canonicalNaN(numbers);
  return numbers;
}
