import {cpSync, mkdirSync, rmSync, writeFileSync} from 'node:fs';

import {buildKernels} from './build-kernels.ts';
import {STAMP} from './build-stamp.ts';
import {run} from './run.ts';

/** Builds the server and the console into dist/. */
export function build(): void {
  rmSync(STAMP, {force: true});
  run('tsc', '-p', 'tsconfig.server.json');
  buildKernels();
  cpSync('server/http/public', 'dist/server/http/public', {recursive: true});
  run('ng', 'build');
  mkdirSync('dist', {recursive: true});
  writeFileSync(STAMP, '');
}

if (process.argv[1]?.endsWith('build.ts')) build();
