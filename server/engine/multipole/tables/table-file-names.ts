import {readFileSync} from 'node:fs';
import {join} from 'node:path';

/** What tables.json holds, by level: the file, and the digest of what it was made from. */
export interface TableList {
  readonly files: Record<string, string>;
  readonly digests: Record<string, string>;
}

export const TABLE_LIST = 'tables.json';

/** Paths of the table files in a folder, by level, as its tables.json has them. */
export function tableFileNames(folder: string): Map<string, string> {
  // Written by the build of the tables.
  const {files} = JSON.parse(readFileSync(join(folder, TABLE_LIST), 'utf8')) as TableList;
  return new Map(Object.entries(files).map(([level, name]) => [level, join(folder, name)]));
}
