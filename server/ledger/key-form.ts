import {hash, randomInt} from 'node:crypto';
import {crc32} from 'node:zlib';

/**
 * The form of a key: `fst_` + public id (12) + `_` + secret (32) + checksum (6), in base 62.
 *
 * A double click selects it whole; the secret carries 190 bits; the checksum (CRC-32 of all before
 * it) turns away a mistyped key without a look at the database.
 */
export const KEY_PATTERN = /^fst_([0-9A-Za-z]{12})_([0-9A-Za-z]{32})([0-9A-Za-z]{6})$/;

const ANY_KEY = /fst_[0-9A-Za-z]{12}_[0-9A-Za-z]{6,}/g;

/** A text for the log: of a key in it, or what looks like one, only the public part is left. */
export function hideKeys(text: string): string {
  return text.replaceAll(ANY_KEY, key => `${key.slice(0, 16)}_…`);
}

const ALPHABET = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz';

export interface NewSecret {
  readonly id: string;
  /** The whole key; shown once and kept nowhere. */
  readonly secret: string;
  readonly digest: Buffer;
  readonly lastFour: string;
}

export function createSecret(): NewSecret {
  const id = randomText(12);
  const body = `fst_${id}_${randomText(32)}`;
  const secret = body + checksum(body);
  return {id, secret, digest: digestOf(secret), lastFour: secret.slice(-4)};
}

/** The public id in a key, or null if it is not a key at all or its checksum is wrong. */
export function publicIdOf(key: string): string | null {
  const match = KEY_PATTERN.exec(key);
  if (!match) return null;
  return checksum(key.slice(0, -6)) === match[3] ? match[1] : null;
}

/** SHA-256; enough at rest for a secret of 190 random bits. */
export function digestOf(key: string): Buffer {
  return hash('sha256', key, 'buffer');
}

function randomText(length: number): string {
  let text = '';
  for (let i = 0; i < length; i++) text += ALPHABET[randomInt(ALPHABET.length)];
  return text;
}

function checksum(text: string): string {
  let rest = crc32(text);
  let digits = '';
  for (let i = 0; i < 6; i++) {
    digits = ALPHABET[rest % 62] + digits;
    rest = Math.floor(rest / 62);
  }
  return digits;
}
