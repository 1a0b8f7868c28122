import {createHash} from 'node:crypto';

import {unitOf, type Unit} from '../../shared/units.ts';
import {symbolOf, type Columns, type FilledRequest} from './filled-request.ts';
import type {Forms} from './forms.ts';
import type {Memory} from './memory.ts';
import {packPlacement, UNPLACED, type PackedPlacement} from './placement.ts';
import {conversionRemainder, convert, place, position} from './positions.ts';
import {chargeColumns, TINY_CHARGE, type ChargeColumns} from './sources/charge-columns.ts';

/** The charges of an assembly in SI, bodies placed, one after the other. */
export interface PackedAssembly {
  readonly charges: ChargeColumns;
  /** Body b holds the charges starts[b] … starts[b + 1] − 1. */
  readonly starts: readonly number[];
  readonly placements: readonly PackedPlacement[];
  /** Of each body that is kept: its digest, and its charges as given, in SI. */
  readonly digests: readonly (string | undefined)[];
  readonly unplaced: readonly (ChargeColumns | undefined)[];
}

/** Bodies of so many charges are kept when they are packed, so that the next call need not. */
const KEPT_CHARGES = 1000;

/** @param forms where packed bodies are kept; without, nothing is */
export function packAssembly(
  request: FilledRequest,
  memory: Memory,
  forms?: Forms,
): PackedAssembly {
  const units = unitsOf(request);
  const {length} = units;
  const placements = request.bodies.map(body => packPlacement(body.placement, length));
  const starts = [0];
  for (const body of request.bodies) {
    starts.push(starts[starts.length - 1] + body.charges.x.length);
  }
  const charges = chargeColumns(starts[starts.length - 1], memory);
  const extremes = {largestRadius: 0, hasTiny: false};
  const digests: (string | undefined)[] = [];
  const unplaced: (ChargeColumns | undefined)[] = [];
  request.bodies.forEach((body, index) => {
    const isKept = forms && body.charges.x.length >= KEPT_CHARGES;
    const digest = isKept ? digestOfBody(body.charges, request) : undefined;
    const packed =
      digest === undefined
        ? undefined
        : forms?.get(`columns:${digest}`, arena => packBody(body.charges, units, arena.memory));
    digests.push(digest);
    unplaced.push(packed);
    const placement = placements[index];
    if (packed) placeColumns(charges, starts[index], packed, units, placement, extremes);
    else fill(charges, starts[index], body.charges, units, placement, extremes);
  });
  return {charges: {...charges, ...extremes}, starts, placements, digests, unplaced};
}

interface PackingUnits {
  readonly length: Unit;
  readonly charge: Unit;
}

const unitsOf = (request: FilledRequest): PackingUnits => ({
  length: unitOf('length', symbolOf(request, 'length')),
  charge: unitOf('charge', symbolOf(request, 'charge')),
});

/** Of the columns as given and their units: all that packing depends on. */
function digestOfBody({x, y, z, charge}: Columns, request: FilledRequest): string {
  const hash = createHash('sha256');
  hash.update(`${symbolOf(request, 'length')} ${symbolOf(request, 'charge')}`);
  for (const column of [x, y, z, charge]) hash.update(Float64Array.from(column));
  return hash.digest('hex');
}

/** A body as it was given, in SI. */
function packBody(columns: Columns, units: PackingUnits, memory: Memory): ChargeColumns {
  const charges = chargeColumns(columns.x.length, memory);
  const extremes = {largestRadius: 0, hasTiny: false};
  fill(charges, 0, columns, units, UNPLACED, extremes);
  return {...charges, ...extremes};
}

/** Charges that are in the common frame already: the probes of a force request. */
export function packProbes(request: FilledRequest, memory: Memory): ChargeColumns | undefined {
  if (!request.probes) return undefined;
  return packBody(request.probes, unitsOf(request), memory);
}

function fill(
  out: ChargeColumns,
  start: number,
  columns: Columns,
  {length, charge}: PackingUnits,
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

/** Puts a packed body where it is placed: what `fill` does, from where it has converted. */
function placeColumns(
  out: ChargeColumns,
  start: number,
  body: ChargeColumns,
  {length}: PackingUnits,
  {rotation, shift, isIdentity}: PackedPlacement,
  extremes: {largestRadius: number; hasTiny: boolean},
): void {
  out.q.set(body.q, start);
  out.qRemainder.set(body.qRemainder, start);
  if (body.hasTiny) extremes.hasTiny = true;
  if (isIdentity) {
    for (const name of POSITIONS) out[name].set(body[name], start);
    extremes.largestRadius = Math.max(extremes.largestRadius, body.largestRadius);
    return;
  }
  const at = position();
  for (let i = 0; i < body.count; i++) {
    for (const name of POSITIONS) at[name] = body[name][i];
    place(rotation, shift, length.roundings, at);
    for (const name of POSITIONS) out[name][start + i] = at[name];
    if (at.radius > extremes.largestRadius) extremes.largestRadius = at.radius;
  }
}

const POSITIONS = ['x', 'y', 'z', 'xRemainder', 'yRemainder', 'zRemainder', 'radius'] as const;
