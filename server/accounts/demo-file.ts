import {chmodSync, existsSync, readFileSync, writeFileSync} from 'node:fs';
import {join} from 'node:path';

import type {Config} from '../config.ts';
import type {Database} from '../db/open.ts';
import {seedDemo, type DemoCredentials} from './demo.ts';

/**
 * Makes the demo scenario in an empty database and writes its sign-ins where only the owner of the
 * files can read them.
 *
 * @returns the sign-ins, or null where the database is not one of the demo
 */
export async function prepareDemo(
  config: Config,
  database: Database,
  now: Date,
): Promise<DemoCredentials | null> {
  const file = join(config.dataDir, 'demo-credentials.json');
  const isEmpty = database.driver.prepare('SELECT 1 FROM account').get() === undefined;
  if (!isEmpty && !existsSync(file)) return null;
  const credentials = isEmpty
    ? await seedDemo(database, now)
    : (JSON.parse(readFileSync(file, 'utf8')) as DemoCredentials);
  const content = {...credentials, baseUrl: config.publicUrl};
  const {baseUrl, apiKey, people} = content;
  writeFileSync(file, `${JSON.stringify({baseUrl, apiKey, people}, null, 2)}\n`, {mode: 0o600});
  chmodSync(file, 0o600); // mode is only for a file that is new
  return credentials;
}
