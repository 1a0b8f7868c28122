import {create, createUnitDependencies, unitDependencies} from 'mathjs';
import {expect, test} from 'vitest';

import {units, unitOf, siSymbols, type Dimension} from '../../shared/units.ts';
import {record} from '../reference/records.ts';
import {compute} from './compute.ts';
import {fixed, size, toNumber} from './fixed-point.ts';

const {unit} = create({unitDependencies, createUnitDependencies});

/** Our symbols in the spelling of mathjs, whose table is the outside source; µ and Å it calls u and angstrom. */
function inMathjs(symbol: string): string {
  return symbol
    .replace(/[\u00b5\u03bc]/g, 'u')
    .replace(/[\u00c5\u212b]/g, 'angstrom')
    .replaceAll('·', ' ')
    .replaceAll('*', ' ')
    .replaceAll('²', '^2');
}

/** e, eV and u are measured or defined, and those of mathjs are CODATA 2018: they have checks of their own. */
const OWN = ['e', 'eV', 'keV', 'u'];

const dimensions = Object.keys(units) as Dimension[];

for (const dimension of dimensions) {
  test(`the units of ${dimension} have the factors of mathjs`, () => {
    const si = unit(inMathjs(siSymbols[dimension]));
    for (const [symbol, ours] of units[dimension]) {
      if (OWN.includes(symbol)) continue;
      const factor = unit(1, inMathjs(symbol)).toNumber(si.formatUnits());
      // mathjs multiplies its factors in double precision, three of them at most.
      expect(Math.abs(ours.toSI(1) - factor), symbol).toBeLessThanOrEqual(4 * 2 ** -53 * factor);
    }
  });
}

test('charge, energy and mass of the atomic scale are those of the SI and of CODATA 2022', () => {
  // The SI defines e = 1.602 176 634e-19 C (BIPM, SI Brochure, 9th ed., 2019); an electronvolt is e × 1 V.
  expect(unitOf('charge', 'e').toSI(1)).toBe(1.602176634e-19);
  expect(unitOf('energy', 'eV').toSI(1)).toBe(1.602176634e-19);
  expect(unitOf('energy', 'keV').toSI(1)).toBe(1.602176634e-16);
  // CODATA 2022: 1.660 539 068 92(52)e-27 kg (scipy 1.17.1, text of the NIST table).
  expect(unitOf('mass', 'u').toSI(1)).toBe(1.66053906892e-27);
  // Record CON-012 holds e against the debye.
  expect(record('CON-012').unit).toBe('D');
});

/** Whether `found` is `value` × numerator ÷ denominator, rounded correctly `roundings` times. */
function isRounded(
  found: number,
  value: number,
  [numerator, denominator]: readonly [bigint, bigint],
  roundings: number,
): boolean {
  const error = fixed(found) * denominator - fixed(value) * numerator;
  // u = 2⁻⁵³ of the result a rounding; a little for the products of several.
  return (
    toNumber(size(error)) <=
    roundings * 2 ** -53 * 1.0001 * toNumber(fixed(Math.abs(value)) * numerator)
  );
}

const VALUES = [0.1, 0.7, 1.1, 12.3, 1 / 3, 6.02214076e23];

test('powers of ten are one correctly rounded operation, in and out', () => {
  for (const dimension of dimensions) {
    for (const [symbol, {factor, power, toSI, fromSI}] of units[dimension]) {
      if (factor !== 1) continue;
      const ratio = [
        10n ** BigInt(Math.max(0, -power)),
        10n ** BigInt(Math.max(0, power)),
      ] as const;
      for (const value of VALUES) {
        expect(isRounded(toSI(value), value, ratio, 1), `${value} ${symbol}`).toBe(true);
        const back = [ratio[1], ratio[0]] as const;
        expect(isRounded(fromSI(value), value, back, 1), `${value} in ${symbol}`).toBe(true);
      }
    }
  }
});

test('inches and feet are their exact ratio, rounded twice at most', () => {
  // 1 in = 25.4 mm and 1 ft = 12 in exactly (international yard and pound agreement, 1959).
  for (const [symbol, ratio] of [
    ['in', [254n, 10_000n]],
    ['ft', [3048n, 10_000n]],
  ] as const) {
    const {toSI, fromSI, roundings} = unitOf('length', symbol);
    expect(roundings).toBe(2);
    for (const value of VALUES) {
      expect(isRounded(toSI(value), value, ratio, 2)).toBe(true);
      expect(isRounded(fromSI(value), value, [ratio[1], ratio[0]], 2)).toBe(true);
    }
  }
});

test('both code points of µ and of Å are taken', () => {
  expect(unitOf('length', '\u00b5m').toSI(3)).toBe(unitOf('length', '\u03bcm').toSI(3));
  expect(unitOf('length', '\u00c5').toSI(3)).toBe(unitOf('length', '\u212b').toSI(3));
  expect(unitOf('length', '\u00c5').toSI(3)).toBe(unitOf('length', 'angstrom').toSI(3));
});

test('an unknown symbol is no unit', () => {
  expect(() => unitOf('length', 'furlong')).toThrow(RangeError);
  expect(() => unitOf('length', 'constructor')).toThrow(RangeError);
});

test('a request in mm and nC and the same one converted to m and C give the same bits', () => {
  const numbers = [0.1, -17.3, 1000.001, 12, 7.7e-3, 1 / 3];
  const body = (length: (v: number) => number, charge: (v: number) => number) => ({
    bodies: [
      {
        charges: {
          x: numbers.map(length),
          y: [...numbers].reverse().map(length),
          z: numbers.map(v => length(v / 7)),
          charge: numbers.map(charge),
        },
        placement: {
          translate: [length(3.3), length(-0.1), length(7)] as [number, number, number],
          rotate: {axis: [1, 2, 3] as [number, number, number], degrees: 33.3},
        },
      },
    ],
    accuracy: {bounds: true},
    quantities: ['potential', 'field', 'magnitude', 'fieldGradient'] as const,
  });
  const keep = (v: number): number => v;
  const metres = (v: number): number => v / 1e3;
  const coulombs = (v: number): number => v / 1e9;
  const at = (length: (v: number) => number) => ({
    points: {x: [2.1, 33].map(length), y: [0.3, -1].map(length), z: [-5.7, 1e4].map(length)},
  });
  const grid = (length: (v: number) => number) => ({
    grid: {
      origin: [0.1, 0.2, 0.3].map(length) as [number, number, number],
      steps: [[0.1, 0, 0].map(length), [0, 0.3, 0].map(length), [0, 0, 0.7].map(length)] as [
        [number, number, number],
        [number, number, number],
        [number, number, number],
      ],
      counts: [3, 2, 2] as [number, number, number],
    },
  });
  const path = (length: (v: number) => number) => ({
    path: {
      vertices: [
        [0.1, 0.2, 0.3],
        [7.7, 0, 1],
        [3.3, -3, 8],
      ].map(vertex => vertex.map(length) as [number, number, number]),
      samples: 17,
    },
  });
  for (const targets of [at, grid, path]) {
    const small = compute('fields', {
      ...body(keep, keep),
      targets: targets(keep),
      units: {length: 'mm', charge: 'nC'},
    });
    const large = compute('fields', {...body(metres, coulombs), targets: targets(metres)});
    for (const name of [
      'potential',
      'fieldX',
      'fieldZ',
      'fieldMagnitude',
      'fieldGradientXY',
    ] as const) {
      expect(small.answer.columns[name]).toEqual(large.answer.columns[name]);
    }
  }
});
