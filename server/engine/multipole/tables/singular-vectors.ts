import {Matrix, SingularValueDecomposition} from 'ml-matrix';

import {dense, transposed, type Dense} from './dense.ts';

/** Right singular vectors of a matrix of many rows, which come a few at a time. */
export class StackedRows {
  /** The triangle that stands for all rows so far, and rows that wait below it. */
  #rows: Dense;
  #count = 0;

  constructor(columns: number) {
    // Few enough for the cache.
    this.#rows = dense(5 * columns, columns);
  }

  add(block: Dense, factor: number): void {
    const {columns} = block;
    for (let i = 0; i < block.rows; i++) {
      if (this.#count === this.#rows.rows) this.#reduce();
      const start = this.#count++ * columns;
      for (let j = 0; j < columns; j++) {
        this.#rows.values[start + j] = factor * block.values[i * columns + j];
      }
    }
  }

  #reduce(): void {
    const {columns, values} = this.#rows;
    values.set(triangle(this.#rows, this.#count).values);
    this.#count = columns;
  }

  /** Vectors as columns, by descending singular value. */
  singular(): {vectors: Dense; sizes: number[]} {
    const {rows, columns, values} = triangle(this.#rows, this.#count);
    const decomposition = new SingularValueDecomposition(Matrix.from1DArray(rows, columns, values));
    const vectors = dense(columns, columns);
    vectors.values.set(decomposition.rightSingularVectors.to1DArray());
    return {vectors, sizes: decomposition.diagonal};
  }
}

/**
 * R of the decomposition QR of the first `count` rows, by Householder's reflections: G. H. Golub,
 * C. F. Van Loan, Matrix Computations, 4th ed., §5.2.
 */
function triangle(matrix: Dense, count: number): Dense {
  const n = matrix.columns;
  // Column by column, so that sums run along memory.
  const columns = transposed({
    rows: count,
    columns: n,
    values: matrix.values.subarray(0, count * n),
  }).values;
  const out = dense(n, n);
  for (let k = 0; k < Math.min(count, n); k++) {
    const own = k * count;
    let square = 0;
    for (let i = k; i < count; i++) square += columns[own + i] * columns[own + i];
    const head = columns[own + k];
    const size = head > 0 ? -Math.sqrt(square) : Math.sqrt(square);
    out.values[k * n + k] = size;
    columns[own + k] = head - size;
    const scale = size === 0 ? 0 : 1 / (size * (size - head));
    for (let j = k + 1; j < n; j++) {
      const other = j * count;
      let dot = 0;
      for (let i = k; i < count; i++) dot += columns[own + i] * columns[other + i];
      dot *= scale;
      for (let i = k; i < count; i++) columns[other + i] -= dot * columns[own + i];
      out.values[k * n + j] = columns[other + k];
    }
  }
  return out;
}
