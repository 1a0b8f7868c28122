import {describe, expect, test} from 'vitest';

import {buildTable} from '../../server/engine/multipole/tables/build-table.ts';
import {
  byParity,
  harmonicCount,
  regularHarmonics,
} from '../../server/engine/multipole/tables/harmonics.ts';
import {levels, type Level} from '../../server/engine/multipole/tables/levels.ts';
import {GROUP_STRIDE, ROW_UNIT} from '../../server/engine/multipole/tables/operator.ts';
import {
  readTable,
  writeTable,
  type StoredOperator,
  type TableHead,
} from '../../server/engine/multipole/tables/table-file.ts';
import {childToParent, derivativeTerms} from '../../server/engine/multipole/tables/translations.ts';
import {randomNumbers} from './random.ts';

const levelOf = (name: string): Level => {
  const level = levels.find(each => each.name === name);
  if (!level) throw new RangeError(`no level ${name}`);
  return level;
};

const files = new Map<string, Uint8Array>();

/** The file of a level, made once. */
function fileOf(name: string): Uint8Array {
  const file = files.get(name) ?? writeTable(buildTable(levelOf(name)));
  files.set(name, file);
  return file;
}

/** What the kernels do with a table, in plain double precision. */
class Translator {
  readonly head: TableHead;
  readonly #values: Float32Array | Float64Array;
  /** Of each harmonic in an expansion. */
  readonly #places: Int32Array;

  constructor(file: Uint8Array) {
    const {head, values} = readTable(file);
    this.head = head;
    this.#values = values;
    this.#places = new Int32Array(harmonicCount(head.level.degree));
    byParity(head.level.degree).forEach((own, parity) => {
      own.forEach((index, n) => (this.#places[index] = head.harmonicStarts[parity] + n));
    });
  }

  /** An expansion in the order of the table, from one in the order of the harmonics. */
  placed(values: Float64Array): Float64Array {
    const out = new Float64Array(this.head.harmonicStarts[8]);
    values.forEach((value, index) => (out[this.#places[index]] = value));
    return out;
  }

  unplaced(expansion: Float64Array): Float64Array {
    return Float64Array.from(this.#places, place => expansion[place]);
  }

  /** out += operator · input */
  apply(operator: StoredOperator, input: Float64Array, out: Float64Array): void {
    for (let g = 0; g < operator.groups.length; g += GROUP_STRIDE) {
      const [rows, from, columns, to, start] = operator.groups.slice(g, g + GROUP_STRIDE);
      let at = operator.start + start;
      for (let row = 0; row < rows; row += 8) {
        for (let column = 0; column < columns; column++) {
          for (let i = row; i < Math.min(row + 8, rows); i++) {
            out[to + i] += this.#values[at++] * input[from + column];
          }
        }
      }
    }
  }

  /** The sums with signs of inputs, each chunk where the operator takes it from. */
  gather({inputLength, moves}: StoredOperator, inputs: readonly Float64Array[]): Float64Array {
    const out = new Float64Array(inputLength);
    const [count, ...entries] = moves;
    const stride = 1 + inputs.length;
    expect(entries).toHaveLength(count * stride);
    for (let move = 0; move < entries.length; move += stride) {
      const [place, ...targets] = entries.slice(move, move + stride);
      targets.forEach((target, g) => {
        for (let j = 0; j < ROW_UNIT; j++) {
          let sum = 0;
          inputs.forEach(
            (input, s) => (sum += isOdd(g & s) ? -input[place + j] : input[place + j]),
          );
          out[target + j] = sum;
        }
      });
    }
    return out;
  }
}

const isOdd = (bits: number): boolean => ((bits ^ (bits >> 1) ^ (bits >> 2)) & 1) === 1;

/** All offsets that share an operator: bit n of the number turns the sign of axis n of its mask. */
function signedOffsets({offset, mask}: StoredOperator): number[][] {
  const axes = [0, 1, 2].filter(axis => (mask >> axis) & 1);
  return Array.from({length: 2 ** axes.length}, (_, s) =>
    offset.map((value, axis) => ((s >> axes.indexOf(axis)) & 1 && value > 0 ? -value : value)),
  );
}

interface FieldError {
  /** Σ of squares over potential and field */
  readonly error: number;
  readonly size: number;
}

/** Potential and field of random charges in all far boxes of one size, against direct sums. */
function farFieldError(translator: Translator, seed: number): FieldError {
  const {head} = translator;
  const {degree} = head.level;
  const random = randomNumbers(seed);
  const inBox = (): number[] => [random() - 0.5, random() - 0.5, random() - 0.5];
  const targets = Array.from({length: 10}, () => ({at: inBox(), exact: [0, 0, 0, 0]}));
  const sum = new Float64Array(head.targetStarts[8]);
  for (const operator of head.far) {
    const inputs = signedOffsets(operator).map(offset => {
      const multipoles = new Float64Array(harmonicCount(degree));
      for (let k = 0; k < 2; k++) {
        const [x, y, z] = inBox();
        const charge = random() < 0.5 ? 1 : -1;
        regularHarmonics(degree, x, y, z).forEach((value, n) => (multipoles[n] += charge * value));
        for (const {at, exact} of targets) {
          // `offset` leads from the source to the target.
          const d = [at[0] + offset[0] - x, at[1] + offset[1] - y, at[2] + offset[2] - z];
          const r = Math.sqrt(d[0] * d[0] + d[1] * d[1] + d[2] * d[2]);
          exact[0] += charge / r;
          d.forEach((value, axis) => (exact[axis + 1] += (charge * value) / (r * r * r)));
        }
      }
      const compressed = new Float64Array(head.sourceStarts[8]);
      translator.apply(head.compress, translator.placed(multipoles), compressed);
      return compressed;
    });
    translator.apply(operator, translator.gather(operator, inputs), sum);
  }
  const expansion = new Float64Array(head.harmonicStarts[8]);
  translator.apply(head.expand, sum, expansion);
  const local = translator.unplaced(expansion);
  const terms = derivativeTerms(degree);
  let error = 0;
  let size = 0;
  for (const {at, exact} of targets) {
    const harmonics = regularHarmonics(degree, at[0], at[1], at[2]);
    const got = [0, 0, 0, 0];
    local.forEach((value, n) => (got[0] += value * harmonics[n]));
    for (const {axis, from, to, factor} of terms) {
      got[axis + 1] -= local[from] * factor * harmonics[to];
    }
    got.forEach((value, n) => {
      error += (value - exact[n]) ** 2;
      size += exact[n] ** 2;
    });
  }
  return {error, size};
}

describe('operator tables', () => {
  test('have the same bytes every time they are made', () => {
    const first = fileOf('a');
    const second = writeTable(buildTable(levelOf('a')));
    expect(Buffer.compare(first, second)).toBe(0);
  });

  test.each([
    ['a', Float32Array],
    ['double a', Float64Array],
  ])('of level %s are read as they were written', (name, Values) => {
    const precision = Values === Float32Array ? 'single' : 'double';
    const level: Level = {...levelOf('a'), name, precision};
    const table = buildTable(level);
    const {head, values} = readTable(writeTable(table));
    expect(head.level).toEqual(level);
    expect(head.harmonicStarts).toEqual(table.harmonicStarts);
    expect(head.sourceStarts).toEqual(table.sourceStarts);
    expect(head.targetStarts).toEqual(table.targetStarts);
    expect(head.far.map(({offset}) => offset)).toEqual(table.far.map(({offset}) => offset));
    const stored = [head.compress, head.expand, head.up, head.down, ...head.far];
    const made = [table.compress, table.expand, table.up, table.down, ...table.far];
    stored.forEach((operator, n) => {
      expect(operator.groups).toEqual(made[n].groups);
      const wanted = made[n].parts.flatMap(part => [...part]);
      const end = operator.start + operator.length;
      expect(values.subarray(operator.start, end)).toEqual(Values.from(wanted));
    });
    expect(values.length).toBe(stored.reduce((sum, operator) => sum + operator.length, 0));
  });

  test('are read from a part of a buffer', () => {
    // A Buffer's `slice` shares its memory, so numbers were read from where the head is.
    const file = fileOf('a');
    const buffer = Buffer.concat([Buffer.alloc(3), file]).subarray(3);
    expect(readTable(buffer)).toEqual(readTable(file));
  });

  // Exact but for numbers of the table, which are rounded to single precision: 6e-8 each.
  test('hand multipoles of the 8 children up, and local expansions down', () => {
    const translator = new Translator(fileOf('c'));
    const {head} = translator;
    const {degree} = head.level;
    const n = harmonicCount(degree);
    const random = randomNumbers(11);
    const children = Array.from({length: 8}, () =>
      regularHarmonics(degree, random() - 0.5, random() - 0.5, random() - 0.5),
    );
    const matrices = children.map((_, s) => {
      const [x, y, z] = [0, 1, 2].map(axis => ((s >> axis) & 1 ? -0.25 : 0.25));
      return childToParent(degree, [x, y, z]);
    });
    const wanted = new Float64Array(n);
    matrices.forEach((matrix, s) => {
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) wanted[i] += matrix[n * i + j] * children[s][j];
      }
    });
    const parent = new Float64Array(head.harmonicStarts[8]);
    const inputs = children.map(child => translator.placed(child));
    translator.apply(head.up, translator.gather(head.up, inputs), parent);
    translator.unplaced(parent).forEach((value, i) => {
      expect(Math.abs(value - wanted[i])).toBeLessThan(1e-6);
    });

    // u_g are added to each child with the signs of its octant; half of what a parent of half the
    // size has, since potentials fall with 1/r.
    const size = head.harmonicStarts[8];
    const parts = new Float64Array(8 * size);
    translator.apply(head.down, translator.placed(wanted), parts);
    matrices.forEach((matrix, s) => {
      const sum = new Float64Array(size);
      for (let g = 0; g < 8; g++) {
        const sign = isOdd(g & s) ? -1 : 1;
        for (let i = 0; i < size; i++) sum[i] += sign * parts[g * size + i];
      }
      translator.unplaced(sum).forEach((value, j) => {
        let expected = 0;
        for (let i = 0; i < n; i++) expected += (matrix[n * i + j] * wanted[i]) / 2;
        expect(Math.abs(value - expected)).toBeLessThan(1e-6 * Math.max(1, Math.abs(expected)));
      });
    });
  });

  test.each(['a', 'c', 'g'])('of level %s lose no more of the far field than it says', name => {
    const translator = new Translator(fileOf(name));
    let error = 0;
    let size = 0;
    // In least squares over many sets: the field of a single one may be small by chance.
    for (let seed = 1; seed <= 40; seed++) {
      const own = farFieldError(translator, seed);
      error += own.error;
      size += own.size;
    }
    const lost = Math.sqrt(error / size);
    // What degrees above the level's would add is in it too.
    expect(lost).toBeLessThan(levelOf(name).compression);
    // Else numbers would be multiplied for nothing.
    expect(lost).toBeGreaterThan(levelOf(name).compression / 4);
  });
});
