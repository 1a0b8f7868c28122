import type {Path} from '../../shared/api.ts';
import type {Unit} from '../../shared/units.ts';
import {add, divide, multiply, squareRoot, subtract, wide, type Wide} from './exact.ts';
import {convert, norm, position, type Position} from './positions.ts';

/** A polyline with the arc length from its start to every vertex, to 32 digits. */
interface Polyline {
  readonly vertices: readonly (readonly Wide[])[];
  readonly lengths: readonly Wide[];
}

/** Samples at equal arc length, from the first to the last vertex of a polyline [m]. */
export interface PackedPath {
  readonly kind: 'path';
  /** Through the converted vertices: it decides the doubles. */
  readonly converted: Polyline;
  /** Through the exact vertices: it decides the remainders. */
  readonly exact: Polyline;
  readonly samples: number;
}

function polyline(vertices: readonly (readonly Wide[])[]): Polyline {
  const lengths = [wide(0)];
  for (let n = 1; n < vertices.length; n++) {
    const squares = vertices[n].map((end, axis) => {
      const step = subtract(end, vertices[n - 1][axis]);
      return multiply(step, step);
    });
    const length = squareRoot(add(add(squares[0], squares[1]), squares[2]));
    lengths.push(add(lengths[n - 1], length));
  }
  return {vertices, lengths};
}

export function packPath(path: Path, unit: Unit): PackedPath {
  const positions = path.vertices.map(([x, y, z]) => {
    const out = position();
    convert(unit, x, y, z, out);
    return out;
  });
  const converted = polyline(positions.map(p => [wide(p.x), wide(p.y), wide(p.z)]));
  const isExact = positions.every(p => p.radius === 0);
  const exact = isExact
    ? converted
    : polyline(
        positions.map(p => [
          add(wide(p.x), wide(p.xRemainder)),
          add(wide(p.y), wide(p.yRemainder)),
          add(wide(p.z), wide(p.zRemainder)),
        ]),
      );
  return {kind: 'path', converted, exact, samples: path.samples};
}

function sampleOf(line: Polyline, index: number, samples: number): readonly Wide[] {
  const {vertices, lengths} = line;
  if (index === 0) return vertices[0];
  if (index === samples - 1) return vertices[vertices.length - 1];
  const total = lengths[lengths.length - 1];
  const along = divide(multiply(total, wide(index)), wide(samples - 1));
  let low = 0;
  let high = lengths.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (subtract(along, lengths[middle]).upper >= 0) low = middle;
    else high = middle;
  }
  const fraction = divide(subtract(along, lengths[low]), subtract(lengths[low + 1], lengths[low]));
  return vertices[low].map((start, axis) =>
    add(start, multiply(fraction, subtract(vertices[low + 1][axis], start))),
  );
}

/** Where sample `index` lies. */
export function pathSample(path: PackedPath, index: number, out: Position): void {
  const converted = sampleOf(path.converted, index, path.samples);
  out.x = converted[0].upper;
  out.y = converted[1].upper;
  out.z = converted[2].upper;
  const exact =
    path.exact === path.converted ? converted : sampleOf(path.exact, index, path.samples);
  out.xRemainder = exact[0].upper - out.x + exact[0].lower;
  out.yRemainder = exact[1].upper - out.y + exact[1].lower;
  out.zRemainder = exact[2].upper - out.z + exact[2].lower;
  // The remainder is known here; a quarter more covers its own rounding.
  out.radius = 2.5 * norm(out.xRemainder, out.yRemainder, out.zRemainder);
}
