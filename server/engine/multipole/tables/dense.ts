/** A dense matrix, row by row. */
export interface Dense {
  readonly rows: number;
  readonly columns: number;
  readonly values: Float64Array;
}

export const dense = (rows: number, columns: number): Dense => ({
  rows,
  columns,
  values: new Float64Array(rows * columns),
});

/** a · b */
export function product(a: Dense, b: Dense): Dense {
  const out = dense(a.rows, b.columns);
  const n = b.columns;
  for (let i = 0; i < a.rows; i++) {
    for (let k = 0; k < a.columns; k++) {
      const factor = a.values[i * a.columns + k];
      for (let j = 0; j < n; j++) out.values[i * n + j] += factor * b.values[k * n + j];
    }
  }
  return out;
}

export function transposed(a: Dense): Dense {
  const out = dense(a.columns, a.rows);
  for (let i = 0; i < a.rows; i++) {
    for (let j = 0; j < a.columns; j++) out.values[j * a.rows + i] = a.values[i * a.columns + j];
  }
  return out;
}

/** The rows and columns of a square matrix over n that the lists name. */
export function submatrix(
  values: Float64Array,
  n: number,
  rows: readonly number[],
  columns: readonly number[],
): Dense {
  const out = dense(rows.length, columns.length);
  rows.forEach((row, i) => {
    columns.forEach((column, j) => {
      out.values[i * columns.length + j] = values[n * row + column];
    });
  });
  return out;
}

/** The first rows and columns. */
export function corner(a: Dense, rows: number, columns: number): Dense {
  const out = dense(rows, columns);
  for (let i = 0; i < Math.min(rows, a.rows); i++) {
    for (let j = 0; j < Math.min(columns, a.columns); j++) {
      out.values[i * columns + j] = a.values[i * a.columns + j];
    }
  }
  return out;
}
