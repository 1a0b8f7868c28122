import type {Placement} from '../../shared/api.ts';
import type {FilledRequest} from '../../server/engine/filled-request.ts';
import {cosineAndSine, decimal, fixed, ONE, over, PI, root, times} from './fixed-point.ts';

/**
 * The exact answers to a request in 60 digits and more, by the contract and nothing of the engine's:
 * numbers of the request as the doubles they are, exact rules of units, exact rotations, and
 * 1/(4π ε₀) with ε₀ = 8.8541878188e-12 F/m (CODATA 2022) taken as exact.
 */

/** SI = value × numerator ÷ denominator. */
const RULES: Record<string, [bigint, bigint]> = {
  m: [1n, 1n],
  cm: [1n, 100n],
  mm: [1n, 1000n],
  µm: [1n, 10n ** 6n],
  nm: [1n, 10n ** 9n],
  angstrom: [1n, 10n ** 10n],
  in: [254n, 10_000n],
  ft: [3048n, 10_000n],
  C: [1n, 1n],
  µC: [1n, 10n ** 6n],
  nC: [1n, 10n ** 9n],
  pC: [1n, 10n ** 12n],
  fC: [1n, 10n ** 15n],
  e: [1_602_176_634n, 10n ** 28n],
  V: [1n, 1n],
  mV: [1n, 1000n],
  kV: [1000n, 1n],
  'V/m': [1n, 1n],
  'kV/cm': [100_000n, 1n],
  'V/mm': [1000n, 1n],
  'V/m²': [1n, 1n],
  'V/mm²': [1_000_000n, 1n],
  N: [1n, 1n],
  µN: [1n, 10n ** 6n],
};

const rule = (symbol: string): [bigint, bigint] => {
  const found = RULES[symbol];
  if (!found) throw new RangeError(`no rule for ${symbol}`);
  return found;
};

export function toSI(value: number, symbol: string): bigint {
  const [numerator, denominator] = rule(symbol);
  return (fixed(value) * numerator) / denominator;
}

/** In `symbol`, of what is k times `sum` in SI. */
function scaled(sum: bigint, relativePermittivity: number, symbol: string): bigint {
  const [numerator, denominator] = rule(symbol);
  const value = over(times(sum, COULOMB), fixed(relativePermittivity));
  return (value * denominator) / numerator;
}

const COULOMB = over(ONE * 10n ** 22n, 4n * times(PI, decimal('88541878188')));

export type Vector = readonly [bigint, bigint, bigint];

interface Charge {
  readonly at: Vector;
  readonly q: bigint;
}

/** The charges of all bodies, placed [m, C]. */
export function exactCharges(request: FilledRequest): Charge[][] {
  const length = request.units.length ?? 'm';
  const charge = request.units.charge ?? 'C';
  return request.bodies.map(body => {
    const place = placer(body.placement, length);
    return body.charges.x.map((x, i) => ({
      at: place([
        toSI(x, length),
        toSI(body.charges.y[i], length),
        toSI(body.charges.z[i], length),
      ]),
      q: toSI(body.charges.charge[i], charge),
    }));
  });
}

/** Rodrigues' rotation of a vector: v cos θ + (k × v) sin θ + k (k · v) (1 − cos θ). */
function placer(placement: Placement | undefined, length: string): (v: Vector) => Vector {
  const matrix = placement?.matrix;
  if (matrix) {
    return v => {
      const row = (n: number): bigint =>
        [0, 1, 2].reduce((sum, k) => sum + times(fixed(matrix[4 * n + k]), v[k]), 0n) +
        toSI(matrix[4 * n + 3], length);
      return [row(0), row(1), row(2)];
    };
  }
  const shift = (placement?.translate ?? [0, 0, 0]).map(value => toSI(value, length));
  const moved = (v: readonly bigint[]): Vector => [
    v[0] + shift[0],
    v[1] + shift[1],
    v[2] + shift[2],
  ];
  if (!placement?.rotate) return moved;
  const axis = placement.rotate.axis.map(fixed);
  const norm = root(axis.reduce((sum, c) => sum + times(c, c), 0n));
  const k = axis.map(c => over(c, norm));
  const [cosine, sine] = cosineAndSine(placement.rotate.degrees);
  return v => {
    const dot = k.reduce((sum, c, n) => sum + times(c, v[n]), 0n);
    const cross = [1, 2, 0].map((a, n) => {
      const b = (n + 2) % 3;
      return times(k[a], v[b]) - times(k[b], v[a]);
    });
    return moved(
      v.map(
        (c, n) => times(c, cosine) + times(cross[n], sine) + times(times(k[n], dot), ONE - cosine),
      ),
    );
  };
}

export interface ExactField {
  readonly potential: bigint;
  readonly field: Vector;
  /** xx, xy, xz, yy, yz, zz */
  readonly gradient: readonly bigint[];
}

/** V, E and, if wanted, the gradient of E at a point [m], in the units of the request. */
export function exactField(
  request: FilledRequest,
  charges: readonly Charge[],
  target: Vector,
  hasGradient = false,
): ExactField {
  let v = 0n;
  const e = [0n, 0n, 0n];
  const g = [0n, 0n, 0n, 0n, 0n, 0n];
  for (const {at, q} of charges) {
    const d = target.map((c, n) => c - at[n]);
    const square = times(d[0], d[0]) + times(d[1], d[1]) + times(d[2], d[2]);
    const r = root(square);
    const cube = times(square, r);
    v += over(q, r);
    for (let n = 0; n < 3; n++) e[n] += (q * d[n]) / cube;
    if (!hasGradient) continue;
    const strength = over(q, cube);
    PAIRS.forEach(([i, j], n) => {
      g[n] += (i === j ? strength : 0n) - (3n * times(strength, d[i]) * d[j]) / square;
    });
  }
  const {potential = 'V', field = 'V/m', fieldGradient = 'V/m²'} = request.units;
  const permittivity = request.medium?.relativePermittivity ?? 1;
  return {
    potential: scaled(v, permittivity, potential),
    field: [
      scaled(e[0], permittivity, field),
      scaled(e[1], permittivity, field),
      scaled(e[2], permittivity, field),
    ],
    gradient: g.map(each => scaled(each, permittivity, fieldGradient)),
  };
}

const PAIRS: readonly [number, number][] = [
  [0, 0],
  [0, 1],
  [0, 2],
  [1, 1],
  [1, 2],
  [2, 2],
];

/** Force of all other bodies on `body`, in the unit of the request. */
export function exactForce(
  request: FilledRequest,
  bodies: readonly (readonly Charge[])[],
  body: number,
): Vector {
  const others = bodies.flatMap((charges, index) => (index === body ? [] : charges));
  const force = [0n, 0n, 0n];
  for (const {at, q} of bodies[body]) {
    for (const other of others) {
      const d = at.map((c, n) => c - other.at[n]);
      const square = times(d[0], d[0]) + times(d[1], d[1]) + times(d[2], d[2]);
      const cube = times(square, root(square));
      for (let n = 0; n < 3; n++) force[n] += times(q, (other.q * d[n]) / cube);
    }
  }
  const permittivity = request.medium?.relativePermittivity ?? 1;
  const unit = request.units.force ?? 'N';
  return [
    scaled(force[0], permittivity, unit),
    scaled(force[1], permittivity, unit),
    scaled(force[2], permittivity, unit),
  ];
}
