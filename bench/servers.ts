import {spawn, type ChildProcess} from 'node:child_process';
import {mkdtempSync, readFileSync, rmSync} from 'node:fs';
import {createServer, type AddressInfo} from 'node:net';
import {tmpdir} from 'node:os';
import {join} from 'node:path';

export interface Running {
  readonly baseUrl: string;
  readonly apiKey: string;
  stop(): Promise<void>;
}

/** The built service with demo data, in a process and a folder of its own. */
export async function startService(env: NodeJS.ProcessEnv = {}): Promise<Running> {
  const dataDir = mkdtempSync(join(tmpdir(), 'fieldstead-bench-'));
  const port = await freePort();
  const child = spawn(process.execPath, ['dist/server/main.js'], {
    env: {...process.env, DATA_DIR: dataDir, PORT: String(port), ...env},
    stdio: ['ignore', 'ignore', 'ignore'],
  });
  const baseUrl = `http://127.0.0.1:${port}`;
  await untilAnswering(`${baseUrl}/readyz`);
  const file = readFileSync(join(dataDir, 'demo-credentials.json'), 'utf8');
  const {apiKey} = JSON.parse(file) as {apiKey: string};
  return {
    baseUrl,
    apiKey,
    async stop() {
      await stopped(child);
      rmSync(dataDir, {recursive: true, force: true});
    },
  };
}

/** The yardstick: Express that parses a JSON body and sends it back. */
export async function startEcho(): Promise<Omit<Running, 'apiKey'>> {
  const port = await freePort();
  const code = `import express from 'express';
    const app = express();
    app.post('/', express.json(), (req, res) => { res.json(req.body); });
    app.listen(${port}, '127.0.0.1');`;
  const child = spawn(process.execPath, ['--input-type=module', '-e', code], {stdio: 'ignore'});
  const baseUrl = `http://127.0.0.1:${port}`;
  await untilAnswering(baseUrl);
  return {baseUrl, stop: () => stopped(child)};
}

async function stopped(child: ChildProcess): Promise<void> {
  const ended = new Promise(done => child.once('exit', done));
  child.kill('SIGTERM');
  await ended;
}

async function untilAnswering(url: string): Promise<void> {
  for (let tries = 0; tries < 200; tries++) {
    try {
      await fetch(url);
      return;
    } catch {
      // Not listening yet.
      await new Promise(done => setTimeout(done, 100));
    }
  }
  throw new Error(`nothing answers at ${url}`);
}

function freePort(): Promise<number> {
  return new Promise(done => {
    const server = createServer();
    server.listen(0, '127.0.0.1', () => {
      const {port} = server.address() as AddressInfo;
      server.close(() => done(port));
    });
  });
}
