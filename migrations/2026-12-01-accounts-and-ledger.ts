import {sql, type Kysely} from 'kysely';

// 2^53 − 1: beyond it JavaScript could not count single pairs.
const MAX_PAIRS = '9007199254740991';

const statements: readonly string[] = [
  `CREATE TABLE account (
    id TEXT PRIMARY KEY,
    name TEXT NOT NULL,
    allowance INTEGER NOT NULL CHECK (allowance BETWEEN 0 AND ${MAX_PAIRS}),
    console_limit INTEGER CHECK (console_limit BETWEEN 0 AND ${MAX_PAIRS}),
    created_at TEXT NOT NULL
  ) STRICT`,

  `CREATE TABLE person (
    id TEXT PRIMARY KEY,
    account_id TEXT NOT NULL REFERENCES account (id),
    email TEXT NOT NULL COLLATE NOCASE UNIQUE,
    name TEXT NOT NULL,
    role TEXT NOT NULL CHECK (role IN ('reader', 'developer', 'owner', 'admin')),
    password_hash TEXT,
    created_at TEXT NOT NULL
  ) STRICT`,

  `CREATE TABLE session (
    token_digest BLOB PRIMARY KEY,
    person_id TEXT NOT NULL REFERENCES person (id),
    created_at TEXT NOT NULL,
    seen_at TEXT NOT NULL,
    expires_at TEXT NOT NULL
  ) STRICT, WITHOUT ROWID`,

  `CREATE TABLE sign_in_link (
    token_digest BLOB PRIMARY KEY,
    person_id TEXT NOT NULL REFERENCES person (id),
    expires_at TEXT NOT NULL,
    used_at TEXT
  ) STRICT, WITHOUT ROWID`,

  `CREATE TABLE api_key (
    id TEXT PRIMARY KEY,
    account_id TEXT NOT NULL REFERENCES account (id),
    lineage_id TEXT NOT NULL,
    predecessor_id TEXT UNIQUE REFERENCES api_key (id),
    created_by TEXT REFERENCES person (id),
    name TEXT NOT NULL,
    secret_digest BLOB NOT NULL CHECK (length(secret_digest) = 32),
    last_four TEXT NOT NULL,
    scopes TEXT NOT NULL CHECK (json_valid(scopes)),
    monthly_limit INTEGER CHECK (monthly_limit BETWEEN 0 AND ${MAX_PAIRS}),
    burst INTEGER NOT NULL CHECK (burst > 0),
    created_at TEXT NOT NULL,
    expires_at TEXT,
    retires_at TEXT,
    revoked_at TEXT
  ) STRICT`,
  'CREATE INDEX api_key_by_account ON api_key (account_id, created_at)',

  // A charge is a reservation that is settled at once. The others come in twos: a reservation, and
  // the one row that closes it.
  `CREATE TABLE ledger_entry (
    id INTEGER PRIMARY KEY,
    kind TEXT NOT NULL CHECK (kind IN ('charge', 'reserve', 'settle', 'release')),
    closes INTEGER REFERENCES ledger_entry (id),
    account_id TEXT NOT NULL REFERENCES account (id),
    lineage_id TEXT NOT NULL,
    source_id TEXT NOT NULL,
    person_id TEXT REFERENCES person (id),
    operation TEXT NOT NULL,
    day TEXT NOT NULL CHECK (day GLOB '[0-9][0-9][0-9][0-9]-[0-9][0-9]-[0-9][0-9]'),
    pairs INTEGER NOT NULL CHECK (pairs BETWEEN 1 AND ${MAX_PAIRS}),
    at TEXT NOT NULL,
    CHECK ((closes IS NULL) = (kind IN ('charge', 'reserve')))
  ) STRICT`,
  'CREATE UNIQUE INDEX ledger_entry_closed_once ON ledger_entry (closes) WHERE closes IS NOT NULL',
  `CREATE TRIGGER ledger_entry_is_never_changed BEFORE UPDATE ON ledger_entry
    BEGIN SELECT RAISE(ABORT, 'the ledger is append-only'); END`,
  `CREATE TRIGGER ledger_entry_is_never_deleted BEFORE DELETE ON ledger_entry
    BEGIN SELECT RAISE(ABORT, 'the ledger is append-only'); END`,

  // Balances of a UTC month: the row with an empty lineage is the whole account. Only the trigger
  // below writes them, in the statement that writes the entry, so they equal its sums at all times.
  `CREATE TABLE balance (
    month TEXT NOT NULL,
    account_id TEXT NOT NULL REFERENCES account (id),
    lineage_id TEXT NOT NULL,
    settled INTEGER NOT NULL CHECK (settled BETWEEN 0 AND ${MAX_PAIRS}),
    held INTEGER NOT NULL CHECK (held BETWEEN 0 AND ${MAX_PAIRS}),
    PRIMARY KEY (month, account_id, lineage_id)
  ) STRICT, WITHOUT ROWID`,

  `CREATE TABLE usage_day (
    account_id TEXT NOT NULL REFERENCES account (id),
    day TEXT NOT NULL,
    source_id TEXT NOT NULL,
    operation TEXT NOT NULL,
    calls INTEGER NOT NULL,
    pairs INTEGER NOT NULL,
    last_at TEXT NOT NULL,
    PRIMARY KEY (account_id, day, source_id, operation)
  ) STRICT, WITHOUT ROWID`,

  ...["''", 'new.lineage_id'].map(
    (
      lineage,
      index,
    ) => `CREATE TRIGGER ledger_entry_moves_balance_${index} AFTER INSERT ON ledger_entry BEGIN
      INSERT INTO balance (month, account_id, lineage_id, settled, held)
      VALUES (substr(new.day, 1, 7), new.account_id, ${lineage},
        iif(new.kind IN ('charge', 'settle'), new.pairs, 0), iif(new.kind = 'reserve', new.pairs, 0))
      ON CONFLICT (month, account_id, lineage_id) DO UPDATE SET
        settled = settled + excluded.settled,
        held = held + CASE new.kind WHEN 'reserve' THEN new.pairs WHEN 'charge' THEN 0 ELSE -new.pairs END;
    END`,
  ),
  `CREATE TRIGGER ledger_entry_counts_usage AFTER INSERT ON ledger_entry
    WHEN new.kind IN ('charge', 'settle') BEGIN
    INSERT INTO usage_day (account_id, day, source_id, operation, calls, pairs, last_at)
    VALUES (new.account_id, new.day, new.source_id, new.operation, 1, new.pairs, new.at)
    ON CONFLICT (account_id, day, source_id, operation) DO UPDATE SET
      calls = calls + 1, pairs = pairs + new.pairs, last_at = new.at;
  END`,

  `CREATE TABLE idempotency (
    account_id TEXT NOT NULL REFERENCES account (id),
    operation TEXT NOT NULL,
    key TEXT NOT NULL,
    fingerprint BLOB NOT NULL,
    entry_id INTEGER NOT NULL REFERENCES ledger_entry (id),
    created_at TEXT NOT NULL,
    PRIMARY KEY (account_id, operation, key)
  ) STRICT, WITHOUT ROWID`,
  'CREATE INDEX idempotency_by_entry ON idempotency (entry_id)',
  'CREATE INDEX idempotency_by_age ON idempotency (created_at)',
];

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
