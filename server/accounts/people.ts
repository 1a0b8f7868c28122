import {randomBytes} from 'node:crypto';

import type {Person, Role} from '../../shared/api.ts';
import type {Database} from '../db/open.ts';
import {rfc3339} from '../ledger/period.ts';
import {uuidv7} from './uuid.ts';

/** The allowance of an account unless the operator sets another [pairs a month]. */
export const DEFAULT_ALLOWANCE = 1e12;

export interface NewAccount {
  readonly name: string;
  readonly allowance?: number;
  readonly consoleLimit?: number | null;
}

/** @returns the id of the account */
export async function openAccount({db}: Database, wanted: NewAccount, now: Date): Promise<string> {
  const id = uuidv7(now);
  await db
    .insertInto('account')
    .values({
      id,
      name: wanted.name,
      allowance: wanted.allowance ?? DEFAULT_ALLOWANCE,
      console_limit: wanted.consoleLimit ?? null,
      created_at: rfc3339(now),
    })
    .execute();
  return id;
}

export interface NewPerson {
  readonly accountId: string;
  readonly email: string;
  readonly name: string;
  readonly role: Role;
  readonly passwordHash: string | null;
}

/** @returns the id of the person */
export async function addPerson({db}: Database, wanted: NewPerson, now: Date): Promise<string> {
  const id = uuidv7(now);
  await db
    .insertInto('person')
    .values({
      id,
      account_id: wanted.accountId,
      email: wanted.email,
      name: wanted.name,
      role: wanted.role,
      password_hash: wanted.passwordHash,
      created_at: rfc3339(now),
    })
    .execute();
  return id;
}

/** A word of 130 random bits, for a first password. */
export function randomPassword(): string {
  return randomBytes(17).toString('base64url').slice(0, 22);
}

export async function findByEmail(
  {db}: Database,
  email: string,
): Promise<{id: string; password_hash: string | null} | undefined> {
  return db
    .selectFrom('person')
    .where('email', '=', email)
    .select(['id', 'password_hash'])
    .executeTakeFirst();
}

export async function findPerson({db}: Database, id: string): Promise<Person> {
  const row = await db
    .selectFrom('person as p')
    .innerJoin('account as a', 'a.id', 'p.account_id')
    .where('p.id', '=', id)
    .select(['p.id', 'p.email', 'p.name', 'p.role', 'a.id as account_id', 'a.name as account_name'])
    .executeTakeFirstOrThrow();
  return {
    id: row.id,
    email: row.email,
    name: row.name,
    role: row.role,
    account: {id: row.account_id, name: row.account_name},
  };
}

export async function setPassword({db}: Database, id: string, passwordHash: string): Promise<void> {
  await db.updateTable('person').set({password_hash: passwordHash}).where('id', '=', id).execute();
}
