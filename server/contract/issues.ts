import type {ErrorObject} from 'ajv/dist/2020.js';

import type {ProblemCode} from '../../shared/api.ts';
import type {Issue} from '../errors.ts';

/** Says a fault that Ajv found the way the service words it: what was given, what was expected. */
export function toIssue(fault: ErrorObject, prefix: string): Issue {
  const params = fault.params as Record<string, unknown>;
  const at = prefix + fault.instancePath;
  switch (fault.keyword) {
    case 'type':
      return typeFault(fault, at);
    case 'required':
      return {
        pointer: at,
        code: 'missing-member',
        detail: `The member "${String(params['missingProperty'])}" is missing.`,
      };
    case 'additionalProperties': {
      const name = String(params['additionalProperty']);
      const known = Object.keys((fault.parentSchema as {properties?: object}).properties ?? {});
      return {
        pointer: `${at}/${escape(name)}`,
        code: 'unknown-member',
        detail: `Unknown member ${show(name)}. Known are ${known.join(', ')}.`,
      };
    }
    case 'enum':
      return enumFault(fault, at);
    case 'const':
      return {
        pointer: at,
        code: 'invalid-value',
        detail: `Given ${show(fault.data)}; expected ${show(params['allowedValue'])}.`,
      };
    case 'minimum':
    case 'maximum':
    case 'exclusiveMinimum':
    case 'exclusiveMaximum':
      if (!Number.isFinite(fault.data)) return overflow(at);
      return {
        pointer: at,
        code: 'out-of-range',
        detail: `Given ${show(fault.data)}; expected a number ${String(params['comparison'])} ${String(params['limit'])}.`,
      };
    case 'minItems':
    case 'maxItems':
      return {
        pointer: at,
        code: 'out-of-range',
        detail: `Given ${(fault.data as unknown[]).length} items; expected ${fault.keyword === 'minItems' ? 'at least' : 'at most'} ${String(params['limit'])}.`,
      };
    case 'minLength':
    case 'maxLength':
      return {
        pointer: at,
        code: 'out-of-range',
        detail: `Given ${String(fault.data).length} characters; expected ${fault.keyword === 'minLength' ? 'at least' : 'at most'} ${String(params['limit'])}.`,
      };
    case 'minProperties':
      return {
        pointer: at,
        code: 'missing-member',
        detail: `Expected one of ${propertyNames(fault)}.`,
      };
    case 'maxProperties':
      return {
        pointer: at,
        code: 'conflicting-members',
        detail: `Given ${Object.keys(fault.data as object).join(' and ')}; expected exactly one of ${propertyNames(fault)}.`,
      };
    case 'uniqueItems':
      return {
        pointer: at,
        code: 'invalid-value',
        detail: 'The items must differ from one another.',
      };
    default:
      return {
        pointer: at,
        code: 'invalid-value',
        detail: `Given ${show(fault.data)}; it ${fault.message ?? 'is not of the expected form'}.`,
      };
  }
}

/** 1e999 is JSON, but reads as Infinity. */
function overflow(pointer: string): Issue {
  const detail = 'The number is larger than double precision holds (about 1.8e308).';
  return {pointer, code: 'number-overflow', detail};
}

function typeFault(fault: ErrorObject, pointer: string): Issue {
  const expected = [(fault.params as {type: string | string[]}).type].flat().join(' or ');
  return {
    pointer,
    code: 'wrong-type',
    detail: `Given ${typeName(fault.data)}${show(fault.data)}; expected ${article(expected)}.`,
  };
}

function enumFault(fault: ErrorObject, pointer: string): Issue {
  const allowed = (fault.params as {allowedValues: unknown[]}).allowedValues;
  // µ and Å have two code points each; the list names them once.
  const same = new Set<string>();
  const list = allowed
    .map(String)
    .filter(one => same.size < same.add(one.normalize('NFKC')).size)
    .join(', ');
  const quantity = /^(Length|Charge|Potential|Field gradient|Field|Force|Torque|Energy) units/.exec(
    (fault.parentSchema as {description?: string}).description ?? '',
  )?.[1];
  const code: ProblemCode = quantity ? 'unknown-unit' : 'invalid-value';
  return {
    pointer,
    code,
    detail: quantity
      ? `Unknown unit ${show(fault.data)}. ${quantity} units are ${list}.`
      : `Given ${show(fault.data)}; expected one of ${list}.`,
  };
}

function propertyNames(fault: ErrorObject): string {
  return Object.keys((fault.parentSchema as {properties?: object}).properties ?? {}).join(', ');
}

function typeName(value: unknown): string {
  if (value === null) return '';
  if (Array.isArray(value)) return 'an array ';
  if (typeof value === 'string') return 'the text ';
  if (typeof value === 'object') return 'an object ';
  return `the ${typeof value} `;
}

function article(type: string): string {
  return /^(array|object|integer)/.test(type) ? `an ${type}` : `a ${type}`;
}

/** A value as JSON, cut to what fits into a sentence. */
function show(value: unknown): string {
  if (Array.isArray(value)) return `of ${value.length} items`;
  if (typeof value === 'object' && value !== null)
    return `with the members ${cut(Object.keys(value).join(', '))}`;
  return cut(JSON.stringify(value) ?? 'nothing');
}

function cut(text: string): string {
  // Control characters would break the one-line form of a detail.
  const line = text.replaceAll(/[\u0000-\u001f\u007f]/g, ' ');
  return line.length > 80 ? `${line.slice(0, 80)}…` : line;
}

/** Escapes a member name for a JSON pointer (RFC 6901 §3). */
function escape(name: string): string {
  return cut(name.replaceAll('~', '~0').replaceAll('/', '~1'));
}
