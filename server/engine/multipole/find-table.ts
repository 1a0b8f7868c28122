import {existsSync, readFileSync} from 'node:fs';
import {fileURLToPath} from 'node:url';

import {levels} from './tables/levels.ts';
import {tableFileNames} from './tables/table-file-names.ts';

/** From the sources, and from dist/server/engine/multipole. */
const PLACES = ['../../../dist/engine/', '../../../engine/'];

const folder = (): string | undefined =>
  PLACES.map(place => fileURLToPath(new URL(place, import.meta.url))).find(path =>
    existsSync(`${path}tables.json`),
  );

/** Whether the build has made the tables of all levels. */
export function hasTables(): boolean {
  const place = folder();
  if (place === undefined) return false;
  const names = tableFileNames(place);
  return levels.every(({name}) => names.has(name));
}

/** The bytes of the table of a level. */
export function findTable(level: string): Uint8Array {
  const place = folder();
  const path = place && tableFileNames(place).get(level);
  if (!path) throw new RangeError(`expected a table of level ${level}; npm run build makes it`);
  return readFileSync(path);
}
