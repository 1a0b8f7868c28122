import type {
  FieldRequest,
  ForceRequest,
  MomentRequest,
  OnCoincidence,
  Operation,
  Placement,
  PotentialRequest,
  Targets,
  Units,
} from '../../shared/api.ts';
import {siSymbols, type Dimension} from '../../shared/units.ts';

export type ComputeRequest = PotentialRequest | FieldRequest | ForceRequest | MomentRequest;

export type Quantity = 'potential' | 'field' | 'magnitude' | 'fieldGradient';
export type Inclusion = 'charges' | 'internalEnergy' | 'interactions';

export interface Columns {
  readonly charge: readonly number[];
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly z: readonly number[];
}

export interface FilledBody {
  readonly charges: Columns;
  readonly id: string;
  readonly placement?: Placement;
}

/**
 * A request with its defaults filled in. Members stand in the order of RFC 8785 (by code unit), at
 * every level, so that its plain JSON is its canonical form.
 */
export interface FilledRequest {
  readonly about?: readonly number[];
  readonly accuracy?: {readonly bounds: boolean; readonly tolerance?: number};
  readonly bodies: readonly FilledBody[];
  readonly coincidenceDistance?: number;
  readonly include?: readonly Inclusion[];
  readonly medium?: {readonly relativePermittivity: number};
  readonly onCoincidence?: OnCoincidence;
  readonly probes?: Columns;
  readonly quantities?: readonly Quantity[];
  readonly targets?: Targets;
  readonly units: Units;
}

/** The dimensions an answer has, besides length and charge. */
export function dimensionsOf(operation: Operation, quantities: readonly Quantity[]): Dimension[] {
  switch (operation) {
    case 'potentials':
      return ['potential'];
    case 'fields': {
      const dimensions: Dimension[] = [];
      if (quantities.includes('potential')) dimensions.push('potential');
      if (quantities.includes('field') || quantities.includes('magnitude'))
        dimensions.push('field');
      if (quantities.includes('fieldGradient')) dimensions.push('fieldGradient');
      return dimensions;
    }
    case 'forces':
      return ['force', 'torque', 'energy'];
    case 'moments':
      return [];
  }
}

const DEFAULT_QUANTITIES: Partial<Record<Operation, readonly Quantity[]>> = {
  potentials: ['potential'],
  fields: ['potential', 'field'],
};

export function filledRequest(operation: Operation, request: ComputeRequest): FilledRequest {
  // What a request may hold depends on the operation; the contract has checked that.
  const given = request as PotentialRequest & FieldRequest & ForceRequest & MomentRequest;
  const hasTargets = operation === 'potentials' || operation === 'fields';
  const quantities = hasTargets ? (given.quantities ?? DEFAULT_QUANTITIES[operation]) : undefined;
  const about = operation === 'moments' ? (given.about ?? [0, 0, 0]) : given.about;
  const include = operation === 'forces' ? (given.include ?? []) : undefined;
  return {
    ...(about && {about}),
    ...(operation !== 'moments' && {accuracy: accuracy(given.accuracy)}),
    bodies: given.bodies.map((body, index) => ({
      charges: columns(body.charges),
      id: body.id ?? `body-${index}`,
      ...(body.placement && {placement: placement(body.placement)}),
    })),
    ...(hasTargets && {coincidenceDistance: given.coincidenceDistance ?? 0}),
    ...(include && {include}),
    ...(operation !== 'moments' && {
      medium: {relativePermittivity: given.medium?.relativePermittivity ?? 1},
    }),
    ...(hasTargets && {onCoincidence: given.onCoincidence ?? 'mask'}),
    ...(given.probes && {probes: columns(given.probes)}),
    ...(quantities && {quantities}),
    ...(hasTargets && {targets: targets(given.targets)}),
    units: filledUnits(given.units, dimensionsOf(operation, quantities ?? [])),
  };
}

const accuracy = ({
  bounds = false,
  tolerance,
}: NonNullable<FieldRequest['accuracy']> = {}): FilledRequest['accuracy'] => ({
  bounds,
  ...(tolerance !== undefined && {tolerance}),
});

const columns = ({charge, x, y, z}: Columns): Columns => ({charge, x, y, z});

function placement({matrix, rotate, translate}: Placement): Placement {
  return {
    ...(matrix && {matrix}),
    ...(rotate && {rotate: {axis: rotate.axis, degrees: rotate.degrees}}),
    ...(translate && {translate}),
  };
}

function targets({grid, path, points}: Targets): Targets {
  return {
    ...(grid && {grid: {counts: grid.counts, origin: grid.origin, steps: grid.steps}}),
    ...(path && {path: {samples: path.samples, vertices: path.vertices}}),
    ...(points && {points: {x: points.x, y: points.y, z: points.z}}),
  };
}

const DIMENSIONS = [
  'charge',
  'energy',
  'field',
  'fieldGradient',
  'force',
  'length',
  'potential',
  'torque',
] as const satisfies readonly Dimension[];

/** The units named, and SI for those that the answer needs and nobody named. */
function filledUnits(given: Units | undefined, needed: readonly Dimension[]): Units {
  const filled: Record<string, string> = {};
  for (const dimension of DIMENSIONS) {
    const isNeeded = dimension === 'length' || dimension === 'charge' || needed.includes(dimension);
    const symbol = given?.[dimension] ?? (isNeeded ? siSymbols[dimension] : undefined);
    if (symbol !== undefined) filled[dimension] = symbol;
  }
  return filled;
}

/** The symbol that a filled request uses for a dimension. */
export function symbolOf(request: FilledRequest, dimension: Dimension): string {
  const named = request.units as Readonly<Record<string, string | undefined>>;
  return named[dimension] ?? siSymbols[dimension];
}
