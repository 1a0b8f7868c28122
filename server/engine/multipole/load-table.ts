import type {Arena} from './arena.ts';
import {writeWords} from './structs.ts';
import {degreeFactors, harmonicIndex, parityOf, sectoralFactor} from './tables/harmonics.ts';
import type {Level} from './tables/levels.ts';
import {signCount} from './tables/offsets.ts';
import {GROUP_STRIDE} from './tables/operator.ts';
import {readTable, type StoredOperator, type TableHead} from './tables/table-file.ts';
import {derivativeTerms} from './tables/translations.ts';

/** A table in the heap, as plain data. */
export interface LoadedTable {
  readonly level: Level;
  /** Of the struct that kernels read. */
  readonly address: number;
  /** Numbers of an expansion, and of what far boxes take of it. */
  readonly size: number;
  readonly sourceSize: number;
  readonly targetSize: number;
  /** Starts of the runs of an expansion, and address of the places that derivatives go to. */
  readonly harmonicStarts: readonly number[];
  readonly termPlaces: number;
  /** By component + 2 separation + 1, x fastest: which input of which operator, or −1. */
  readonly slots: Int32Array;
}

/** [bytes] of one number */
export const numberSize = ({precision}: Level): number => (precision === 'single' ? 4 : 8);

/** Puts a table file into the heap. */
export function loadTable(bytes: Uint8Array, arena: Arena): LoadedTable {
  const {head, values} = readTable(bytes);
  const {level} = head;
  const store = (length: number): Float32Array | Float64Array =>
    level.precision === 'single' ? arena.singles(length) : arena.doubles(length);
  const data = store(values.length);
  data.set(values);
  const words = (operator: StoredOperator): number[] => [
    operator.groups.length / GROUP_STRIDE,
    writeWords(arena, operator.groups),
    data.byteOffset + numberSize(level) * operator.start,
    signCount(operator.mask),
    operator.moves.length > 0 ? writeWords(arena, operator.moves) : 0,
    operator.inputLength,
  ];
  const operator = (stored: StoredOperator): number => writeWords(arena, words(stored));

  const {places, sequence} = placesOf(head);
  const recurrence = recurrenceFactors(level.degree);
  const factors = store(recurrence.length);
  factors.set(recurrence);
  const terms = termsOf(head, sequence);
  const termFactors = store(terms.factors.length);
  termFactors.set(terms.factors);
  const size = head.harmonicStarts[8];
  const address = writeWords(arena, [
    level.degree,
    size,
    head.sourceStarts[8],
    head.targetStarts[8],
    factors.byteOffset,
    writeWords(arena, places),
    sequence.length,
    writeWords(arena, sequence),
    terms.factors.length,
    writeWords(arena, terms.words),
    termFactors.byteOffset,
    operator(head.compress),
    operator(head.expand),
    operator(head.up),
    operator(head.down),
    head.far.length,
    writeWords(arena, head.far.flatMap(words)),
  ]);
  const sourceSize = head.sourceStarts[8];
  const targetSize = head.targetStarts[8];
  const termPlaces = writeWords(arena, terms.places);
  const {harmonicStarts} = head;
  const slots = slotsOf(head);
  return {level, address, size, sourceSize, targetSize, harmonicStarts, termPlaces, slots};
}

/** Where each harmonic is in an expansion: by parity, then by degree, as in tables/harmonics.ts. */
function placeTable({level: {degree}, harmonicStarts}: TableHead): Int32Array {
  const next = [...harmonicStarts];
  const out = new Int32Array((degree + 1) ** 2);
  for (let l = 0; l <= degree; l++) {
    for (let m = -l; m <= l; m++) out[harmonicIndex(l, m)] = next[parityOf(l, m)]++;
  }
  return out;
}

/** In the order of the recurrences: places of cosine and sine, and of all harmonics. */
function placesOf(head: TableHead): {places: number[]; sequence: number[]} {
  const {degree} = head.level;
  const table = placeTable(head);
  const places: number[] = [];
  const sequence: number[] = [];
  for (let m = 0; m <= degree; m++) {
    for (let l = m; l <= degree; l++) {
      const cosine = table[harmonicIndex(l, m)];
      const sine = table[harmonicIndex(l, -m)];
      places.push(cosine, sine);
      sequence.push(cosine);
      if (m > 0) sequence.push(sine);
    }
  }
  return {places, sequence};
}

function recurrenceFactors(degree: number): number[] {
  const out: number[] = [];
  for (let m = 0; m <= degree; m++) {
    if (m > 0) out.push(sectoralFactor(m));
    for (let l = m + 1; l <= degree; l++) {
      const {z, square} = degreeFactors(l, m);
      out.push(z, square);
    }
  }
  return out;
}

/** Derivatives: axis, place of what is derived, row of what comes of it. */
function termsOf(
  head: TableHead,
  sequence: readonly number[],
): {words: number[]; places: number[]; factors: number[]} {
  const table = placeTable(head);
  const places: number[] = [];
  const rows = new Map(sequence.map((place, row) => [place, row]));
  const words: number[] = [];
  const factors: number[] = [];
  for (const {axis, from, to, factor} of derivativeTerms(head.level.degree)) {
    const row = rows.get(table[to]);
    if (row === undefined) throw new RangeError('expected every harmonic in the sequence');
    words.push(axis, table[from], row);
    places.push(table[to]);
    factors.push(factor);
  }
  return {words, places, factors};
}

function slotsOf({level: {separation}, far}: TableHead): Int32Array {
  const most = 2 * separation + 1;
  const side = 2 * most + 1;
  const out = new Int32Array(side ** 3).fill(-1);
  far.forEach(({offset, mask}, index) => {
    const axes = [0, 1, 2].filter(axis => (mask >> axis) & 1);
    for (let s = 0; s < signCount(mask); s++) {
      const signed = [...offset];
      axes.forEach((axis, bit) => {
        if ((s >> bit) & 1) signed[axis] = -signed[axis];
      });
      const [x, y, z] = signed;
      out[x + most + side * (y + most + side * (z + most))] = 8 * index + s;
    }
  });
  return out;
}
