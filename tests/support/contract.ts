import {Ajv2020} from 'ajv/dist/2020.js';
import formats from 'ajv-formats';

import {contract, operations, type ContractOperation} from '../../server/contract/document.ts';
import {absoluteReferences} from '../../server/contract/validate.ts';
import type {OperationId} from '../../shared/api.ts';

const ajv = new Ajv2020({strict: false, allErrors: true});
formats.default(ajv);
ajv.addSchema({$id: 'contract', components: contract.components});

/** What of `value` breaks the schema, a line a fault; empty if nothing does. */
export function faultsOf(schema: object, value: unknown): string[] {
  const check = ajv.compile(absoluteReferences(schema));
  if (check(value)) return [];
  return (check.errors ?? []).map(({instancePath, message}) => `${instancePath} ${message ?? ''}`);
}

export const problemSchema = {$ref: '#/components/schemas/Problem'};

interface Media {
  readonly schema: object;
  readonly example?: unknown;
}

/** One answer of an operation as the contract describes it, with nothing left to look up. */
export interface DescribedAnswer {
  readonly headers: Readonly<Record<string, {readonly schema: object}>>;
  readonly content: Readonly<Record<string, Media>>;
}

interface WrittenAnswer {
  readonly $ref?: string;
  readonly headers?: Readonly<Record<string, {readonly $ref?: string; readonly schema?: object}>>;
  readonly content?: Readonly<Record<string, Media>>;
}

/** The answer that the contract declares for a status, or null if it declares none. */
export function describedAnswer(id: OperationId, status: number): DescribedAnswer | null {
  const operation = operations.find(one => one.id === id);
  const written = operation?.object.responses[String(status)] as WrittenAnswer | undefined;
  if (!written) return null;
  const answer = written.$ref ? (lookUp(written.$ref) as WrittenAnswer) : written;
  const headers = Object.entries(answer.headers ?? {}).map(([name, header]) => [
    name,
    header.$ref ? lookUp(header.$ref) : header,
  ]);
  return {
    headers: Object.fromEntries(headers) as DescribedAnswer['headers'],
    content: answer.content ?? {},
  };
}

/** What `#/components/…` points at. */
export function lookUp(reference: string): object {
  let place: unknown = contract;
  for (const step of reference.slice('#/'.length).split('/')) {
    place = (place as Record<string, unknown>)[step];
  }
  if (typeof place !== 'object' || place === null) throw new RangeError(`nothing at ${reference}`);
  return place;
}

/** The operations whose path fits that of an address. */
export function operationsAt(pathname: string): ContractOperation[] {
  return operations.filter(({path}) =>
    new RegExp(`^${path.replaceAll(/\{\w+\}/g, '[^/]+')}$`).test(pathname),
  );
}
