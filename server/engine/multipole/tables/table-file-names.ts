import {readFileSync} from 'node:fs';
import {join} from 'node:path';

/** Paths of the table files in a folder, by level, as its tables.json has them. */
export function tableFileNames(folder: string): Map<string, string> {
  // Written by the build of the tables.
  const {files} = JSON.parse(readFileSync(join(folder, 'tables.json'), 'utf8')) as {
    files: Readonly<Record<string, string>>;
  };
  return new Map(Object.entries(files).map(([level, name]) => [level, join(folder, name)]));
}
