import {spawnSync} from 'node:child_process';
import {cpSync, mkdirSync, rmSync, writeFileSync} from 'node:fs';

import {STAMP} from './build-stamp.ts';

/** Builds the server and the console into dist/. */
export function build(): void {
  rmSync(STAMP, {force: true});
  run('tsc', '-p', 'tsconfig.server.json');
  cpSync('server/http/public', 'dist/server/http/public', {recursive: true});
  run('ng', 'build');
  mkdirSync('dist', {recursive: true});
  writeFileSync(STAMP, '');
}

function run(command: string, ...args: string[]): void {
  process.stderr.write(`> ${command} ${args.join(' ')}\n`);
  const {status} = spawnSync('npx', ['--no-install', command, ...args], {
    stdio: ['ignore', 2, 2],
    env: {...process.env, NG_CLI_ANALYTICS: 'false'},
  });
  if (status !== 0) throw new Error(`${command} ended with ${status}`);
}

if (process.argv[1]?.endsWith('build.ts')) build();
