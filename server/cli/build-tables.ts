import {createHash} from 'node:crypto';
import {
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import {availableParallelism} from 'node:os';
import {join} from 'node:path';
import {fileURLToPath} from 'node:url';

import {Piscina} from 'piscina';

import {levels, type Level} from '../engine/multipole/tables/levels.ts';
import type {TableList} from '../engine/multipole/tables/table-file-names.ts';

/** Where `server/engine/multipole/find-table.ts` finds the tables. */
const FOLDER = 'dist/engine';
const LIST = join(FOLDER, 'tables.json');
const SOURCES = 'server/engine/multipole/tables';
const WORKER = new URL('build-table-worker.ts', import.meta.url);

const digest = (...parts: readonly (string | Uint8Array)[]): string =>
  parts.reduce((hash, part) => hash.update(part), createHash('sha256')).digest('hex').slice(0, 12);

/**
 * Makes the operator tables of the multipole method, one file for each level that has none yet or
 * whose sources have changed, and removes all others.
 *
 * Same sources, same bytes on this machine: sums have a fixed order and nothing is random. Elsewhere
 * the last digits may differ where `Math.cos`, `Math.sin` or `Math.pow` do, which ECMAScript leaves
 * open; the four operations and `Math.sqrt` are exact.
 */
export async function buildTables(): Promise<void> {
  mkdirSync(FOLDER, {recursive: true});
  const made = new Map(levels.map(level => [level.name, digestOf(level)]));
  const known = readList();
  const list: TableList = {files: {}, digests: {}};
  const missing: Level[] = [];
  for (const level of levels) {
    const {name} = level;
    const file = known.files[name];
    if (known.digests[name] === made.get(name) && isIntact(file)) add(list, name, file, made);
    else missing.push(level);
  }
  if (missing.length > 0) {
    const pool = new Piscina({
      filename: fileURLToPath(WORKER),
      maxThreads: Math.min(availableParallelism(), missing.length),
    });
    // The finest first: they take longest, and the others fill the gaps.
    await Promise.all(
      missing.reverse().map(async level => {
        const start = performance.now();
        const bytes = (await pool.run(level)) as Uint8Array;
        const file = `multipole-${level.name}-${digest(bytes)}.bin`;
        put(join(FOLDER, file), bytes);
        add(list, level.name, file, made);
        put(LIST, JSON.stringify(list, undefined, 2));
        const seconds = ((performance.now() - start) / 1000).toFixed(1);
        process.stderr.write(`> table ${level.name} ${seconds} s\n`);
      }),
    );
    await pool.destroy();
  }
  put(LIST, JSON.stringify(list, undefined, 2));
  const wanted = new Set(Object.values(list.files));
  for (const file of readdirSync(FOLDER)) {
    if (/^multipole-.*\.bin$/.test(file) && !wanted.has(file)) rmSync(join(FOLDER, file));
  }
}
