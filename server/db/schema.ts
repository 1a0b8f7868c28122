import type {Generated} from 'kysely';

import type {Operation, Role} from '../../shared/api.ts';

/** The tables as types. Times are RFC 3339 in UTC, days and months their first 10 and 7 characters. */
export interface Schema {
  account: AccountTable;
  person: PersonTable;
  session: SessionTable;
  sign_in_link: SignInLinkTable;
  api_key: ApiKeyTable;
  ledger_entry: LedgerEntryTable;
  balance: BalanceTable;
  usage_day: UsageDayTable;
  idempotency: IdempotencyTable;
}

export interface AccountTable {
  id: string;
  name: string;
  allowance: number;
  console_limit: number | null;
  created_at: string;
}

export interface PersonTable {
  id: string;
  account_id: string;
  email: string;
  name: string;
  role: Role;
  password_hash: string | null;
  created_at: string;
}

export interface SessionTable {
  token_digest: Buffer;
  person_id: string;
  created_at: string;
  seen_at: string;
  expires_at: string;
}

export interface SignInLinkTable {
  token_digest: Buffer;
  person_id: string;
  expires_at: string;
  used_at: string | null;
}

export interface ApiKeyTable {
  id: string;
  account_id: string;
  /** The first key of a line of rotations; all of them spend from one limit. */
  lineage_id: string;
  predecessor_id: string | null;
  created_by: string | null;
  name: string;
  secret_digest: Buffer;
  last_four: string;
  /** JSON array of scopes. */
  scopes: string;
  monthly_limit: number | null;
  burst: number;
  created_at: string;
  expires_at: string | null;
  retires_at: string | null;
  revoked_at: string | null;
}

export interface LedgerEntryTable {
  id: Generated<number>;
  kind: 'charge' | 'reserve' | 'settle' | 'release';
  closes: number | null;
  account_id: string;
  lineage_id: string;
  /** A key, or `console`. */
  source_id: string;
  person_id: string | null;
  operation: Operation;
  /** The day of the reservation; it stays the same when the entry is closed. */
  day: string;
  pairs: number;
  at: string;
}

export interface BalanceTable {
  month: string;
  account_id: string;
  /** Empty for the whole account. */
  lineage_id: string;
  settled: number;
  held: number;
}

export interface UsageDayTable {
  account_id: string;
  day: string;
  source_id: string;
  operation: Operation;
  calls: number;
  pairs: number;
  last_at: string;
}

export interface IdempotencyTable {
  account_id: string;
  operation: Operation;
  key: string;
  fingerprint: Buffer;
  entry_id: number;
  created_at: string;
}
