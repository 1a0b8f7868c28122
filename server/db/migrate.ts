import {Migrator, type Migration} from 'kysely';

import * as accountsAndLedger from '../../migrations/2026-12-01-accounts-and-ledger.ts';
import type {Database} from './open.ts';

/** All migrations by name, oldest first. One that has shipped is never edited. */
const migrations: Readonly<Record<string, Pick<Migration, 'up'>>> = {
  '2026-12-01-accounts-and-ledger': accountsAndLedger,
};

/**
 * Brings the schema up to date. Each step runs in a transaction of its own, since Kysely wraps none
 * around SQLite's DDL: a step that fails leaves the schema as it was.
 *
 * @throws Error naming the step that failed, or a schema that is newer than this program
 */
export async function migrate(
  {db, driver}: Database,
  steps: Readonly<Record<string, Pick<Migration, 'up'>>> = migrations,
): Promise<void> {
  const wrapped = Object.fromEntries(
    Object.entries(steps).map(([name, step]) => [name, {up: inTransaction(driver, step)}]),
  );
  const migrator = new Migrator({db, provider: {getMigrations: () => Promise.resolve(wrapped)}});
  const {error, results} = await migrator.migrateToLatest();
  if (error) {
    const failed = results?.find(result => result.status === 'Error')?.migrationName;
    const step = failed ? `migration ${failed} failed: ` : 'the schema can not be migrated: ';
    throw new Error(step + (error instanceof Error ? error.message : 'unknown fault'));
  }
  const broken: unknown = driver.pragma('foreign_key_check');
  if (Array.isArray(broken) && broken.length > 0) {
    throw new Error(`${broken.length} rows refer to rows that do not exist`);
  }
}

function inTransaction(driver: Database['driver'], step: Pick<Migration, 'up'>): Migration['up'] {
  return async db => {
    driver.exec('BEGIN IMMEDIATE');
    try {
      await step.up(db);
      driver.exec('COMMIT');
    } catch (error) {
      // Whatever the step met; it is thrown on once the schema is as it was.
      driver.exec('ROLLBACK');
      throw error;
    }
  };
}
