import {unitOf} from '../../shared/units.ts';
import {answerHeader, type AnswerHeader} from './answers/header.ts';
import {totalOf} from './compensated-sum.ts';
import {symbolOf, type FilledRequest} from './filled-request.ts';
import type {Forms} from './forms.ts';
import {FIELD_COLUMNS, FORCE_STRIDE, type FieldColumn, type FieldJob, type Job} from './jobs.ts';
import {PAIR_WEIGHT} from './limits.ts';
import type {Memory} from './memory.ts';
import type {BoundKind, SumKind} from './methods/direct-sum.ts';
import {packAssembly, packProbes, type PackedAssembly} from './pack-charges.ts';
import {packMoments} from './pack-moments.ts';
import {packMultipole} from './pack-multipole.ts';
import type {Plan} from './plan.ts';
import {convert, position} from './positions.ts';
import {packTargets} from './targets.ts';

/** A request ready to be computed by any thread: the border between contract and kernels. */
export interface PackedCall {
  readonly header: AnswerHeader;
  readonly job: Job;
}

/** Evaluations up to which bounds are made of the rounding errors themselves, above of worst cases. */
const PAIRS_WITH_ERRORS = 5e7;

/** Evaluations that make a block: some 20 ms, so that calls share the threads and stop soon. */
const PER_BLOCK: Record<BoundKind, number> = {none: 8e6, errors: 6e5, magnitudes: 2.5e6};
const TARGETS_PER_BLOCK = 16_384;

/** @param forms where packed bodies are kept */
export function pack(plan: Plan, memory: Memory, forms?: Forms): PackedCall {
  switch (plan.operation) {
    case 'potentials':
    case 'fields':
      return packFields(plan, memory, forms);
    case 'forces':
      return packForces(plan, memory, forms);
    case 'moments':
      return packMoments(plan, memory);
  }
}

/** @param evaluations of a charge at a target */
export function boundKind(hasBounds: boolean, evaluations: number): BoundKind {
  if (!hasBounds) return 'none';
  return evaluations <= PAIRS_WITH_ERRORS ? 'errors' : 'magnitudes';
}

function results(length: number, memory: Memory): Pick<FieldJob, 'out' | 'outAddress'> {
  const out = memory(length);
  return {out, outAddress: memory.addressOf(out)};
}

/** How many targets make a block: from the size of the call, never from the number of threads. */
function targetsPerBlock(sources: number, sum: SumKind, bounds: BoundKind): number {
  const targets = Math.floor(PER_BLOCK[bounds] / PAIR_WEIGHT[sum] / sources);
  return Math.max(1, Math.min(TARGETS_PER_BLOCK, targets));
}

/** Appends the starts of the blocks of `from` … `to` − 1. */
function appendBlocks(blocks: number[], from: number, to: number, size: number): void {
  for (let start = from; start < to; start += size) blocks.push(start);
}

function packFields(plan: Plan, memory: Memory, forms?: Forms): PackedCall {
  const {request, sources, targets: count} = plan;
  const assembly = packAssembly(request, memory, forms);
  const length = unitOf('length', symbolOf(request, 'length'));
  if (!request.targets) throw new RangeError('expected targets');
  const columns = fieldColumns(request);
  const bounds = boundKind(request.accuracy?.bounds === true, plan.sources * count);
  const blocks: number[] = [];
  appendBlocks(blocks, 0, count, targetsPerBlock(sources, sumKind(request), bounds));
  blocks.push(count);
  const field: FieldJob = {
    kind: 'field',
    charges: assembly.charges,
    starts: assembly.starts,
    targets: packTargets(request.targets, length, memory),
    count,
    sum: sumKind(request),
    bounds,
    columns,
    relativePermittivity: request.medium?.relativePermittivity ?? 1,
    symbols: {
      charge: symbolOf(request, 'charge'),
      potential: symbolOf(request, 'potential'),
      field: symbolOf(request, 'field'),
      fieldGradient: symbolOf(request, 'fieldGradient'),
    },
    coincidenceDistance: length.toSI(request.coincidenceDistance ?? 0),
    onCoincidence: request.onCoincidence ?? 'mask',
    blocks,
    ...results(columns.length * count, memory),
    ...(request.accuracy?.tolerance !== undefined && {tolerance: request.accuracy.tolerance}),
  };
  return {
    header: answerHeader(plan, assembly.placements),
    job: plan.method === 'multipole' ? packMultipole(plan, field, assembly, memory) : field,
  };
}

export function sumKind({quantities = []}: FilledRequest): SumKind {
  if (quantities.includes('fieldGradient')) return 'fieldGradient';
  return quantities.includes('field') || quantities.includes('magnitude') ? 'field' : 'potential';
}

function fieldColumns({quantities = [], accuracy}: FilledRequest): FieldColumn[] {
  const asked = {
    potential: quantities.includes('potential'),
    field: quantities.includes('field'),
    magnitude: quantities.includes('magnitude'),
    gradient: quantities.includes('fieldGradient'),
    bounds: accuracy?.bounds === true,
  };
  const isAnswered = (column: FieldColumn): boolean => {
    switch (column) {
      case 'potential':
        return asked.potential;
      case 'fieldX':
      case 'fieldY':
      case 'fieldZ':
        return asked.field;
      case 'fieldMagnitude':
        return asked.magnitude;
      case 'potentialBound':
        return asked.bounds && asked.potential;
      case 'fieldBound':
        return asked.bounds && (asked.field || asked.magnitude);
      case 'fieldGradientBound':
        return asked.bounds && asked.gradient;
      default:
        return asked.gradient;
    }
  };
  return FIELD_COLUMNS.filter(isAnswered);
}

function packForces(plan: Plan, memory: Memory, forms?: Forms): PackedCall {
  const {request, sources, work, targets, hasInteractions} = plan;
  const assembly = packAssembly(request, memory, forms);
  const probes = packProbes(request, memory);
  const include = request.include ?? [];
  const hasBounds = request.accuracy?.bounds === true;
  const bounds = boundKind(hasBounds, work);
  const size = targetsPerBlock(sources, 'field', bounds);
  const blocks: number[] = [];
  for (let b = 0; b + 1 < assembly.starts.length; b++) {
    appendBlocks(blocks, assembly.starts[b], assembly.starts[b + 1], size);
  }
  appendBlocks(blocks, sources, targets, size);
  blocks.push(targets);
  return {
    header: answerHeader(plan, assembly.placements),
    job: {
      kind: 'force',
      charges: assembly.charges,
      ...(probes && {probes}),
      starts: assembly.starts,
      hasBounds,
      bounds,
      hasInternalEnergy: include.includes('internalEnergy'),
      hasInteractions,
      hasCharges: include.includes('charges'),
      relativePermittivity: request.medium?.relativePermittivity ?? 1,
      symbols: {
        length: symbolOf(request, 'length'),
        charge: symbolOf(request, 'charge'),
        force: symbolOf(request, 'force'),
        torque: symbolOf(request, 'torque'),
        energy: symbolOf(request, 'energy'),
      },
      ...momentArms(request, assembly),
      totalCharges: request.bodies.map(body => totalOf(body.charges.charge)),
      blocks,
      ...results(FORCE_STRIDE * targets, memory),
    },
  };
}

/** The point that each body's torque is about, [m] and in the request's unit. */
function momentArms(
  request: FilledRequest,
  {placements}: PackedAssembly,
): {about: number[][]; aboutAsGiven: number[][]} {
  const length = unitOf('length', symbolOf(request, 'length'));
  const about: number[][] = [];
  const aboutAsGiven: number[][] = [];
  request.bodies.forEach(({placement}, index) => {
    const {matrix, translate} = placement ?? {};
    const origin = matrix ? [matrix[3], matrix[7], matrix[11]] : (translate ?? [0, 0, 0]);
    const {shift} = placements[index];
    const given = request.about;
    const at = position();
    if (given) convert(length, given[0], given[1], given[2], at);
    about.push(given ? [at.x, at.y, at.z] : [shift.x, shift.y, shift.z]);
    aboutAsGiven.push([...(given ?? origin)]);
  });
  return {about, aboutAsGiven};
}
