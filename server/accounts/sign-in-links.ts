import {createHash, randomBytes} from 'node:crypto';

import {statement, type Database} from '../db/open.ts';

const VALID_HOURS = 24;

/** A word for a link that lets one person set a password, once. @returns the word; only its digest is kept */
export function createLink({driver}: Database, personId: string, now: Date): string {
  const word = randomBytes(32).toString('base64url');
  statement(
    driver,
    'INSERT INTO sign_in_link (token_digest, person_id, expires_at, used_at) VALUES (?, ?, ?, NULL)',
  ).run(digestOf(word), personId, new Date(now.getTime() + VALID_HOURS * 3_600_000).toISOString());
  return word;
}

/** Uses up a link. @returns the person it was for, or null if it is unknown, used or too old */
export function redeem({driver}: Database, word: string, now: Date): string | null {
  const row = statement<[object], {person_id: string}>(
    driver,
    `UPDATE sign_in_link SET used_at = @now
     WHERE token_digest = @digest AND used_at IS NULL AND expires_at > @now RETURNING person_id`,
  ).get({digest: digestOf(word), now: now.toISOString()});
  return row?.person_id ?? null;
}

function digestOf(word: string): Buffer {
  return createHash('sha256').update(word).digest();
}
