import type {Operation} from '../../shared/api.ts';
import {ServiceError} from '../errors.ts';
import {checkRequest} from './checks.ts';
import {filledRequest, type ComputeRequest, type FilledRequest} from './filled-request.ts';
import {gridCount} from './grid.ts';
import {MULTIPOLE_PAIRS_PER_POINT} from '../../shared/pricing.ts';
import {Issues} from './issues.ts';
import {directMilliseconds, multipoleMilliseconds} from './multipole/cost-model.ts';
import {
  BODIES_WITH_INTERACTIONS,
  defaultLimits,
  MINIMUM_PAIRS,
  PAIR_WEIGHT,
  type EngineLimits,
} from './limits.ts';

/** Bounds are free, but take this many times as long, and inline calls must not take long. */
const BOUND_EFFORT = 8;

/** What a request costs and where it is computed: from its shape and options alone. */
export interface Plan {
  readonly operation: Operation;
  readonly request: FilledRequest;
  /** What the call is charged. */
  readonly pairs: number;
  /** Charges evaluated at targets, with their weight; `pairs` before the minimum. */
  readonly work: number;
  /** Rows of the answer. */
  readonly rows: number;
  readonly sources: number;
  /** Where sums are evaluated: targets, or the charges and probes that feel a force. */
  readonly targets: number;
  readonly hasInteractions: boolean;
  readonly route: 'inline' | 'worker';
  readonly method: Method;
  /** Pairs that one call may sum directly. */
  readonly mostPairs: number;
}

export type Method = 'direct' | 'multipole';

/**
 * Checks what a request means, fills in its defaults and counts it.
 *
 * @param request valid by the schema of `operation`
 * @param bytes size of the request as sent
 * @param pointerPrefix where the request lies in the body, for the pointers of faults
 * @throws ServiceError for faults of the request, `too-many-rows` and `too-large-for-synchronous`
 */
export function plan(
  operation: Operation,
  request: ComputeRequest,
  bytes = 0,
  limits: EngineLimits = defaultLimits,
  pointerPrefix = '',
): Plan {
  const filled = filledRequest(operation, request);
  const issues = new Issues(pointerPrefix);
  checkRequest(filled, issues);
  issues.throwIfAny();

  const sizes = filled.bodies.map(body => body.charges.x.length);
  const sources = sizes.reduce((sum, size) => sum + size, 0);
  const probes = filled.probes?.x.length ?? 0;
  const points = filled.targets?.points?.x.length ?? 0;
  const given = sources + probes + points;
  if (given > limits.requestRows) {
    throw new ServiceError(
      'too-many-rows',
      `The request has ${given} charges, probes and points; a JSON request takes up to ${limits.requestRows}. Give regular targets as a grid or a path, or split the request.`,
    );
  }

  const direct = shapeOf(operation, filled, sizes, sources, probes);
  const method = methodFor(filled, sources, direct, limits);
  const shape =
    method === 'multipole'
      ? {...direct, work: MULTIPOLE_PAIRS_PER_POINT * (sources + direct.targets)}
      : direct;
  checkSize(filled, shape.work, shape.rows, limits);
  const pairs = Math.max(MINIMUM_PAIRS, shape.work);
  const effort = filled.accuracy?.bounds ? BOUND_EFFORT * shape.work : shape.work;
  const isInline =
    method === 'direct' &&
    Math.max(pairs, effort) <= limits.inlinePairs &&
    shape.rows <= limits.inlineRows &&
    bytes <= limits.inlineBytes;
  return {
    operation,
    request: filled,
    pairs,
    sources,
    route: isInline ? 'inline' : 'worker',
    method,
    mostPairs: limits.synchronousPairs,
    ...shape,
  };
}

/** The quicker one, where the request leaves the choice; from its shape alone. */
function methodFor(
  {accuracy, quantities = [], targets}: FilledRequest,
  sources: number,
  {work, targets: count}: Shape,
  limits: EngineLimits,
): Method {
  const tolerance = accuracy?.tolerance;
  const hasChoice =
    limits.hasMultipole &&
    targets !== undefined &&
    tolerance !== undefined &&
    !accuracy?.bounds &&
    !quantities.includes('fieldGradient');
  if (!hasChoice) return 'direct';
  const isField = quantities.includes('field') || quantities.includes('magnitude');
  const isQuicker =
    multipoleMilliseconds(sources, count, tolerance, isField) <
    directMilliseconds(sources, count, isField);
  return isQuicker || work > limits.synchronousPairs ? 'multipole' : 'direct';
}

type Shape = Pick<Plan, 'work' | 'rows' | 'targets' | 'hasInteractions'>;

function shapeOf(
  operation: Operation,
  request: FilledRequest,
  sizes: readonly number[],
  sources: number,
  probes: number,
): Shape {
  const bodies = sizes.length;
  if (operation === 'moments') {
    return {work: sources, rows: bodies + 1, targets: 0, hasInteractions: false};
  }
  if (operation === 'forces') {
    const include = request.include ?? [];
    const squares = sizes.reduce((sum, size) => sum + size * size, 0);
    const internal = include.includes('internalEnergy') ? squares - sources : 0;
    const hasInteractions = bodies <= BODIES_WITH_INTERACTIONS || include.includes('interactions');
    return {
      work: sources * sources - squares + internal + sources * probes,
      rows:
        bodies +
        (hasInteractions ? (bodies * (bodies - 1)) / 2 : 0) +
        (include.includes('charges') ? sources : 0) +
        probes,
      targets: sources + probes,
      hasInteractions,
    };
  }
  const targets = targetCount(request);
  const weight = request.quantities?.includes('fieldGradient')
    ? PAIR_WEIGHT.fieldGradient
    : PAIR_WEIGHT.field;
  return {work: weight * sources * targets, rows: targets, targets, hasInteractions: false};
}

function targetCount({targets}: FilledRequest): number {
  if (targets?.grid) return gridCount(targets.grid.counts);
  return targets?.path?.samples ?? targets?.points?.x.length ?? 0;
}

function checkSize(
  {accuracy, targets}: FilledRequest,
  work: number,
  rows: number,
  limits: EngineLimits,
): void {
  if (work > limits.synchronousPairs) {
    const isOpen = targets && limits.hasMultipole && accuracy?.tolerance === undefined;
    const hint = isOpen ? 'state accuracy.tolerance, which costs large sums far less, or ' : '';
    throw new ServiceError(
      'too-large-for-synchronous',
      `The call takes ${work} pairs and one call computes up to ${limits.synchronousPairs}; ${hint}split the targets over several calls.`,
    );
  }
  if (rows > limits.answerRows) {
    throw new ServiceError(
      'too-large-for-synchronous',
      `The answer would have ${rows} rows and a JSON answer has up to ${limits.answerRows}; split the targets over several calls.`,
    );
  }
}
