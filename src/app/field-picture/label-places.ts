import type {Box} from './layout';

export interface LabelPlace {
  readonly x: number;
  readonly y: number;
  /** Angle of the text, upright: −π/2 to π/2. */
  readonly angle: number;
  readonly text: string;
  readonly width: number;
  readonly level: number;
}

export interface Circle {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
}

const BETWEEN = 260;
const HEIGHT = 12;

const radiusOf = (width: number): number => 0.5 * Math.hypot(width, HEIGHT) * 0.85;

/**
 * Places for the label of one line: where it is straightest, at least 260 px apart along it, and clear of
 * what is drawn already. `line` is flat pixels; parts outside `inside` do not count.
 */
export function labelPlaces(
  line: Float64Array,
  text: string,
  width: number,
  level: number,
  inside: Box,
  taken: Circle[],
): LabelPlace[] {
  const count = line.length / 2;
  const along = new Float64Array(count);
  for (let k = 1; k < count; k++) {
    along[k] =
      along[k - 1] + Math.hypot(line[2 * k] - line[2 * k - 2], line[2 * k + 1] - line[2 * k - 1]);
  }
  const whole = along[count - 1];
  if (!(whole > 3 * width)) return [];

  const radius = radiusOf(width);
  const fits = (x: number, y: number): boolean =>
    x > inside.x + radius &&
    x < inside.x + inside.width - radius &&
    y > inside.y + radius &&
    y < inside.y + inside.height - radius;
  const candidates: {start: number; x: number; y: number; angle: number; straightness: number}[] =
    [];
  const reach = width + 8;
  for (let start = 0, k = 0, m = 0; start + reach < whole; start += 6) {
    while (k < count - 2 && along[k + 1] < start) k++;
    while (m < count - 2 && along[m + 1] < start + reach) m++;
    const [ax, ay, bx, by] = [line[2 * k], line[2 * k + 1], line[2 * m + 2], line[2 * m + 3]];
    const middle = 2 * ((k + m + 1) >> 1);
    const [x, y] = [line[middle], line[middle + 1]];
    if (!fits(x, y)) continue;
    const chord = Math.hypot(bx - ax, by - ay);
    const straightness = chord / Math.max(1e-9, along[m + 1] - along[k]);
    const sag = Math.hypot((ax + bx) / 2 - x, (ay + by) / 2 - y);
    if (straightness < 0.9 || sag > 4) continue;
    let angle = Math.atan2(by - ay, bx - ax);
    if (angle > Math.PI / 2) angle -= Math.PI;
    if (angle <= -Math.PI / 2) angle += Math.PI;
    candidates.push({
      start,
      x,
      y,
      angle,
      straightness: straightness - 0.05 * sag - 0.02 * Math.abs(angle),
    });
  }
  candidates.sort((p, q) => q.straightness - p.straightness);

  const places: (LabelPlace & {start: number})[] = [];
  for (const {start, x, y, angle} of candidates) {
    if (places.length >= Math.max(1, Math.floor(whole / BETWEEN))) break;
    const isNearOwn = places.some(place => {
      const apart = Math.abs(place.start - start);
      return Math.min(apart, whole - apart) < BETWEEN * 0.8;
    });
    const isBlocked = taken.some(
      other => Math.hypot(other.x - x, other.y - y) < other.radius + radius + 2,
    );
    if (isNearOwn || isBlocked) continue;
    places.push({x, y, angle, text, width, level, start});
    taken.push({x, y, radius});
  }
  return places;
}
