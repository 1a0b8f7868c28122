import {spawnSync} from 'node:child_process';
import {readdirSync} from 'node:fs';

import {isBuildStale} from '../server/cli/build-stamp.ts';

// npm run bench            all questions
// npm run bench -- direct  those whose name has "direct" in it
const NOT_QUESTIONS = new Set([
  'run.ts',
  'compare.ts',
  'servers.ts',
  'interleave.ts',
  'random-charges.ts',
  'yardsticks.ts',
  'shapes.ts',
]);
const wanted = process.argv.slice(2);

if (isBuildStale())
  spawnSync('npx', ['--no-install', 'tsx', 'server/cli/build.ts'], {stdio: 'inherit'});
for (const file of readdirSync('bench').filter(name => name.endsWith('.ts'))) {
  if (NOT_QUESTIONS.has(file)) continue;
  if (wanted.length > 0 && !wanted.some(word => file.includes(word))) continue;
  process.stdout.write(`\n── ${file}\n`);
  const {status} = spawnSync('npx', ['--no-install', 'tsx', `bench/${file}`], {stdio: 'inherit'});
  if (status !== 0) process.exitCode = 1;
}
