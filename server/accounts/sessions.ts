import {createHash, createHmac, randomBytes} from 'node:crypto';
import type {Database as Driver} from 'better-sqlite3';

import type {Role} from '../../shared/api.ts';
import {statement, type Database} from '../db/open.ts';

const IDLE_MINUTES = 30;
const ABSOLUTE_HOURS = 12;

/** Who a session belongs to: what the path of a request needs to know. */
export interface SignedIn {
  readonly personId: string;
  readonly accountId: string;
  readonly role: Role;
  readonly csrfToken: string;
}

/** Starts a session. @returns its token, for the cookie; only its digest is kept */
export function start({driver}: Database, personId: string, now: Date): string {
  const token = randomBytes(32).toString('base64url');
  const at = now.toISOString();
  statement(
    driver,
    'INSERT INTO session (token_digest, person_id, created_at, seen_at, expires_at) VALUES (?, ?, ?, ?, ?)',
  ).run(digestOf(token), personId, at, at, later(now, ABSOLUTE_HOURS * 60));
  statement(driver, 'DELETE FROM session WHERE expires_at <= ? OR seen_at <= ?').run(
    at,
    later(now, -IDLE_MINUTES),
  );
  return token;
}

const FIND = `SELECT s.seen_at, p.id AS personId, p.account_id AS accountId, p.role
  FROM session s JOIN person p ON p.id = s.person_id
  WHERE s.token_digest = @digest AND s.expires_at > @now AND s.seen_at > @idleSince`;

interface Row {
  readonly seen_at: string;
  readonly personId: string;
  readonly accountId: string;
  readonly role: Role;
}

/** The person of a session that is still open, or null. */
export function find(driver: Driver, token: string, now: Date): SignedIn | null {
  const digest = digestOf(token);
  const row = statement<[object], Row>(driver, FIND).get({
    digest,
    now: now.toISOString(),
    idleSince: later(now, -IDLE_MINUTES),
  });
  if (!row) return null;
  // A write a minute is enough to measure half an hour of idleness.
  if (row.seen_at <= later(now, -1)) {
    statement(driver, 'UPDATE session SET seen_at = ? WHERE token_digest = ?').run(
      now.toISOString(),
      digest,
    );
  }
  const {personId, accountId, role} = row;
  return {personId, accountId, role, csrfToken: csrfTokenOf(token)};
}

export function end(driver: Driver, token: string): void {
  statement(driver, 'DELETE FROM session WHERE token_digest = ?').run(digestOf(token));
}

/** Derived from the session's token, so that the database holds nothing that could be used. */
export function csrfTokenOf(token: string): string {
  return createHmac('sha256', token).update('csrf').digest('base64url').slice(0, 32);
}

function digestOf(token: string): Buffer {
  return createHash('sha256').update(token).digest();
}

function later(now: Date, minutes: number): string {
  return new Date(now.getTime() + minutes * 60_000).toISOString();
}
