import Sqlite from 'better-sqlite3';
import {mkdtempSync, rmSync} from 'node:fs';
import {tmpdir} from 'node:os';
import {join} from 'node:path';
import {sql, type Kysely} from 'kysely';
import {afterEach, beforeEach, describe, expect, test} from 'vitest';

import {migrate} from '../../server/db/migrate.ts';
import {openDatabase, type Database} from '../../server/db/open.ts';

let folder: string;
let database: Database;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'fieldstead-database-'));
  database = openDatabase(join(folder, 'test.sqlite'));
});
afterEach(async () => {
  await database.close();
  rmSync(folder, {recursive: true});
});

const schemaOf = ({driver}: Database): unknown[] =>
  driver.prepare('SELECT type, name, tbl_name, sql FROM sqlite_schema ORDER BY name').all();

test('a database is opened as the ledger needs it', () => {
  const read = (name: string): unknown => database.driver.pragma(name, {simple: true});
  expect({
    journal_mode: read('journal_mode'),
    synchronous: read('synchronous'),
    foreign_keys: read('foreign_keys'),
    busy_timeout: read('busy_timeout'),
    recursive_triggers: read('recursive_triggers'),
  }).toEqual({
    journal_mode: 'wal',
    synchronous: 1,
    foreign_keys: 1,
    busy_timeout: 250,
    recursive_triggers: 1,
  });
});

test('a database on which a pragma does not take is not used', () => {
  // One that is locked can not change its journal.
  const file = join(folder, 'locked.sqlite');
  const holder = new Sqlite(file);
  holder.exec('CREATE TABLE t (a); BEGIN EXCLUSIVE');
  expect(() => openDatabase(file)).toThrow();
  holder.close();
});

describe('migrations', () => {
  test('run once, and are remembered', async () => {
    await migrate(database);
    const before = schemaOf(database);
    await migrate(database);
    expect(schemaOf(database)).toEqual(before);
    const names = database.driver.prepare('SELECT name FROM kysely_migration').all();
    expect(names).toEqual([{name: '2026-12-01-accounts-and-ledger'}]);
  });

  test('make only tables that hold each column to its type', async () => {
    await migrate(database);
    const loose = database.driver
      .prepare("SELECT name FROM pragma_table_list WHERE type = 'table' AND NOT strict")
      .all() as {name: string}[];
    const ours = loose.filter(({name}) => !/^(sqlite|kysely)_/.test(name));
    expect(ours).toEqual([]);
  });

  const broken = {
    '2026-12-01-fine': {
      up: async (db: Kysely<unknown>) => {
        await sql`CREATE TABLE fine (a INTEGER) STRICT`.execute(db);
      },
    },
    '2026-12-02-broken': {
      up: async (db: Kysely<unknown>) => {
        await sql`CREATE TABLE half (a INTEGER) STRICT`.execute(db);
        await sql`ALTER TABLE fine ADD COLUMN b INTEGER`.execute(db);
        await sql`INSERT INTO fine (a, b) VALUES (1, 2)`.execute(db);
        await sql`CREATE TABLE half (a INTEGER) STRICT`.execute(db);
      },
    },
  };

  test('that fail leave the schema and the rows as they were before the step', async () => {
    await migrate(database, {'2026-12-01-fine': broken['2026-12-01-fine']});
    const before = schemaOf(database);
    await expect(migrate(database, broken)).rejects.toThrow(
      /migration 2026-12-02-broken failed: table `?half`? already exists/,
    );
    expect(schemaOf(database)).toEqual(before);
    expect(database.driver.prepare('SELECT * FROM fine').all()).toEqual([]);
    expect(database.driver.inTransaction).toBe(false);
    // Once it is mended it runs from its beginning.
    const mended = {...broken, '2026-12-02-broken': {up: () => Promise.resolve()}};
    await migrate(database, mended);
  });

  test('of a newer program are not run over', async () => {
    await migrate(database, broken).catch(() => undefined);
    await expect(migrate(database)).rejects.toThrow(/the schema can not be migrated/);
  });
});
