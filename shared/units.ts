import {physicalConstants} from './physical-constants.ts';

/**
 * The closed unit lists, each unit as an exact rule:
 *
 *     SI = value × factor ÷ 10^power            (power < 0: × 10^−power)
 *
 * The power of ten is one correctly rounded operation on an exact double (mm → m is x ÷ 1e3, never
 * x × 0.001), so a caller who converts by the same rule gets the same bits. The way out is the rule
 * backwards: value = SI × 10^power ÷ factor.
 *
 * In words: prefixed units are the value divided or multiplied by their power of ten; in is
 * × 254 ÷ 1e4 and ft × 3048 ÷ 1e4; Å and angstrom ÷ 1e10; e × 1.602176634e-19; eV × 1.602176634e-19
 * and keV that × 1e3; u × 1.66053906892e-27; V/cm × 1e2.
 */
export interface Unit {
  readonly symbol: string;
  /** Multiplied by on the way in; 1 where there is only a power of ten. */
  readonly factor: number;
  /** Powers of ten divided by on the way in; |power| ≤ 22, where they are exact doubles. */
  readonly power: number;
  /** 10^|power| */
  readonly scale: number;
  /** Roundings of one conversion, the same in both directions; 0 for the SI unit itself. */
  readonly roundings: number;
  readonly toSI: (value: number) => number;
  readonly fromSI: (value: number) => number;
}

const identity = (value: number): number => value;

function unit(symbol: string, power = 0, factor = 1): Unit {
  const scale = 10 ** Math.abs(power);
  const roundings = (power === 0 ? 0 : 1) + (factor === 1 ? 0 : 1);
  if (roundings === 0) {
    return {symbol, factor, power, scale, roundings, toSI: identity, fromSI: identity};
  }
  return power >= 0
    ? {
        symbol,
        factor,
        power,
        scale,
        roundings,
        toSI: value => (value * factor) / scale,
        fromSI: value => (value * scale) / factor,
      }
    : {
        symbol,
        factor,
        power,
        scale,
        roundings,
        toSI: value => value * factor * scale,
        fromSI: value => value / scale / factor,
      };
}

/** The list of one dimension; the SI unit comes first. */
const list = (...units: Unit[]): ReadonlyMap<string, Unit> =>
  new Map(units.map(each => [each.symbol, each]));

const MICRO = ['\u00b5', '\u03bc', 'u'] as const;
const ELEMENTARY = physicalConstants.elementaryCharge.value;

/** Units by dimension and symbol; µ is taken as U+00B5 and U+03BC, Å as U+00C5 and U+212B. */
export const units = {
  length: list(
    unit('m'),
    unit('cm', 2),
    unit('mm', 3),
    ...MICRO.map(micro => unit(`${micro}m`, 6)),
    unit('nm', 9),
    unit('\u00c5', 10),
    unit('\u212b', 10),
    unit('angstrom', 10),
    unit('in', 4, 254),
    unit('ft', 4, 3048),
  ),
  charge: list(
    unit('C'),
    unit('mC', 3),
    ...MICRO.map(micro => unit(`${micro}C`, 6)),
    unit('nC', 9),
    unit('pC', 12),
    unit('fC', 15),
    unit('e', 0, ELEMENTARY),
  ),
  potential: list(unit('V'), unit('mV', 3), unit('kV', -3), unit('MV', -6)),
  field: list(
    unit('V/m'),
    unit('kV/m', -3),
    unit('V/cm', -2),
    unit('kV/cm', -5),
    unit('V/mm', -3),
    unit('kV/mm', -6),
    unit('MV/m', -6),
  ),
  fieldGradient: list(unit('V/m²'), unit('kV/m²', -3), unit('V/mm²', -6)),
  force: list(
    unit('N'),
    unit('mN', 3),
    ...MICRO.map(micro => unit(`${micro}N`, 6)),
    unit('nN', 9),
    unit('pN', 12),
  ),
  torque: list(
    unit('N·m'),
    unit('N*m'),
    unit('mN·m', 3),
    unit('\u00b5N·m', 6),
    unit('\u03bcN·m', 6),
  ),
  energy: list(
    unit('J'),
    unit('mJ', 3),
    ...MICRO.map(micro => unit(`${micro}J`, 6)),
    unit('nJ', 9),
    unit('eV', 0, ELEMENTARY),
    unit('keV', -3, ELEMENTARY),
  ),
  time: list(unit('s'), unit('ms', 3), ...MICRO.map(micro => unit(`${micro}s`, 6)), unit('ns', 9)),
  mass: list(
    unit('kg'),
    unit('g', 3),
    unit('mg', 6),
    ...MICRO.map(micro => unit(`${micro}g`, 9)),
    unit('u', 0, physicalConstants.atomicMassConstant.value),
  ),
} as const satisfies Record<string, ReadonlyMap<string, Unit>>;

export type Dimension = keyof typeof units;

/** The symbol of the SI unit of each dimension: what a request means that names no unit. */
export const siSymbols = Object.fromEntries(
  Object.entries(units).map(([dimension, table]) => [dimension, [...table.keys()][0]]),
) as Readonly<Record<Dimension, string>>;

/** @throws RangeError for a symbol that is not in the list */
export function unitOf(dimension: Dimension, symbol: string): Unit {
  const found = units[dimension].get(symbol);
  if (!found) throw new RangeError(`${symbol} is not a unit of ${dimension}`);
  return found;
}
