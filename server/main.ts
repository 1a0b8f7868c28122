import {mkdirSync} from 'node:fs';
import type {AddressInfo} from 'node:net';
import {join} from 'node:path';
import pino from 'pino';

import {prepareDemo} from './accounts/demo-file.ts';
import {readConfig} from './config.ts';
import {migrate} from './db/migrate.ts';
import {openDatabase} from './db/open.ts';
import type {Deps} from './deps.ts';
import {createEngine} from './engine/pool.ts';
import {createHttpServer} from './http/server.ts';
import {releaseAbandoned} from './ledger/entries.ts';
import {GroupCommit} from './ledger/group-commit.ts';
import {forgetOld} from './ledger/idempotency.ts';

const DRAIN_MILLISECONDS = 30_000;
const HOUR = 3_600_000;
/** Lines are written together, and no later than this. */
const LOG_CHUNK = 4096;
const LOG_MILLISECONDS = 200;

const config = readConfig(process.env);
// Written by this process itself, so that the last lines of a crash are not lost with a thread.
const destination = pino.destination({sync: false, minLength: LOG_CHUNK});
setInterval(() => destination.flush(), LOG_MILLISECONDS).unref();
const log = pino(
  {level: config.logLevel, base: null, timestamp: pino.stdTimeFunctions.isoTime},
  destination,
);

process.on('uncaughtException', error => {
  log.fatal({name: error.name, message: error.message, stack: error.stack});
  destination.flushSync();
  process.exit(1);
});

// The database and what stands beside it are for the owner of the process alone.
process.umask(0o077);
mkdirSync(config.dataDir, {recursive: true, mode: 0o700});
const database = openDatabase(join(config.dataDir, 'fieldstead.sqlite'));
await migrate(database);
const released = releaseAbandoned(database.driver, new Date());
if (released > 0) log.warn({released}, 'reservations of an earlier run were released');
const demo = config.isDemo ? await prepareDemo(config, database, new Date()) : null;
const engine = createEngine({
  threads: config.threads,
  limits: config.limits,
  maxQueue: config.limits.queuedCalls,
});
if (!engine.hasMultipole) {
  // Calls with a tolerance then cost what direct sums cost, which callers should not meet unawares.
  log.warn('no kernels or tables of this build: all sums are direct; run npm run build');
}
await engine.warmUp();
const groupCommit = new GroupCommit(database.driver);
const deps: Deps = {config, database, engine, groupCommit, log, now: () => new Date()};
const server = createHttpServer(deps);
await new Promise<void>((done, fail) => {
  server.once('error', fail);
  server.listen(config.port, config.host, done);
});
announce();
const housekeeping = setInterval(() => forgetOld(database.driver, new Date()), HOUR).unref();

let isClosing = false;
for (const signal of ['SIGTERM', 'SIGINT'] as const) {
  process.on(signal, () => {
    if (isClosing) return;
    isClosing = true;
    void close();
  });
}

async function close(): Promise<void> {
  clearInterval(housekeeping);
  const late = setTimeout(() => server.closeAllConnections(), DRAIN_MILLISECONDS);
  const closed = new Promise(done => server.close(done));
  server.closeIdleConnections();
  await closed;
  clearTimeout(late);
  await engine.close();
  await database.close();
  destination.flushSync();
  process.exit(0);
}

/** For the person who started it by hand; everything else is for the log. */
function announce(): void {
  const {address, port} = server.address() as AddressInfo;
  log.info({address, port, threads: config.threads}, 'ready');
  const lines = [
    `Fieldstead is at ${config.publicUrl}, the API reference at ${config.publicUrl}/docs`,
  ];
  if (demo) {
    lines.push('', 'Demo data. Sign in to the console as:');
    for (const {email, password, role, account} of demo.people) {
      lines.push(`  ${email.padEnd(34)} ${password}  ${role}, ${account}`);
    }
    lines.push('', `Call the API with this key:\n  ${demo.apiKey}`);
    lines.push('', `All of it is in ${join(config.dataDir, 'demo-credentials.json')}`);
  }
  if (config.logLevel !== 'silent') process.stderr.write(`${lines.join('\n')}\n`);
}
