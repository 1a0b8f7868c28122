import {describe, expect, test} from 'vitest';

import {contract, operations} from '../../server/contract/document.ts';
import {lookUp} from '../support/contract.ts';

interface Schema {
  readonly $ref?: string;
  readonly type?: string | readonly string[];
  readonly description?: string;
  readonly enum?: readonly unknown[];
  readonly const?: unknown;
  readonly format?: string;
  readonly properties?: Readonly<Record<string, Schema>>;
  readonly additionalProperties?: unknown;
  readonly items?: Schema;
  readonly anyOf?: readonly Schema[];
  readonly [keyword: string]: unknown;
}

const isOf = (schema: Schema, type: string): boolean => [schema.type].flat().includes(type);
const isNumeric = (schema: Schema): boolean => isOf(schema, 'number') || isOf(schema, 'integer');

/** Calls `visit` for a schema and for all that it is made of. */
function walk(
  schema: Schema,
  place: string,
  visit: (schema: Schema, place: string) => void,
  seen = new Set<string>(),
): void {
  if (schema.$ref) {
    if (seen.has(schema.$ref)) return;
    seen.add(schema.$ref);
    walk(lookUp(schema.$ref) as Schema, schema.$ref.split('/').at(-1) ?? '', visit, seen);
    return;
  }
  visit(schema, place);
  for (const [name, property] of Object.entries(schema.properties ?? {})) {
    walk(property, `${place}.${name}`, visit, seen);
  }
  if (schema.items) walk(schema.items, `${place}[]`, visit, seen);
  schema.anyOf?.forEach((one, index) => walk(one, `${place}|${index}`, visit, seen));
}

/** The places of all schemas of a root that do not fit. */
function placesWhere(
  roots: readonly (readonly [string, Schema])[],
  isWrong: (schema: Schema) => boolean,
): string[] {
  const places = new Set<string>();
  for (const [place, schema] of roots) {
    walk(schema, place, (found, at) => {
      if (isWrong(found)) places.add(at);
    });
  }
  return [...places];
}

const everything = Object.entries(contract.components.schemas) as [string, Schema][];
const requests = operations.flatMap(({id, object, parameters}) => [
  ...Object.values(object.requestBody?.content ?? {}).map(
    ({schema}) => [id, schema as Schema] as const,
  ),
  ...parameters.map(({name, schema}) => [`${id} ${name}`, schema as Schema] as const),
]);

test('the walk reaches every part of a request, down to the numbers of a matrix', () => {
  const places = placesWhere(requests, () => true);
  expect(places).toEqual(
    expect.arrayContaining(['Placement.matrix[]', 'Grid.counts[]', 'Vector3[]']),
  );
});

test('every number says its unit first in its description', () => {
  // A unit of a request, such as [length unit], or a fixed one, such as [s] or [1].
  const wrong = (schema: Schema): boolean =>
    isNumeric(schema) && !/^\[[^\]]+\] ?/.test(schema.description ?? '');
  expect(placesWhere(everything, wrong)).toEqual([]);
});

describe('of a request', () => {
  test('every array has a greatest length', () => {
    expect(
      placesWhere(requests, one => isOf(one, 'array') && one['maxItems'] === undefined),
    ).toEqual([]);
  });

  test('every text has a greatest length or is one of a list', () => {
    const wrong = (schema: Schema): boolean =>
      isOf(schema, 'string') &&
      schema['maxLength'] === undefined &&
      schema.enum === undefined &&
      schema.const === undefined;
    expect(placesWhere(requests, wrong)).toEqual([]);
  });

  test('every number has a least and a greatest value', () => {
    const wrong = (schema: Schema): boolean =>
      isNumeric(schema) && (schema['minimum'] === undefined || schema['maximum'] === undefined);
    expect(placesWhere(requests, wrong)).toEqual([]);
  });
});

test('every object is closed to members that are not named', () => {
  const wrong = (schema: Schema): boolean =>
    isOf(schema, 'object') && schema.additionalProperties !== false;
  expect(placesWhere(everything, wrong)).toEqual([]);
});

test('every array of an answer has a greatest length', () => {
  expect(
    placesWhere(everything, one => isOf(one, 'array') && one['maxItems'] === undefined),
  ).toEqual([]);
});

test('what has a default is not required', () => {
  const wrong = (schema: Schema): boolean => {
    const required = (schema['required'] ?? []) as string[];
    return required.some(name => schema.properties?.[name]?.['default'] !== undefined);
  };
  expect(placesWhere(requests, wrong)).toEqual([]);
});
