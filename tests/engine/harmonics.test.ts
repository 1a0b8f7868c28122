import {describe, expect, test} from 'vitest';

import {gaussLegendre} from '../../server/engine/multipole/tables/gauss-legendre.ts';
import {
  byParity,
  harmonicCount,
  harmonicIndex,
  irregularHarmonics,
  regularHarmonics,
} from '../../server/engine/multipole/tables/harmonics.ts';
import {
  childToParent,
  derivativeTerms,
  multipoleToLocal,
} from '../../server/engine/multipole/tables/translations.ts';
import {randomNumbers} from './random.ts';

type Point = readonly [number, number, number];

const DEGREE = 21;

/** Points in the cube of side 2 · `reach` around the origin. */
function randomPoints(count: number, reach: number, seed: number): Point[] {
  const random = randomNumbers(seed);
  const next = (): number => reach * (2 * random() - 1);
  return Array.from({length: count}, () => [next(), next(), next()]);
}

const dot = (a: Float64Array, b: Float64Array): number =>
  a.reduce((sum, value, i) => sum + value * b[i], 0);

const length = (r: Point): number => Math.sqrt(r[0] * r[0] + r[1] * r[1] + r[2] * r[2]);

describe('solid harmonics', () => {
  // Coefficients from the constant term up. M. Abramowitz, I. A. Stegun, Handbook of Mathematical
  // Functions (1972), Table 22.9; the same in NIST DLMF, eq. 18.5.16.
  const legendre: readonly (readonly number[])[] = [
    [1],
    [0, 1],
    [-1 / 2, 0, 3 / 2],
    [0, -3 / 2, 0, 5 / 2],
    [3 / 8, 0, -30 / 8, 0, 35 / 8],
    [0, 15 / 8, 0, -70 / 8, 0, 63 / 8],
    [-5 / 16, 0, 105 / 16, 0, -315 / 16, 0, 231 / 16],
  ];

  test('are associated Legendre functions with semi-normalised cosines and sines', () => {
    for (const [x, y, z] of randomPoints(10, 1, 1)) {
      const r = length([x, y, z]);
      const cosine = z / r;
      const azimuth = Math.atan2(y, x);
      const regular = regularHarmonics(6, x, y, z);
      const irregular = irregularHarmonics(6, x, y, z);
      legendre.forEach((polynomial, l) => {
        let derivative = [...polynomial];
        let factorials = 1; // (l − m)! / (l + m)!
        for (let m = 0; m <= l; m++) {
          // NIST DLMF, eq. 14.7.8, without its phase (−1)^m.
          const value = derivative.reduceRight((sum, c) => sum * cosine + c, 0);
          const function_ = (1 - cosine * cosine) ** (m / 2) * value;
          const size = Math.sqrt((m > 0 ? 2 : 1) * factorials) * function_;
          for (const [order, turn] of [
            [m, Math.cos(m * azimuth)],
            [-m, Math.sin(m * azimuth)],
          ]) {
            if (m === 0 && turn === 0) continue;
            // Of size 1 at most; a few tens of operations of rounding error 1e-16.
            const index = harmonicIndex(l, order);
            expect(regular[index] / r ** l).toBeCloseTo(size * turn, 14);
            expect(irregular[index] * r ** (l + 1)).toBeCloseTo(size * turn, 14);
          }
          derivative = derivative.slice(1).map((c, k) => c * (k + 1));
          factorials /= (l - m) * (l + m + 1);
        }
      });
    }
  });

  test('are the spherical harmonics of degree 3 and less in real form', () => {
    // J. D. Jackson, Classical Electrodynamics, 3rd ed., §3.5, the list of Y_lm: each times
    // (−1)^m √(4π/(2l + 1)) r^l, and times √2 for m > 0; real parts for m > 0, imaginary for m < 0.
    for (const [x, y, z] of randomPoints(10, 1, 2)) {
      const r2 = x * x + y * y + z * z;
      const wanted: readonly [l: number, m: number, value: number][] = [
        [0, 0, 1],
        [1, 0, z],
        [1, 1, x],
        [1, -1, y],
        [2, 0, (3 / 2) * z * z - r2 / 2],
        [2, 1, Math.sqrt(3) * x * z],
        [2, -1, Math.sqrt(3) * y * z],
        [2, 2, (Math.sqrt(3) / 2) * (x * x - y * y)],
        [2, -2, Math.sqrt(3) * x * y],
        [3, 0, (5 / 2) * z * z * z - (3 / 2) * z * r2],
        [3, 1, Math.sqrt(3 / 8) * x * (5 * z * z - r2)],
        [3, -1, Math.sqrt(3 / 8) * y * (5 * z * z - r2)],
        [3, 2, (Math.sqrt(15) / 2) * z * (x * x - y * y)],
        [3, -2, Math.sqrt(15) * z * x * y],
        [3, 3, Math.sqrt(5 / 8) * (x * x * x - 3 * x * y * y)],
        [3, -3, Math.sqrt(5 / 8) * (3 * x * x * y - y * y * y)],
      ];
      const regular = regularHarmonics(3, x, y, z);
      expect(regular).toHaveLength(wanted.length);
      for (const [l, m, value] of wanted) {
        expect(regular[harmonicIndex(l, m)]).toBeCloseTo(value, 14);
      }
    }
  });

  test('give the inverse distance of two points', () => {
    // J. D. Jackson, Classical Electrodynamics, 3rd ed., eq. 3.70. What degrees above 21 add is less
    // than 8^−22 of it, about 1e-20; what is left is rounding.
    const r: Point = [2, -3, 2];
    const outer = irregularHarmonics(DEGREE, ...r);
    for (const a of randomPoints(20, 0.29, 3)) {
      const distance = length([r[0] - a[0], r[1] - a[1], r[2] - a[2]]);
      expect(dot(regularHarmonics(DEGREE, ...a), outer) * distance).toBeCloseTo(1, 14);
    }
  });

  test('change their signs with reflections as their parity says', () => {
    const [[x, y, z]] = randomPoints(1, 1, 4);
    const plain = regularHarmonics(DEGREE, x, y, z);
    const reflected = [
      regularHarmonics(DEGREE, -x, y, z),
      regularHarmonics(DEGREE, x, -y, z),
      regularHarmonics(DEGREE, x, y, -z),
    ];
    const classes = byParity(DEGREE);
    expect(classes.flat().sort((a, b) => a - b)).toEqual([...plain.keys()]);
    classes.forEach((own, parity) => {
      for (const index of own) {
        reflected.forEach((values, axis) => {
          const sign = (parity >> axis) & 1 ? -1 : 1;
          expect(values[index]).toBe(sign * plain[index]);
        });
      }
    });
  });
});

describe('derivative terms', () => {
  /** ∂/∂x, ∂/∂y and ∂/∂z of all harmonics at a point. */
  function gradients(p: number, at: Point): Float64Array[] {
    const values = regularHarmonics(p, ...at);
    const out = [0, 1, 2].map(() => new Float64Array(harmonicCount(p)));
    for (const {axis, from, to, factor} of derivativeTerms(p)) {
      out[axis][from] += factor * values[to];
    }
    return out;
  }

  test('are those of the closed forms', () => {
    // Derivatives of Jackson's list, above.
    for (const [x, y, z] of randomPoints(10, 1, 5)) {
      const [dx, dy, dz] = gradients(3, [x, y, z]);
      const wanted: readonly [l: number, m: number, gradient: Point][] = [
        [0, 0, [0, 0, 0]],
        [1, 0, [0, 0, 1]],
        [1, 1, [1, 0, 0]],
        [1, -1, [0, 1, 0]],
        [2, 0, [-x, -y, 2 * z]],
        [2, 1, [Math.sqrt(3) * z, 0, Math.sqrt(3) * x]],
        [2, -1, [0, Math.sqrt(3) * z, Math.sqrt(3) * y]],
        [2, 2, [Math.sqrt(3) * x, -Math.sqrt(3) * y, 0]],
        [2, -2, [Math.sqrt(3) * y, Math.sqrt(3) * x, 0]],
        [3, 0, [-3 * x * z, -3 * y * z, 3 * z * z - (3 / 2) * (x * x + y * y)]],
        [
          3,
          1,
          [
            Math.sqrt(3 / 8) * (4 * z * z - 3 * x * x - y * y),
            -Math.sqrt(3 / 2) * x * y,
            Math.sqrt(24) * x * z,
          ],
        ],
        [3, -2, [Math.sqrt(15) * y * z, Math.sqrt(15) * x * z, Math.sqrt(15) * x * y]],
        [3, 3, [Math.sqrt(45 / 8) * (x * x - y * y), -Math.sqrt(45 / 2) * x * y, 0]],
      ];
      for (const [l, m, gradient] of wanted) {
        const index = harmonicIndex(l, m);
        expect(dx[index]).toBeCloseTo(gradient[0], 14);
        expect(dy[index]).toBeCloseTo(gradient[1], 14);
        expect(dz[index]).toBeCloseTo(gradient[2], 14);
      }
    }
  });

  test('give the gradient of the inverse distance in all degrees', () => {
    // ∇ₐ 1/|r − a| = (r − a)/|r − a|³; degrees above 21 add about 22 · 4^−22, less than 2e-12.
    const r: Point = [1, -1.5, 1];
    const outer = irregularHarmonics(DEGREE, ...r);
    for (const a of randomPoints(20, 0.29, 6)) {
      const d = r.map((value, axis) => value - a[axis]);
      const cube = length([d[0], d[1], d[2]]) ** 3;
      gradients(DEGREE, a).forEach((gradient, axis) => {
        expect(Math.abs(dot(gradient, outer) - d[axis] / cube)).toBeLessThan(2e-12);
      });
    }
  });
});

describe('translations', () => {
  test('of multipoles to a far box give the irregular harmonics there', () => {
    // ι_j(s + x) = Σ T_ij ρ_i(x). The terms fall as (|x|/|s|)^k (k + l)!/(k! l!): for l ≤ 6 those of
    // degree 22 and more come to less than 1e-13 of the largest.
    const p = DEGREE;
    const n = harmonicCount(p);
    const tested = harmonicCount(6);
    const shifts: readonly Point[] = [
      [2, 0, 0],
      [0, -2, 1],
      [3, 2, -1],
      [-3, 5, 4],
    ];
    for (const shift of shifts) {
      const matrix = multipoleToLocal(p, shift);
      for (const x of randomPoints(5, 0.08, 7)) {
        const inner = regularHarmonics(p, ...x);
        const wanted = irregularHarmonics(6, shift[0] + x[0], shift[1] + x[1], shift[2] + x[2]);
        for (let j = 0; j < tested; j++) {
          let sum = 0;
          for (let i = 0; i < n; i++) sum += matrix[n * i + j] * inner[i];
          const degree = Math.floor(Math.sqrt(j));
          const scale = length(shift) ** (degree + 1);
          expect(Math.abs(sum - wanted[j]) * scale).toBeLessThan(1e-12);
        }
      }
    }
  });

  test('of multipoles to a far box give its potential at once for both', () => {
    // 1/|s + x − y| = Σ ρ_i(x) T_ij ρ_j(y), |x| + |y| < |s|/7: degrees above 21 add 7^−22, nothing
    // in double precision.
    const n = harmonicCount(DEGREE);
    const shift: Point = [2, 1, -3];
    const matrix = multipoleToLocal(DEGREE, shift);
    const sources = randomPoints(10, 0.15, 8);
    randomPoints(10, 0.15, 9).forEach((x, k) => {
      const y = sources[k];
      const target = regularHarmonics(DEGREE, ...x);
      const source = regularHarmonics(DEGREE, ...y);
      let sum = 0;
      for (let i = 0; i < n; i++) {
        sum += target[i] * dot(matrix.subarray(n * i, n * (i + 1)), source);
      }
      const d = shift.map((value, axis) => value + x[axis] - y[axis]);
      expect(Math.abs(sum * length([d[0], d[1], d[2]]) - 1)).toBeLessThan(1e-12);
    });
  });

  test('of a child to its parent are exact', () => {
    // ρ_i(u/2 + s) = Σ X_ij ρ_j(u), a polynomial on both sides.
    const n = harmonicCount(DEGREE);
    const shifts: readonly Point[] = [
      [0.25, 0.25, 0.25],
      [-0.25, 0.25, -0.25],
    ];
    for (const shift of shifts) {
      const matrix = childToParent(DEGREE, shift);
      for (const u of randomPoints(5, 0.5, 10)) {
        const own = regularHarmonics(DEGREE, ...u);
        const wanted = regularHarmonics(
          DEGREE,
          u[0] / 2 + shift[0],
          u[1] / 2 + shift[1],
          u[2] / 2 + shift[2],
        );
        for (let i = 0; i < n; i++) {
          const sum = dot(matrix.subarray(n * i, n * (i + 1)), own);
          // Of the size of r^l for r in the corner of the parent.
          const scale = 0.75 ** (Math.floor(Math.sqrt(i)) / 2);
          expect(Math.abs(sum - wanted[i]) / scale).toBeLessThan(1e-12);
        }
      }
    }
  });
});

describe('Gauss–Legendre quadrature', () => {
  // Positive nodes and their weights: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions
  // (1972), Table 25.4, digits as printed.
  const printed: Readonly<Record<number, readonly (readonly [string, string])[]>> = {
    2: [['.577350269189626', '1.000000000000000']],
    3: [
      ['.000000000000000', '.888888888888889'],
      ['.774596669241483', '.555555555555556'],
    ],
    4: [
      ['.339981043584856', '.652145154862546'],
      ['.861136311594053', '.347854845137454'],
    ],
    5: [
      ['.000000000000000', '.568888888888889'],
      ['.538469310105683', '.478628670499366'],
      ['.906179845938664', '.236926885056189'],
    ],
    8: [
      ['.183434642495650', '.362683783378362'],
      ['.525532409916329', '.313706645877887'],
      ['.796666477413627', '.222381034453374'],
      ['.960289856497536', '.101228536290376'],
    ],
    10: [
      ['.148874338981631', '.295524224714753'],
      ['.433395394129247', '.269266719309996'],
      ['.679409568299024', '.219086362515982'],
      ['.865063366688985', '.149451349150581'],
      ['.973906528517172', '.066671344308688'],
    ],
    20: [
      ['.076526521133497333755', '.152753387130725850698'],
      ['.227785851141645078080', '.149172986472603746788'],
      ['.373706088715419560673', '.142096109318382051329'],
      ['.510867001950827098004', '.131688638449176626898'],
      ['.636053680726515025453', '.118194531961518417312'],
      ['.746331906460150792614', '.101930119817240435037'],
      ['.839116971822218823395', '.083276741576704748725'],
      ['.912234428251325905868', '.062672048334109063570'],
      ['.963971927277913791268', '.040601429800386941331'],
      ['.993128599185094924786', '.017614007139152118312'],
    ],
  };

  test.each(Object.keys(printed).map(Number))('of %i nodes agrees with the table', count => {
    const {nodes, weights} = gaussLegendre(count);
    expect(nodes).toHaveLength(count);
    printed[count].forEach(([node, weight], k) => {
      const index = Math.ceil(count / 2) - 1 - k;
      const mirrored = count - 1 - index;
      // Half a unit of the last printed digit, and a few roundings of numbers up to 1.
      const tolerance = 0.5 * 10 ** -(node.length - 1) + 4 * Number.EPSILON;
      expect(Math.abs(nodes[index] - Number(node))).toBeLessThanOrEqual(tolerance);
      expect(Math.abs(nodes[mirrored] + Number(node))).toBeLessThanOrEqual(tolerance);
      expect(Math.abs(weights[index] - Number(weight))).toBeLessThanOrEqual(tolerance);
      expect(Math.abs(weights[mirrored] - Number(weight))).toBeLessThanOrEqual(tolerance);
    });
  });
});
