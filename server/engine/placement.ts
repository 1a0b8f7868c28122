import type {Placement} from '../../shared/api.ts';
import type {Unit} from '../../shared/units.ts';
import {linearPart} from './checks.ts';
import {convert, position, type Position} from './positions.ts';
import {orthonormalised, rotationAbout, rotationGiven, type Rotation} from './rotation.ts';

/** p′ = R p + t, rotation first, about the body's own origin. */
export interface PackedPlacement {
  readonly rotation: Rotation;
  /** t [m], and so the placed origin of the body */
  readonly shift: Position;
  /** Whether nothing moves. */
  readonly isIdentity: boolean;
  /** The 4 × 4 matrix used, row-major, t in the request's length unit; for bodies that gave one. */
  readonly usedMatrix?: readonly number[];
}

const UNTURNED = rotationGiven([1, 0, 0, 0, 1, 0, 0, 0, 1]);

export function packPlacement(placement: Placement | undefined, unit: Unit): PackedPlacement {
  const shift = position();
  const {matrix, rotate, translate} = placement ?? {};
  if (matrix) {
    const linear = orthonormalised(linearPart(matrix));
    const [tx, ty, tz] = [matrix[3], matrix[7], matrix[11]];
    convert(unit, tx, ty, tz, shift);
    const [a, b, c, d, e, f, g, h, i] = linear;
    return {
      rotation: rotationGiven(linear),
      shift,
      isIdentity: false,
      usedMatrix: [a, b, c, tx, d, e, f, ty, g, h, i, tz, 0, 0, 0, 1],
    };
  }
  if (translate) convert(unit, translate[0], translate[1], translate[2], shift);
  const rotation = rotate ? rotationAbout(rotate.axis, rotate.degrees) : UNTURNED;
  return {rotation, shift, isIdentity: !rotate && !translate};
}

/** Where nothing moves. */
export const UNPLACED: PackedPlacement = {
  rotation: UNTURNED,
  shift: position(),
  isIdentity: true,
};
