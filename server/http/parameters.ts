import type {Request} from 'express';
import {Ajv2020} from 'ajv/dist/2020.js';
import formats from 'ajv-formats';

import {absoluteReferences} from '../contract/validate.ts';
import {contract, type ContractOperation, type Parameter} from '../contract/document.ts';
import {ServiceError} from '../errors.ts';

const ajv = new Ajv2020({strict: false});
formats.default(ajv);
ajv.addSchema({$id: 'contract', components: contract.components});

interface Checked {
  readonly path: Record<string, string>;
  readonly query: Record<string, string>;
}

/** Reads the path, query and header parameters of an operation as the contract describes them. */
export function createParameterCheck(operation: ContractOperation): (req: Request) => Checked {
  const checks = operation.parameters.map(parameter => ({
    parameter,
    fits: ajv.compile(absoluteReferences(parameter.schema)),
  }));
  const inQuery = new Set(operation.parameters.filter(isIn('query')).map(({name}) => name));
  return req => {
    const query = req.url.includes('?') ? readQuery(req.url, inQuery) : {};
    const path = req.params as Record<string, string>;
    for (const {parameter, fits} of checks) {
      const value = valueOf(parameter, req, path, query);
      if (value === undefined && !parameter.required) continue;
      if (!fits(value)) throw fault(parameter, fits.errors?.[0].message ?? 'is not allowed');
    }
    return {path, query};
  };
}

const isIn = (place: Parameter['in']) => (parameter: Parameter) => parameter.in === place;

function valueOf(
  parameter: Parameter,
  req: Request,
  path: Record<string, string>,
  query: Record<string, string>,
): unknown {
  if (parameter.in === 'path') return path[parameter.name];
  if (parameter.in === 'query') return query[parameter.name];
  return req.headers[parameter.name.toLowerCase()];
}

function readQuery(url: string, known: ReadonlySet<string>): Record<string, string> {
  const query: Record<string, string> = {};
  for (const [name, value] of new URLSearchParams(url.slice(url.indexOf('?')))) {
    if (!known.has(name)) {
      const list = known.size > 0 ? `known are ${[...known].join(', ')}` : 'the operation has none';
      throw new ServiceError('invalid-query', `Unknown query parameter ${shown(name)}; ${list}.`);
    }
    if (name in query) {
      throw new ServiceError('invalid-query', `The query parameter ${name} is given twice.`);
    }
    query[name] = value;
  }
  return query;
}

function shown(name: string): string {
  return JSON.stringify(name.slice(0, 60).replaceAll(/[^\x20-\x7e]/g, '?'));
}

/** A place in the path that can not exist is not found; the rest could not be read. */
function fault(parameter: Parameter, message: string): ServiceError {
  if (parameter.in === 'path') {
    return new ServiceError(
      'not-found',
      `There is nothing at this address: ${parameter.name} ${message}.`,
    );
  }
  const code = parameter.in === 'query' ? 'invalid-query' : 'invalid-header';
  return new ServiceError(code, `${parameter.name} ${message}.`);
}
