import type {Body, Placement} from '../../../shared/api';
import {cross, dot, length, plus, times, type Vector} from './vector';

export interface PlacedCharge {
  readonly at: Vector;
  readonly charge: number;
  readonly body: string;
  /** Index of the charge in its body. */
  readonly index: number;
}

/** p′ = R p + t: rotation first, about the body's own origin, by the right-hand rule. */
function transform({translate, rotate, matrix}: Placement): (point: Vector) => Vector {
  if (matrix) {
    return point =>
      [0, 4, 8].map(
        row => dot([matrix[row], matrix[row + 1], matrix[row + 2]], point) + matrix[row + 3],
      ) as unknown as Vector;
  }
  const shift: Vector = translate ?? [0, 0, 0];
  if (!rotate) return point => plus(point, shift);
  const axis = times(rotate.axis, 1 / length(rotate.axis));
  const angle = (rotate.degrees * Math.PI) / 180;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  // Rodrigues' formula.
  return point =>
    plus(
      plus(
        plus(times(point, cos), times(cross(axis, point), sin)),
        times(axis, dot(axis, point) * (1 - cos)),
      ),
      shift,
    );
}

/** Every charge of the request where its body's placement puts it, in the request's length unit. */
export function placedCharges(bodies: readonly Body[]): PlacedCharge[] {
  return bodies.flatMap((body, position) => {
    const place = transform(body.placement ?? {});
    const {x, y, z, charge} = body.charges;
    return charge.map((q, index) => ({
      at: place([x[index], y[index], z[index]]),
      charge: q,
      body: body.id ?? `body-${position}`,
      index,
    }));
  });
}
