import {readFileSync} from 'node:fs';
import {parse} from 'yaml';

import type {OperationId, Role, Scope} from '../../shared/api.ts';

export type Method = 'get' | 'post' | 'delete';

type SecurityRequirement = Readonly<Partial<Record<'apiKey' | 'session', readonly never[]>>>;

export interface Parameter {
  readonly name: string;
  readonly in: 'query' | 'header' | 'path';
  readonly required?: boolean;
  readonly description?: string;
  readonly schema: object;
  readonly example?: string;
}

export interface OperationObject {
  readonly operationId: OperationId;
  readonly security?: readonly SecurityRequirement[];
  readonly 'x-scopes'?: readonly Scope[];
  readonly 'x-roles'?: readonly Role[];
  readonly parameters?: readonly (Parameter | {readonly $ref: string})[];
  readonly requestBody?: {
    readonly required?: boolean;
    readonly content: Readonly<
      Record<string, {readonly schema: object; readonly example?: unknown}>
    >;
  };
  readonly responses: Readonly<Record<string, object>>;
}

interface ContractDocument {
  readonly info: {readonly version: string};
  readonly paths: Readonly<Record<string, Partial<Record<Method, OperationObject>>>>;
  readonly components: {
    readonly parameters: Readonly<Record<string, Parameter>>;
    readonly schemas: Readonly<Record<string, object>>;
  };
  readonly security: readonly [SecurityRequirement];
}

/** One operation of the contract, with what applies to it resolved. */
export interface ContractOperation {
  readonly id: OperationId;
  readonly method: Method;
  /** As the contract writes it: `/console/keys/{id}`. */
  readonly path: string;
  /** Who may call: keys, people, or anybody. */
  readonly callers: 'apiKey' | 'session' | 'anybody';
  /** What the key must be allowed to do. */
  readonly scopes: readonly Scope[];
  /** What the person must be; empty for any role. */
  readonly roles: readonly Role[];
  readonly parameters: readonly Parameter[];
  readonly object: OperationObject;
}

// From server/contract and from dist/server/contract alike, the contract is found above.
function readContractText(): string {
  for (const up of ['../../openapi.yaml', '../../../openapi.yaml']) {
    try {
      return readFileSync(new URL(up, import.meta.url), 'utf8');
    } catch {
      // Not here: the compiled server is one folder deeper than its source.
    }
  }
  throw new Error('openapi.yaml was not found beside the server');
}

export const contractText = readContractText();
export const contract = parse(contractText) as ContractDocument;

export const operations: readonly ContractOperation[] = Object.entries(contract.paths).flatMap(
  ([path, methods]) =>
    (Object.entries(methods) as [Method, OperationObject][]).map(([method, object]) => ({
      id: object.operationId,
      method,
      path,
      callers: callersOf((object.security ?? contract.security)[0]),
      scopes: object['x-scopes'] ?? [],
      roles: object['x-roles'] ?? [],
      parameters: (object.parameters ?? []).map(resolveParameter),
      object,
    })),
);

function callersOf(requirement: SecurityRequirement): ContractOperation['callers'] {
  if (requirement.apiKey) return 'apiKey';
  return requirement.session ? 'session' : 'anybody';
}

function resolveParameter(parameter: Parameter | {readonly $ref: string}): Parameter {
  if (!('$ref' in parameter)) return parameter;
  const name = parameter.$ref.slice('#/components/parameters/'.length);
  return contract.components.parameters[name];
}

/** @throws RangeError if the contract has no such operation */
export function operationById(id: OperationId): ContractOperation {
  const found = operations.find(operation => operation.id === id);
  if (!found) throw new RangeError(`no operation ${id} in the contract`);
  return found;
}
