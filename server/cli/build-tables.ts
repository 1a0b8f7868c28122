import {fork} from 'node:child_process';
import {existsSync, mkdirSync, readdirSync, readFileSync, rmSync} from 'node:fs';
import {availableParallelism} from 'node:os';
import {join} from 'node:path';

import {levels, type Level} from '../engine/multipole/tables/levels.ts';
import {TABLE_LIST, type TableList} from '../engine/multipole/tables/table-file-names.ts';
import {put, shortDigest, tableFile, TABLES, type TableDone} from './build-table.ts';

const SOURCES = 'server/engine/multipole/tables';
const DECOMPOSITIONS = 'node_modules/ml-matrix/package.json';

/**
 * Makes the operator tables of the multipole method, one file a level, where there is none yet or
 * what it was made from has changed, and removes the files that no level has.
 *
 * Same sources, same bytes on this machine: sums have a fixed order and nothing is random. Elsewhere
 * last digits may differ where `Math.sin`, `Math.cos` and `**` do, which ECMAScript leaves open, and
 * all that follows from them; sums, products and `Math.sqrt` are the same everywhere.
 */
export async function buildTables(): Promise<void> {
  mkdirSync(TABLES, {recursive: true});
  const digests = digestsNow();
  const before = listBefore();
  const isCurrent = ({name}: Level): boolean =>
    before.digests[name] === digests[name] && isWhole(name, before.files[name]);
  const list: TableList = {files: {}, digests: {}};
  const add = (name: string, file: string): void => {
    list.files[name] = file;
    list.digests[name] = digests[name];
  };
  for (const {name} of levels.filter(isCurrent)) add(name, before.files[name]);
  const save = (): void => put(join(TABLES, TABLE_LIST), `${JSON.stringify(list, undefined, 2)}\n`);

  // The finest take longest, so they come first and the others fill the gaps.
  const missing = levels.filter(level => !isCurrent(level)).reverse();
  const children = Math.min(availableParallelism(), missing.length);
  await Promise.all(
    Array.from({length: children}, () =>
      makeInChild(missing, ({level, file, seconds}) => {
        process.stderr.write(`> table ${level}: ${seconds.toFixed(1)} s\n`);
        add(level, file);
        save();
      }),
    ),
  );
  save();
  const wanted = new Set(Object.values(list.files));
  for (const file of readdirSync(TABLES)) {
    if (/^multipole-.*\.bin/.test(file) && !wanted.has(file)) rmSync(join(TABLES, file));
  }
}

/** By level: of its parameters, the sources of the tables and the library of decompositions. */
function digestsNow(): Record<string, string> {
  const sources = readdirSync(SOURCES)
    // What it says of a level is in the parameters, and other levels do not depend on it.
    .filter(file => file !== 'levels.ts')
    .sort()
    .flatMap(file => [file, readFileSync(join(SOURCES, file))]);
  const {version} = JSON.parse(readFileSync(DECOMPOSITIONS, 'utf8')) as {version: string};
  return Object.fromEntries(
    levels.map(level => [level.name, shortDigest(JSON.stringify(level), version, ...sources)]),
  );
}

function listBefore(): TableList {
  const path = join(TABLES, TABLE_LIST);
  if (!existsSync(path)) return {files: {}, digests: {}};
  return JSON.parse(readFileSync(path, 'utf8')) as TableList;
}

function isWhole(level: string, file: string): boolean {
  const path = join(TABLES, file);
  return existsSync(path) && tableFile(level, readFileSync(path)) === file;
}

/** Takes levels from a list that children share until none is left. */
function makeInChild(waiting: Level[], done: (table: TableDone) => void): Promise<void> {
  const child = fork('server/cli/build-table.ts', {stdio: ['ignore', 2, 2, 'ipc']});
  const next = (): void => {
    const level = waiting.shift();
    if (level) child.send(level.name);
    else child.disconnect();
  };
  child.on('message', (table: TableDone) => {
    done(table);
    next();
  });
  next();
  return new Promise((resolve, reject) => {
    child.on('error', reject);
    child.on('exit', code => {
      if (code === 0) resolve();
      else reject(new Error(`a table could not be made: ended with ${code}`));
    });
  });
}

if (process.argv[1]?.endsWith('build-tables.ts')) await buildTables();
