import {mkdtempSync, rmSync} from 'node:fs';
import type {Server} from 'node:http';
import type {AddressInfo} from 'node:net';
import {tmpdir} from 'node:os';
import {join} from 'node:path';
import {Writable} from 'node:stream';
import pino from 'pino';

import {hashPassword} from '../../server/accounts/passwords.ts';
import * as people from '../../server/accounts/people.ts';
import {readConfig, type Limits} from '../../server/config.ts';
import {migrate} from '../../server/db/migrate.ts';
import {openDatabase, type Database} from '../../server/db/open.ts';
import type {Deps} from '../../server/deps.ts';
import {createEngine} from '../../server/engine/pool.ts';
import {createHttpServer} from '../../server/http/server.ts';
import * as apiKeys from '../../server/ledger/api-keys.ts';
import {GroupCommit} from '../../server/ledger/group-commit.ts';
import {releaseAbandoned} from '../../server/ledger/entries.ts';
import type {CreatedKey, NewKey, Operation, Role, Session} from '../../shared/api.ts';

export const PASSWORD = 'a password for tests only';

export interface ServiceOptions {
  readonly limits?: Partial<Limits>;
  readonly env?: NodeJS.ProcessEnv;
  readonly allowance?: number;
  readonly now?: () => Date;
  /** One that was stopped: starts again on its data, with its account and key. */
  readonly after?: TestService;
}

/** A signed-in person, for calls of the console. */
export interface Visitor {
  readonly session: Session;
  fetch(path: string, init?: RequestInit): Promise<Response>;
}

/** The whole service on a port of its own, with an account, a person of each role and a key. */
export interface TestService {
  readonly baseUrl: string;
  readonly deps: Deps;
  readonly server: Server;
  readonly accountId: string;
  readonly key: CreatedKey;
  /** What was logged so far, a line an entry. */
  readonly logLines: string[];
  makeKey(wanted?: Partial<NewKey>): Promise<CreatedKey>;
  /** Posts to `/v1/{operation}` with the key. */
  post(
    operation: Operation | 'estimates',
    body: unknown,
    headers?: Record<string, string>,
  ): Promise<Response>;
  /** The same, for an answer that has to be a success. */
  call<Answer>(operation: Operation | 'estimates', body: unknown): Promise<Answer>;
  signIn(role: Role): Promise<Visitor>;
  /** Ends the service as a crash would, and leaves its data. */
  stop(): Promise<void>;
  /** Ends it, if it was not stopped, and removes its data. */
  close(): Promise<void>;
}

let passwordHash: Promise<string> | undefined;

export async function startService(options: ServiceOptions = {}): Promise<TestService> {
  const {after} = options;
  const dataDir = after?.deps.config.dataDir ?? mkdtempSync(join(tmpdir(), 'fieldstead-'));
  const now = options.now ?? (() => new Date());
  const env = {THREADS: '2', PORT: '0', DATA_DIR: dataDir, ...options.env};
  const config = readConfig(env, {strangerCalls: 100_000, ...options.limits});
  const logLines: string[] = [];
  const sink = new Writable({
    write(chunk: Buffer, _encoding, done) {
      logLines.push(chunk.toString());
      done();
    },
  });
  const database = openDatabase(join(dataDir, 'fieldstead.sqlite'));
  await migrate(database);
  releaseAbandoned(database.driver, now());
  const engine = createEngine({
    threads: config.threads,
    limits: config.limits,
    maxQueue: config.limits.queuedCalls,
  });
  const groupCommit = new GroupCommit(database.driver);
  const deps: Deps = {config, database, engine, groupCommit, log: pino({base: null}, sink), now};
  const server = createHttpServer(deps);
  await new Promise<void>(done => server.listen(0, '127.0.0.1', done));
  const baseUrl = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;

  const accountId = after?.accountId ?? (await addAccount(database, options.allowance, now()));
  const makeKey = (wanted: Partial<NewKey> = {}): Promise<CreatedKey> =>
    apiKeys.create(
      database,
      {accountId, personId: null},
      {name: 'Test key', scopes: ['compute:run', 'usage:read'], burst: 1_000_000, ...wanted},
      now(),
    );
  const key = after?.key ?? (await makeKey());

  const post: TestService['post'] = (operation, body, headers = {}) =>
    fetch(`${baseUrl}/v1/${operation}`, {
      method: 'POST',
      headers: {
        'Content-Type': 'application/json',
        Authorization: `Bearer ${key.secret}`,
        ...headers,
      },
      body: typeof body === 'string' ? body : JSON.stringify(body),
    });

  let stopped: Promise<void> | undefined;
  const stop = (): Promise<void> =>
    (stopped ??= (async () => {
      server.closeAllConnections();
      await new Promise(done => server.close(done));
      await engine.close();
      await database.close();
    })());

  return {
    baseUrl,
    deps,
    server,
    accountId,
    key,
    logLines,
    makeKey,
    post,
    async call<Answer>(operation: Operation | 'estimates', body: unknown) {
      const response = await post(operation, body);
      const answer: unknown = await response.json();
      if (response.status !== 200) throw new Error(`${response.status} ${JSON.stringify(answer)}`);
      return answer as Answer;
    },
    signIn: role => signIn(baseUrl, role),
    stop,
    async close() {
      await stop();
      rmSync(dataDir, {recursive: true, force: true});
    },
  };
}

/** An account with a person of each role. @returns its id */
async function addAccount(
  database: Database,
  allowance: number | undefined,
  now: Date,
): Promise<string> {
  const accountId = await people.openAccount(
    database,
    {name: 'Test account', allowance: allowance ?? 1e13},
    now,
  );
  passwordHash ??= hashPassword(PASSWORD);
  for (const role of ['reader', 'developer', 'owner', 'admin'] as const) {
    await people.addPerson(
      database,
      {accountId, email: emailOf(role), name: role, role, passwordHash: await passwordHash},
      now,
    );
  }
  return accountId;
}

export const emailOf = (role: Role): string => `${role}@test.example`;

async function signIn(baseUrl: string, role: Role): Promise<Visitor> {
  const response = await fetch(`${baseUrl}/console/session`, {
    method: 'POST',
    headers: {'Content-Type': 'application/json'},
    body: JSON.stringify({email: emailOf(role), password: PASSWORD}),
  });
  if (response.status !== 200)
    throw new Error(`sign-in: ${response.status} ${await response.text()}`);
  const cookie = (response.headers.get('set-cookie') ?? '').split(';')[0];
  const session = (await response.json()) as Session;
  return {
    session,
    fetch: (path, init = {}) => {
      const headers = new Headers(init.headers);
      const own = {
        ...(init.body ? {'Content-Type': 'application/json'} : {}),
        Cookie: cookie,
        'X-CSRF-Token': session.csrfToken,
      };
      for (const [name, value] of Object.entries(own)) {
        if (!headers.has(name)) headers.set(name, value);
      }
      return fetch(baseUrl + path, {...init, headers});
    },
  };
}
