import {unitOf, type Unit} from '../../shared/units.ts';
import {symbolOf, type Columns, type FilledRequest} from './filled-request.ts';
import type {Memory} from './memory.ts';
import {packPlacement, type PackedPlacement} from './placement.ts';
import {conversionRemainder, convert, place, position} from './positions.ts';
import {chargeColumns, TINY_CHARGE, type ChargeColumns} from './sources/charge-columns.ts';

/** The charges of an assembly in SI, bodies placed, one after the other. */
export interface PackedAssembly {
  readonly charges: ChargeColumns;
  /** Body b holds the charges starts[b] … starts[b + 1] − 1. */
  readonly starts: readonly number[];
  readonly placements: readonly PackedPlacement[];
}

export function packAssembly(request: FilledRequest, memory: Memory): PackedAssembly {
  const length = unitOf('length', symbolOf(request, 'length'));
  const charge = unitOf('charge', symbolOf(request, 'charge'));
  const placements = request.bodies.map(body => packPlacement(body.placement, length));
  const starts = [0];
  for (const body of request.bodies) {
    starts.push(starts[starts.length - 1] + body.charges.x.length);
  }
  const charges = chargeColumns(starts[starts.length - 1], memory);
  const extremes = {largestRadius: 0, hasTiny: false};
  request.bodies.forEach((body, index) => {
    fill(charges, starts[index], body.charges, length, charge, placements[index], extremes);
  });
  return {charges: {...charges, ...extremes}, starts, placements};
}

/** Charges that are in the common frame already: the probes of a force request. */
export function packProbes(request: FilledRequest, memory: Memory): ChargeColumns | undefined {
  if (!request.probes) return undefined;
  const length = unitOf('length', symbolOf(request, 'length'));
  const charge = unitOf('charge', symbolOf(request, 'charge'));
  const charges = chargeColumns(request.probes.x.length, memory);
  const extremes = {largestRadius: 0, hasTiny: false};
  fill(charges, 0, request.probes, length, charge, packPlacement(undefined, length), extremes);
  return {...charges, ...extremes};
}

function fill(
  out: ChargeColumns,
  start: number,
  columns: Columns,
  length: Unit,
  charge: Unit,
  placement: PackedPlacement,
  extremes: {largestRadius: number; hasTiny: boolean},
): void {
  const at = position();
  const {rotation, shift, isIdentity} = placement;
  for (let i = 0; i < columns.x.length; i++) {
    convert(length, columns.x[i], columns.y[i], columns.z[i], at);
    if (!isIdentity) place(rotation, shift, length.roundings, at);
    const j = start + i;
    const q = charge.toSI(columns.charge[i]);
    out.x[j] = at.x;
    out.y[j] = at.y;
    out.z[j] = at.z;
    out.q[j] = q;
    out.radius[j] = at.radius;
    out.xRemainder[j] = at.xRemainder;
    out.yRemainder[j] = at.yRemainder;
    out.zRemainder[j] = at.zRemainder;
    out.qRemainder[j] = conversionRemainder(charge, columns.charge[i]);
    if (at.radius > extremes.largestRadius) extremes.largestRadius = at.radius;
    if (columns.charge[i] !== 0 && Math.abs(q) < TINY_CHARGE) extremes.hasTiny = true;
  }
}
