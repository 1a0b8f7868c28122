import {contours} from 'd3-contour';

/** One closed line in grid indices, flat: i0, j0, i1, j1 … Parts outside the grid points are to be clipped. */
export type Ring = Float64Array;

/** The outline of everything at or above `level`: rings of areas and of the holes in them. */
export interface Contour {
  readonly level: number;
  readonly rings: readonly Ring[];
}

/** Gives masked points the strongest value beside them, so that bands close around the gap drawn there. */
export function bridged(values: Float64Array, [nx, ny]: readonly [number, number]): Float64Array {
  if (!values.some(Number.isNaN)) return values;
  const out = values.slice();
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      if (!Number.isNaN(values[i + j * nx])) continue;
      let strongest = 0;
      for (let dj = -1; dj <= 1; dj++) {
        for (let di = -1; di <= 1; di++) {
          const [p, q] = [i + di, j + dj];
          const value = p < 0 || q < 0 || p >= nx || q >= ny ? NaN : values[p + q * nx];
          if (Math.abs(value) > Math.abs(strongest)) strongest = value;
        }
      }
      out[i + j * nx] = strongest;
    }
  }
  return out;
}

/** Marching squares over the grid, one contour a level, lowest first. */
export function contoursOf(
  values: Float64Array,
  counts: readonly [number, number],
  levels: readonly number[],
): Contour[] {
  const trace = contours().size([counts[0], counts[1]]);
  // The library only reads the values, and reads them by index.
  const readable = bridged(values, counts) as unknown as number[];
  return levels.map(level => ({
    level,
    rings: trace.contour(readable, level).coordinates.flatMap(polygon =>
      polygon.map(ring => {
        const flat = new Float64Array(2 * ring.length);
        // The library puts values on the middles of cells.
        ring.forEach(([x, y], k) => {
          flat[2 * k] = x - 0.5;
          flat[2 * k + 1] = y - 0.5;
        });
        return flat;
      }),
    ),
  }));
}
