import {Ajv2020, type ErrorObject, type ValidateFunction} from 'ajv/dist/2020.js';
import formats from 'ajv-formats';

import type {EstimateRequest, Operation, OperationId} from '../../shared/api.ts';
import {ServiceError} from '../errors.ts';
import {contract, operationById} from './document.ts';
import {toIssue} from './issues.ts';

// Ajv itself, not a middleware around it: the same check runs on the HTTP thread for small bodies
// and in the worker threads for large ones, and it costs a few microseconds a call.
//
// The first compilation stops at the first fault, which keeps the check of a valid or hostile
// column cheap; only a body that failed is looked at again, by the second, for all its faults.
const options = {strict: false, validateFormats: true, verbose: true} as const;
const firstFault = withContract(new Ajv2020({...options, allErrors: false}));
const allFaults = withContract(new Ajv2020({...options, allErrors: true}));

function withContract(ajv: Ajv2020): Ajv2020 {
  formats.default(ajv);
  return ajv.addSchema({$id: 'contract', components: contract.components});
}

const MAX_ISSUES = 20;

export const operationIds: Readonly<Record<Operation, OperationId>> = {
  potentials: 'createPotentials',
  fields: 'createFields',
  forces: 'createForces',
  moments: 'createMoments',
};

interface BodyCheck {
  readonly first: ValidateFunction;
  readonly all: ValidateFunction;
}

const checks = new Map<OperationId, BodyCheck>();

function checkOf(id: OperationId): BodyCheck {
  let check = checks.get(id);
  if (!check) {
    const schema = bodySchema(id);
    check = {first: firstFault.compile(schema), all: allFaults.compile(schema)};
    checks.set(id, check);
  }
  return check;
}

/** An estimate names the operation whose schema its request follows, so the inner one is checked apart. */
function bodySchema(id: OperationId): object {
  const schema = operationById(id).object.requestBody?.content['application/json'].schema;
  if (!schema) throw new RangeError(`operation ${id} has no body`);
  const absolute = absoluteReferences(schema);
  if (id !== 'createEstimates') return absolute;
  const estimate = contract.components.schemas['EstimateRequest'] as {properties: object};
  return absoluteReferences({
    ...estimate,
    properties: {...estimate.properties, request: {type: 'object'}},
  });
}

/** `#/components/…` made to point into the contract, wherever the schema that says it is compiled. */
export function absoluteReferences(schema: object): object {
  return JSON.parse(
    JSON.stringify(schema).replaceAll('"#/components/', '"contract#/components/'),
  ) as object;
}

/**
 * Checks a body against the schema of its operation.
 *
 * @throws ServiceError with the code of the first fault, up to 20 faults and their number
 */
export function validateRequest(id: OperationId, body: unknown): void {
  validate(checkOf(id), body, '');
  if (id === 'createEstimates') {
    const {operation, request} = body as EstimateRequest;
    validate(checkOf(operationIds[operation]), request, '/request');
  }
}

function validate(check: BodyCheck, value: unknown, prefix: string): void {
  if (check.first(value)) return;
  check.all(value);
  const faults = (check.all.errors ?? []).filter(isFault);
  const issues = faults.slice(0, MAX_ISSUES).map(fault => toIssue(fault, prefix));
  const [first] = issues;
  const more = faults.length > 1 ? ` There are ${faults.length} faults in all.` : '';
  const place = first.pointer === '' ? '' : `${first.pointer}: `;
  throw new ServiceError(first.code, `${place}${first.detail}${more}`, {
    errors: issues,
    errorCount: faults.length,
  });
}

/** Whether an error says something of its own: `anyOf`, `if` and the like only repeat others. */
function isFault({keyword}: ErrorObject): boolean {
  return keyword !== 'anyOf' && keyword !== 'oneOf' && keyword !== 'if';
}

/** Compiles the bodies of all operations, so that no first caller waits for it. */
export function compileContract(ids: readonly OperationId[]): void {
  ids.forEach(checkOf);
}
