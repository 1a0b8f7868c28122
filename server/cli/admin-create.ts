import {mkdirSync} from 'node:fs';
import {join} from 'node:path';

import * as people from '../accounts/people.ts';
import {createLink} from '../accounts/sign-in-links.ts';
import {readConfig} from '../config.ts';
import {migrate} from '../db/migrate.ts';
import {openDatabase} from '../db/open.ts';

// npm run admin:create -- somebody@example.org
const email = process.argv[2];
if (!email || !/^[^\s@]+@[^\s@]+$/.test(email)) {
  process.stderr.write(
    'Give the e-mail address of the admin: npm run admin:create -- you@example.org\n',
  );
  process.exit(2);
}

const config = readConfig(process.env);
mkdirSync(config.dataDir, {recursive: true, mode: 0o700});
const database = openDatabase(join(config.dataDir, 'fieldstead.sqlite'));
await migrate(database);
const now = new Date();
const found = await people.findByEmail(database, email);
const personId = found?.id ?? (await createAdmin(email));
const word = createLink(database, personId, now);
await database.close();
// After the #, so that it reaches no log of any server.
process.stdout.write(`${config.publicUrl}/welcome#${word}\n`);
process.stderr.write('The link sets the password, once, within 24 hours.\n');

async function createAdmin(address: string): Promise<string> {
  const accountId = await people.openAccount(database, {name: 'Operations'}, now);
  const name = address.slice(0, address.indexOf('@'));
  return people.addPerson(
    database,
    {accountId, email: address, name, role: 'admin', passwordHash: null},
    now,
  );
}
