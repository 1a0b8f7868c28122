import {spawn} from 'node:child_process';
import {cpSync, mkdirSync, rmSync, writeFileSync} from 'node:fs';

import {buildKernels} from './build-kernels.ts';
import {STAMP} from './build-stamp.ts';
import {run} from './run.ts';

/** Builds the server and the console into dist/. */
export async function build(): Promise<void> {
  rmSync(STAMP, {force: true});
  const tables = tablesBesides();
  try {
    run('tsc', '-p', 'tsconfig.server.json');
    buildKernels();
    cpSync('server/http/public', 'dist/server/http/public', {recursive: true});
    run('ng', 'build');
  } finally {
    await tables;
  }
  mkdirSync('dist', {recursive: true});
  writeFileSync(STAMP, '');
}

/** The tables need one core for longer than all else, so their processes begin first. */
function tablesBesides(): Promise<void> {
  process.stderr.write('> tsx server/cli/build-tables.ts\n');
  const child = spawn('npx', ['--no-install', 'tsx', 'server/cli/build-tables.ts'], {
    stdio: ['ignore', 2, 2],
  });
  return new Promise((resolve, reject) => {
    child.on('error', reject);
    child.on('exit', code => {
      if (code === 0) resolve();
      else reject(new Error(`build-tables.ts ended with ${code}`));
    });
  });
}

if (process.argv[1]?.endsWith('build.ts')) await build();
