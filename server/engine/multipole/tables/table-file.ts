import type {Table} from './build-table.ts';
import type {Level} from './levels.ts';
import {dataLength, type Operator} from './operator.ts';

/** Where an operator lies in a table file. */
export interface StoredOperator {
  readonly groups: readonly number[];
  /** First number of its matrix, and how many. */
  readonly start: number;
  readonly length: number;
  readonly mask: number;
  readonly inputLength: number;
  readonly moves: readonly number[];
  readonly offset: readonly number[];
}

/** A table file: the length of its head, its head as JSON, and the numbers of all matrices. */
export interface TableHead {
  readonly level: Level;
  readonly harmonicStarts: readonly number[];
  readonly sourceStarts: readonly number[];
  readonly targetStarts: readonly number[];
  readonly compress: StoredOperator;
  readonly expand: StoredOperator;
  readonly up: StoredOperator;
  readonly down: StoredOperator;
  readonly far: readonly StoredOperator[];
}

const PREFIX = 8;

/** The bytes of a table file: the same for the same table. */
export function writeTable(table: Table): Uint8Array {
  const numbers: Float64Array[] = [];
  let length = 0;
  const store = (operator: Operator & Partial<StoredOperator>): StoredOperator => {
    const {groups, parts, mask = 0, inputLength = 0, moves = [], offset = []} = operator;
    const start = length;
    numbers.push(...parts);
    length += dataLength(operator);
    return {groups, start, length: length - start, mask, inputLength, moves, offset};
  };
  const {level, harmonicStarts, sourceStarts, targetStarts, compress, expand, up, down, far} =
    table;
  const head: TableHead = {
    level,
    harmonicStarts,
    sourceStarts,
    targetStarts,
    compress: store(compress),
    expand: store(expand),
    up: store(up),
    down: store(down),
    far: far.map(store),
  };
  const size = level.precision === 'single' ? 4 : 8;
  const text = JSON.stringify(head);
  // Spaces, so that the numbers are aligned.
  const padded = text.padEnd(Math.ceil((PREFIX + text.length) / 64) * 64 - PREFIX);
  const out = new Uint8Array(PREFIX + padded.length + size * length);
  new DataView(out.buffer).setUint32(0, padded.length, true);
  out.set(new TextEncoder().encode(padded), PREFIX);
  const Values = level.precision === 'single' ? Float32Array : Float64Array;
  const values = new Values(out.buffer, PREFIX + padded.length, length);
  let at = 0;
  for (const part of numbers) {
    values.set(part, at);
    at += part.length;
  }
  return out;
}

export function readTable(bytes: Uint8Array): {
  head: TableHead;
  values: Float32Array | Float64Array;
} {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const textLength = view.getUint32(0, true);
  const text = new TextDecoder().decode(bytes.subarray(PREFIX, PREFIX + textLength));
  // Written by `writeTable`, and named by its digest.
  const head = JSON.parse(text) as TableHead;
  // A copy, so that it is aligned; the `slice` of a Buffer would be none.
  const own = new Uint8Array(bytes.subarray(PREFIX + textLength)).buffer;
  const values = head.level.precision === 'single' ? new Float32Array(own) : new Float64Array(own);
  return {head, values};
}
