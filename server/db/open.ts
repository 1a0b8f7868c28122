import Sqlite from 'better-sqlite3';
import {Kysely, SqliteDialect} from 'kysely';

import type {Schema} from './schema.ts';

/**
 * One connection in two dresses: `db` for queries, `driver` for what must be synchronous.
 *
 * Nobody opens a transaction through `db`: it would stay open across turns of the event loop, and
 * statements of the driver would slip into it. Several statements that belong together run in one
 * `driver.transaction(…).immediate()`, which no other code can enter.
 */
export interface Database {
  readonly db: Kysely<Schema>;
  readonly driver: Sqlite.Database;
  close(): Promise<void>;
}

const pragmas = {
  journal_mode: 'wal',
  // NORMAL: a crash of the process loses nothing, a power cut may lose the last moments.
  synchronous: 1,
  foreign_keys: 1,
  // Or REPLACE would delete a row of the ledger without its trigger being asked.
  recursive_triggers: 1,
  // The wait for a lock blocks the event loop, so it is short.
  busy_timeout: 250,
  journal_size_limit: 64 * 1024 * 1024,
} as const;

/**
 * Opens the database and makes sure that it runs as the ledger needs it.
 *
 * @param path a file, or `:memory:` in tests
 * @throws Error if a pragma did not take
 */
export function openDatabase(path: string): Database {
  const driver = new Sqlite(path);
  for (const [name, value] of Object.entries(pragmas)) driver.pragma(`${name} = ${value}`);
  for (const [name, value] of Object.entries(pragmas)) {
    const got: unknown = driver.pragma(name, {simple: true});
    // An in-memory database has no journal file to write ahead to.
    const expected = name === 'journal_mode' && path === ':memory:' ? 'memory' : value;
    if (got !== expected) {
      driver.close();
      throw new Error(`the database has ${name} = ${String(got)}, expected ${expected}`);
    }
  }
  const db = new Kysely<Schema>({dialect: new SqliteDialect({database: driver})});
  return {db, driver, close: () => db.destroy()};
}

const prepared = new WeakMap<Sqlite.Database, Map<string, Sqlite.Statement>>();

/** The statement for `sql`, prepared once for each connection. */
export function statement<Parameters extends unknown[], Row>(
  driver: Sqlite.Database,
  sql: string,
): Sqlite.Statement<Parameters, Row> {
  let statements = prepared.get(driver);
  if (!statements) prepared.set(driver, (statements = new Map<string, Sqlite.Statement>()));
  let found = statements.get(sql);
  if (!found) statements.set(sql, (found = driver.prepare(sql)));
  return found as Sqlite.Statement<Parameters, Row>;
}
