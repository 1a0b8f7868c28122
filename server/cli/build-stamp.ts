import {readdirSync, statSync} from 'node:fs';
import {join} from 'node:path';

/** Written when a build has finished; what is newer than it is not in the build. */
export const STAMP = 'dist/.built';

const SOURCES = [
  'openapi.yaml',
  'package.json',
  'angular.json',
  'server',
  'shared',
  'migrations',
  'src',
];

/** Whether anything that goes into the build is newer than the last one. */
export function isBuildStale(): boolean {
  const built = statSync(STAMP, {throwIfNoEntry: false})?.mtimeMs ?? 0;
  return built === 0 || SOURCES.some(path => newest(path) > built);
}

function newest(path: string): number {
  const stat = statSync(path, {throwIfNoEntry: false});
  if (!stat) return 0;
  if (!stat.isDirectory()) return stat.mtimeMs;
  return Math.max(stat.mtimeMs, ...readdirSync(path).map(name => newest(join(path, name))));
}
