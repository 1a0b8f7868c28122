import {nearestPoint, type Layout} from './layout';
import type {Circle} from './label-places';
import type {Section} from './section';

export interface Arrow {
  /** The middle of the arrow. */
  readonly x: number;
  readonly y: number;
  /** Half of the arrow in pixels, in the direction of E. */
  readonly dx: number;
  readonly dy: number;
  /** The grid point it stands for. */
  readonly index: number;
}

const EVERY = 36;
const SHORTEST = 0.32;

/** Arrows in the direction of E, length by log |E|, left out where something else is drawn. */
export function arrows(section: Section, layout: Layout, taken: readonly Circle[]): Arrow[] {
  const {fieldU, fieldV, counts} = section;
  const {plot} = layout;
  if (!fieldU || !fieldV) return [];
  const found: {x: number; y: number; eu: number; ev: number; size: number; index: number}[] = [];
  const columns = Math.max(1, Math.round(plot.width / EVERY));
  const rows = Math.max(1, Math.round(plot.height / EVERY));
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      const x = plot.x + ((column + 0.5) * plot.width) / columns;
      const y = plot.y + ((row + 0.5) * plot.height) / rows;
      const point = nearestPoint(section, layout, x, y);
      if (!point) continue;
      const index = point.i + point.j * counts[0];
      const [eu, ev] = [fieldU[index], fieldV[index]];
      const size = Math.hypot(eu, ev);
      if (!(size > 0)) continue;
      if (taken.some(other => Math.hypot(other.x - x, other.y - y) < other.radius + 14)) continue;
      found.push({x, y, eu, ev, size, index});
    }
  }
  const logs = found.map(({size}) => Math.log(size)).sort((p, q) => p - q);
  const low = logs[Math.floor(0.05 * logs.length)] ?? 0;
  const high = logs[Math.floor(0.95 * logs.length)] ?? 1;
  const cell = 0.5 * (EVERY - 8);
  return found.map(({x, y, eu, ev, size, index}) => {
    const share = high > low ? Math.min(1, Math.max(0, (Math.log(size) - low) / (high - low))) : 1;
    const half = cell * (SHORTEST + (1 - SHORTEST) * share);
    return {x, y, dx: (half * eu) / size, dy: (-half * ev) / size, index};
  });
}
