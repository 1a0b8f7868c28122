import {add, divide, multiply, squareRoot, subtract, wide, type Wide} from './exact.ts';

/**
 * A rotation matrix, row-major, as doubles and what is missing from them to the exact rotation.
 *
 * Angles go through our own sine and cosine, to 32 digits: Math.sin may differ between platforms,
 * and the error bounds need to know what rounding took away.
 */
export interface Rotation {
  readonly matrix: readonly number[];
  readonly remainder: readonly number[];
  /** Whether it is a signed permutation of the axes, which rounds nothing. */
  readonly isExact: boolean;
}

const ZERO = wide(0);
const ONE = wide(1);

// π/180 to 32 digits: 0.017453292519943295769236907684886…
const RADIANS_PER_DEGREE = wide(0.017453292519943295, 2.9486522708701687e-19);

/** The Taylor series from x^start/start! on, every second term, with alternating sign. */
function series(angle: Wide, start: 0 | 1): Wide {
  const square = multiply(angle, angle);
  let term = start === 0 ? ONE : angle;
  let sum = term;
  // |x| ≤ π/4: the term of x^29 is below 1e-33.
  for (let n = start + 2; n <= 29; n += 2) {
    term = divide(multiply(term, square), wide(-n * (n - 1)));
    sum = add(sum, term);
  }
  return sum;
}

/** Cosine and sine of an angle in degrees; exact at multiples of 90°. */
export function cosineAndSine(degrees: number): {cosine: Wide; sine: Wide} {
  const turned = degrees % 360;
  const quarters = Math.round(turned / 90);
  const rest = turned - 90 * quarters; // exact: both are multiples of the same unit in the last place
  const angle = multiply(wide(rest), RADIANS_PER_DEGREE);
  const cosine = rest === 0 ? ONE : series(angle, 0);
  const sine = rest === 0 ? ZERO : series(angle, 1);
  switch (((quarters % 4) + 4) % 4) {
    case 0:
      return {cosine, sine};
    case 1:
      return {cosine: subtract(ZERO, sine), sine: cosine};
    case 2:
      return {cosine: subtract(ZERO, cosine), sine: subtract(ZERO, sine)};
    default:
      return {cosine: sine, sine: subtract(ZERO, cosine)};
  }
}

/**
 * The rotation by `degrees` about `axis`, by the right-hand rule:
 *
 *     R = cos θ · 1 + sin θ · [k]× + (1 − cos θ) · k kᵀ       k = axis / |axis|
 *
 * O. Rodrigues, J. Math. Pures Appl. 5 (1840); H. Goldstein, Classical Mechanics, §4.7.
 *
 * @param axis not zero; only its direction counts
 */
export function rotationAbout(axis: readonly number[], degrees: number): Rotation {
  // A power of two leaves the direction as it is and keeps the squares in range.
  const largest = Math.max(...axis.map(Math.abs));
  const scale = 2 ** -Math.floor(Math.log2(largest));
  const k = axis.map(component => wide(component * scale));
  const {cosine, sine} = cosineAndSine(degrees);
  const squares = k.map(component => multiply(component, component));
  const square = add(add(squares[0], squares[1]), squares[2]);
  const length = squareRoot(square);
  const rest = subtract(ONE, cosine);
  const cross = k.map(component => divide(multiply(sine, component), length));

  const exact: Wide[] = [];
  for (let row = 0; row < 3; row++) {
    for (let column = 0; column < 3; column++) {
      const outer = divide(multiply(rest, multiply(k[row], k[column])), square);
      if (row === column) exact.push(add(cosine, outer));
      else if ((row + 1) % 3 === column) exact.push(subtract(outer, cross[3 - row - column]));
      else exact.push(add(outer, cross[3 - row - column]));
    }
  }
  return rotationOf(exact);
}

function rotationOf(exact: readonly Wide[]): Rotation {
  // −0 would survive a product and show up as a sign in the answer.
  const matrix = exact.map(each => each.upper + 0);
  const remainder = exact.map(each => each.lower);
  const isExact =
    matrix.every(each => each === 0 || Math.abs(each) === 1) && remainder.every(each => each === 0);
  return {matrix, remainder, isExact};
}

/** Takes nine numbers, row-major, as the rotation itself. */
export const rotationGiven = (matrix: readonly number[]): Rotation =>
  rotationOf(matrix.map(each => wide(each)));

/** Largest entry of |RᵀR − 1|, and the determinant. */
export function departure(matrix: readonly number[]): {orthogonality: number; determinant: number} {
  const [a, b, c, d, e, f, g, h, i] = matrix;
  const dots = [
    a * a + d * d + g * g - 1,
    b * b + e * e + h * h - 1,
    c * c + f * f + i * i - 1,
    a * b + d * e + g * h,
    a * c + d * f + g * i,
    b * c + e * f + h * i,
  ];
  const orthogonality = Math.max(...dots.map(Math.abs));
  const determinant = a * (e * i - f * h) - b * (d * i - f * g) + c * (d * h - e * g);
  return {orthogonality, determinant};
}

/**
 * The nearest rotation to a matrix that is nearly one, by Newton's iteration for the polar
 * decomposition, R ← R (3 − RᵀR) / 2. From 1e-6 it is at rounding after two steps.
 *
 * N. J. Higham, Functions of Matrices, SIAM 2008, §8.3.
 */
export function orthonormalised(matrix: readonly number[]): number[] {
  let current = [...matrix];
  for (let step = 0; step < 4 && departure(current).orthogonality > 4e-16; step++) {
    const product = (row: number, column: number): number => {
      let sum = 0;
      for (let k = 0; k < 3; k++) {
        let dot = 0;
        for (let n = 0; n < 3; n++) dot += current[3 * n + k] * current[3 * n + column];
        sum += current[3 * row + k] * ((k === column ? 3 : 0) - dot);
      }
      return sum / 2;
    };
    current = current.map((_, index) => product(Math.floor(index / 3), index % 3));
  }
  return current;
}
