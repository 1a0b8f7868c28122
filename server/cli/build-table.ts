import {createHash} from 'node:crypto';
import {renameSync, writeFileSync} from 'node:fs';
import {join} from 'node:path';

import {buildTable} from '../engine/multipole/tables/build-table.ts';
import {levels} from '../engine/multipole/tables/levels.ts';
import {writeTable} from '../engine/multipole/tables/table-file.ts';

/** Where `server/engine/multipole/find-table.ts` finds the tables. */
export const TABLES = 'dist/engine';

/** The name of a level, and what is told once its file is there. */
export type TableOrder = string;
export interface TableDone {
  readonly level: string;
  readonly file: string;
  readonly seconds: number;
}

export const shortDigest = (...parts: readonly (string | Uint8Array)[]): string =>
  parts
    .reduce((hash, part) => hash.update(part), createHash('sha256'))
    .digest('hex')
    .slice(0, 12);

export const tableFile = (level: string, bytes: Uint8Array): string =>
  `multipole-${level}-${shortDigest(bytes)}.bin`;

/** So that nobody reads half a file. */
export function put(path: string, content: string | Uint8Array): void {
  const unfinished = `${path}.${process.pid}`;
  writeFileSync(unfinished, content);
  renameSync(unfinished, path);
}

/** A child process of build-tables.ts makes one table after the other. */
if (process.argv[1]?.endsWith('build-table.ts')) {
  process.on('message', (name: TableOrder) => {
    const start = performance.now();
    const level = levels.find(each => each.name === name);
    if (!level) throw new RangeError(`expected the name of a level, got ${name}`);
    const bytes = writeTable(buildTable(level));
    const file = tableFile(name, bytes);
    put(join(TABLES, file), bytes);
    const seconds = (performance.now() - start) / 1000;
    process.send?.({level: name, file, seconds} satisfies TableDone);
  });
}
