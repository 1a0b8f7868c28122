import type {Dense} from './dense.ts';
import {ROW_BLOCK, ROW_UNIT} from './operator.ts';

/**
 * Which numbers of the translation to targets of one parity are multiplied by. Both sides are ordered
 * by importance and numbers fall along both, so the further down a row, the fewer columns it needs:
 * every step takes `count` chunks of columns from the first on, for a few rows.
 */
export interface Staircase {
  readonly chunks: readonly Chunk[];
  readonly steps: readonly Step[];
}

/** ROW_UNIT columns of sources of one parity. */
export interface Chunk {
  readonly parity: number;
  readonly start: number;
}

export interface Step {
  readonly row: number;
  readonly rows: number;
  readonly count: number;
}

/** All rows with all columns; `columns` by parity of the source. */
export function fullStaircase(rows: number, columns: readonly number[]): Staircase {
  const chunks = columns.flatMap((count, parity) =>
    Array.from({length: count / ROW_UNIT}, (_, k) => ({parity, start: ROW_UNIT * k})),
  );
  const steps: Step[] = [];
  for (let row = 0; row < rows; row += ROW_BLOCK) {
    steps.push({row, rows: Math.min(ROW_BLOCK, rows - row), count: chunks.length});
  }
  return {chunks, steps};
}

/** [columns] What a step costs besides: sums are begun and added to the target. */
const STEP = 6;

/** What may be left out of the translation to targets of one parity. */
export class Choice {
  readonly chunks: readonly Chunk[];
  /** By rows of ROW_UNIT, and by how many chunks are kept: Σ of squares of what is lost. */
  readonly #losses: Float64Array[];
  readonly #weight: number;
  readonly #single: number;

  /**
   * @param blocks by parity of the source
   * @param weight of a loss
   * @param single cost of a number in a step of ROW_UNIT rows, relative to one of ROW_BLOCK
   */
  constructor(blocks: readonly (Dense | undefined)[], weight: number, single: number) {
    this.#weight = weight;
    this.#single = single;
    const rows = Math.max(0, ...blocks.map(block => block?.rows ?? 0));
    const squares = blocks.map(block => block && unitSquares(block));
    const sizes = blocks.flatMap((block, parity) =>
      Array.from({length: Math.ceil((block?.columns ?? 0) / ROW_UNIT)}, (_, unit) => ({
        chunk: {parity, start: ROW_UNIT * unit},
        squares: squares[parity]?.map(row => row[unit]) ?? [],
      })),
    );
    const sum = (values: readonly number[]): number => values.reduce((a, b) => a + b, 0);
    sizes.sort((a, b) => sum(b.squares) - sum(a.squares));
    this.chunks = sizes.map(({chunk}) => chunk);
    this.#losses = Array.from({length: Math.ceil(rows / ROW_UNIT)}, (_, unit) => {
      const losses = new Float64Array(sizes.length + 1);
      // Sums of what is lost and not differences of what is kept, which would have no digits left.
      for (let k = sizes.length - 1; k >= 0; k--)
        losses[k] = losses[k + 1] + sizes[k].squares[unit];
      return losses;
    });
  }

  /** The cheapest steps if a loss of 1 is worth 1/`price` multiplications, and what they lose. */
  steps(price: number): {steps: Step[]; lost: number} {
    const all: Step[] = [];
    let lost = 0;
    for (let unit = 0; unit < this.#losses.length; unit += 2) {
      const [upper, lower] = [unit, unit + 1].map(each => this.#losses.at(each));
      const row = unit * ROW_UNIT;
      const own = [upper, lower].flatMap((losses, k) =>
        losses ? [{row: row + k * ROW_UNIT, rows: ROW_UNIT, ...this.#best([losses], price)}] : [],
      );
      const together =
        upper && lower ? {row, rows: ROW_BLOCK, ...this.#best([upper, lower], price)} : undefined;
      const total = own.reduce((sum, {value}) => sum + value, 0);
      const chosen = together && together.value <= total ? [together] : own;
      for (const step of chosen) {
        lost += step.lost;
        if (step.count > 0) all.push({row: step.row, rows: step.rows, count: step.count});
      }
    }
    return {steps: all, lost};
  }

  #best(
    losses: readonly Float64Array[],
    price: number,
  ): {count: number; lost: number; value: number} {
    const column = ROW_UNIT * losses.length * (losses.length === 1 ? this.#single : 1);
    let best = {count: 0, lost: 0, value: Infinity};
    for (let count = this.chunks.length; count >= 0; count--) {
      let lost = 0;
      for (const each of losses) lost += this.#weight * each[count];
      const value = lost + (count > 0 ? price * column * (ROW_UNIT * count + STEP) : 0);
      if (value < best.value) best = {count, lost, value};
    }
    return best;
  }
}

/** Σ of squares of every ROW_UNIT × ROW_UNIT numbers. */
function unitSquares({rows, columns, values}: Dense): number[][] {
  const out = Array.from({length: Math.ceil(rows / ROW_UNIT)}, () =>
    new Array<number>(Math.ceil(columns / ROW_UNIT)).fill(0),
  );
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < columns; j++) {
      out[(i / ROW_UNIT) | 0][(j / ROW_UNIT) | 0] += values[i * columns + j] ** 2;
    }
  }
  return out;
}
