import type {EchoedUnits, Operation} from '../../../shared/api.ts';
import {CONSTANTS_EDITION} from '../../../shared/physical-constants.ts';
import {unitOf} from '../../../shared/units.ts';
import {dimensionsOf, symbolOf, type FilledRequest} from '../filled-request.ts';
import type {EstimatedError} from '../multipole/multipole-job.ts';
import type {PackedPlacement} from '../placement.ts';
import type {Method, Plan} from '../plan.ts';
import {inputDigest} from './digests.ts';
import {notices} from './notices.ts';

/** Changes whenever the same request may give other bits. */
export const ENGINE_VERSION = '0.2.0';

/** What an answer says besides its numbers; plain data, so that a thread can write the answer. */
export interface AnswerHeader {
  readonly operation: Operation;
  readonly bodyIds: readonly string[];
  readonly units: EchoedUnits;
  /** In the request's length unit. */
  readonly coincidenceDistance: number;
  readonly placements: readonly {readonly body: string; readonly matrix: readonly number[]}[];
  readonly pairs: number;
  readonly inputDigest: string;
  /** Which member of `targets` the request has, for pointers. */
  readonly targets: 'points' | 'grid' | 'path' | 'none';
}

/** How long a call waited and took [ms], and what it found prepared. */
export interface Timing {
  readonly queuedMilliseconds: number;
  readonly computedMilliseconds: number;
  readonly preparation?: Preparation;
}

/** Prepared forms that were kept, and that had to be made. */
export interface Preparation {
  readonly hits: number;
  readonly misses: number;
}

/** How the numbers of an answer were obtained. */
export interface AccuracyFacts {
  readonly method: Method;
  readonly tolerance?: number;
  readonly estimated?: EstimatedError;
  /** Where rounding alone may exceed the tolerance: what direct sums are within. */
  readonly reached?: number;
}

export function answerHeader(plan: Plan, placements: readonly PackedPlacement[]): AnswerHeader {
  const {operation, request, pairs} = plan;
  const {points, grid, path} = request.targets ?? {};
  return {
    operation,
    bodyIds: request.bodies.map(body => body.id),
    units: echoedUnits(operation, request),
    coincidenceDistance: request.coincidenceDistance ?? 0,
    placements: request.bodies.flatMap(({id}, index) => {
      const matrix = placements[index].usedMatrix;
      return matrix ? [{body: id, matrix}] : [];
    }),
    pairs,
    inputDigest: inputDigest(request),
    targets: points ? 'points' : grid ? 'grid' : path ? 'path' : 'none',
  };
}

function echoedUnits(operation: Operation, request: FilledRequest): EchoedUnits {
  const length = symbolOf(request, 'length');
  const charge = symbolOf(request, 'charge');
  const echoed: Record<string, string> = {length, charge};
  for (const dimension of dimensionsOf(operation, request.quantities ?? [])) {
    echoed[dimension] = symbolOf(request, dimension);
  }
  if (operation === 'moments') {
    echoed['dipole'] = `${charge}·${length}`;
    echoed['quadrupole'] = `${charge}·${length}²`;
  }
  return echoed as unknown as EchoedUnits;
}

/** [length unit] The larger of what was asked for and what rounding asks for. */
export function usedCoincidenceDistance(header: AnswerHeader, reach: number): number {
  const unit = unitOf('length', header.units.length);
  const asked = header.coincidenceDistance;
  return reach > unit.toSI(asked) ? unit.fromSI(reach) : asked;
}

const toMicroseconds = (milliseconds: number): number => Math.round(milliseconds * 1000) / 1000;

const ENGINE = JSON.stringify({version: ENGINE_VERSION, constants: CONSTANTS_EDITION});
const NOTICES = JSON.stringify(notices);

/** The members that all answers end with, from a comma to the closing brace. */
export function answerTail(
  header: AnswerHeader,
  coincidenceDistance: number,
  resultDigest: string,
  timing: Timing,
  facts: AccuracyFacts = {method: 'direct'},
): string {
  const {method, ...rest} = facts;
  const accuracy = JSON.stringify({method, coincidenceDistance, ...rest});
  const placements =
    header.placements.length > 0 ? `,"placements":${JSON.stringify(header.placements)}` : '';
  const cost = JSON.stringify({
    pairs: header.pairs,
    queuedMilliseconds: toMicroseconds(timing.queuedMilliseconds),
    computedMilliseconds: toMicroseconds(timing.computedMilliseconds),
    ...(timing.preparation && {preparation: timing.preparation}),
  });
  const digests = `"inputDigest":"${header.inputDigest}","resultDigest":"${resultDigest}"`;
  return `,"accuracy":${accuracy}${placements},"cost":${cost},"engine":${ENGINE},${digests},"notices":${NOTICES}}`;
}
