import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import {createLink} from '../../server/accounts/sign-in-links.ts';
import {contract, operations, type ContractOperation} from '../../server/contract/document.ts';
import {describedAnswer, faultsOf} from '../support/contract.ts';
import {
  emailOf,
  PASSWORD,
  startService,
  type TestService,
  type Visitor,
} from '../support/service.ts';

let service: TestService;
let owner: Visitor;
beforeAll(async () => {
  service = await startService();
  owner = await service.signIn('owner');
});
afterAll(() => service.close());

const statuses = (operation: ContractOperation): number[] =>
  Object.keys(operation.object.responses).map(Number);
const successOf = (operation: ContractOperation): number =>
  statuses(operation).find(status => status < 300) ?? 0;
const isComputed = ({path}: ContractOperation): boolean =>
  /^\/v1\/(potentials|fields|forces|moments|estimates)$|^\/console\/requests/.test(path);
const all = operations.map(operation => ({id: operation.id, operation}));

/** Times and ids of the moment, which no example can have. */
const OF_THE_MOMENT = /^(queuedMilliseconds|computedMilliseconds|milliseconds)$/;

function lasting(value: unknown): unknown {
  return JSON.parse(
    JSON.stringify(value, (key, member: unknown) =>
      OF_THE_MOMENT.test(key) ? typeof member : member,
    ),
  );
}

/** Calls an operation with its own examples, where need be with those that exist here. */
async function callExample(operation: ContractOperation): Promise<Response> {
  const {id, method, object, parameters} = operation;
  let body = object.requestBody?.content['application/json'].example;
  let path = operation.path;
  const query = new URLSearchParams();
  const headers: Record<string, string> = {};
  for (const {name, in: place, example} of parameters) {
    expect(example, `${id} has no example for ${name}`).toBeDefined();
    if (place === 'path')
      path = path.replace(`{${name}}`, name === 'id' ? await keyId() : (example ?? ''));
    if (place === 'query') query.set(name, example ?? '');
    // That of the example belongs to another session.
    if (place === 'header' && name !== 'X-CSRF-Token') headers[name] = example ?? '';
  }
  if (id === 'createSession') body = {email: emailOf('owner'), password: PASSWORD};
  if (id === 'createPassword') {
    const link = createLink(service.deps.database, owner.session.person.id, new Date());
    body = {...(body as object), link};
  }
  if (operation.callers === 'apiKey') headers['Authorization'] = `Bearer ${service.key.secret}`;
  const caller = id === 'deleteSession' ? await service.signIn('reader') : owner;
  return caller.fetch(query.size > 0 ? `${path}?${query.toString()}` : path, {
    method: method.toUpperCase(),
    headers,
    ...(body === undefined ? {} : {body: JSON.stringify(body)}),
  });
}

const keyId = async (): Promise<string> => (await service.makeKey()).id;

describe.each(all)('$id', ({id, operation}) => {
  const {requestBody} = operation.object;
  const status = successOf(operation);
  const success = describedAnswer(id, status);

  if (requestBody) {
    test('has an example request that fits its schema', () => {
      const {schema, example} = requestBody.content['application/json'];
      expect(example).toBeDefined();
      expect(faultsOf(schema, example)).toEqual([]);
    });
  }

  test('answers its example as it says, with the headers that it says', async () => {
    const response = await callExample(operation);
    const text = await response.text();
    expect(response.status, text).toBe(status);
    const media = success?.content['application/json'];
    if (media) {
      expect(response.headers.get('content-type')).toBe('application/json');
      expect(faultsOf(media.schema, JSON.parse(text))).toEqual([]);
    } else {
      expect(text).toBe('');
    }
    for (const [name, {schema}] of Object.entries(success?.headers ?? {})) {
      const value = response.headers.get(name);
      // Only a repetition has this one.
      if (name === 'Fieldstead-Replay') expect(value).toBeNull();
      else expect(faultsOf(schema, value), `${name}: ${String(value)}`).toEqual([]);
    }
    // What is computed depends on nothing but the request.
    if (isComputed(operation)) expect(lasting(JSON.parse(text))).toEqual(lasting(media?.example));
  });

  test.each(statuses(operation))('has an example of its answer %i that fits its schema', code => {
    const answer = describedAnswer(id, code);
    for (const [type, {schema, example}] of Object.entries(answer?.content ?? {})) {
      expect(type).toBe(code < 400 ? 'application/json' : 'application/problem+json');
      expect(example, `${id} ${code}`).toBeDefined();
      expect(faultsOf(schema, example)).toEqual([]);
      if (code >= 400) expect(example).toMatchObject({status: code});
    }
  });

  test('has examples of headers and parameters that fit their schemas', () => {
    for (const {schema, example} of operation.parameters) {
      expect(faultsOf(schema, example)).toEqual([]);
    }
  });
});

const headers = contract.components as unknown as {
  headers: Record<string, {schema: object; example?: unknown}>;
};
test.each(Object.entries(headers.headers))(
  'the header %s has an example that fits its schema',
  (_name, {schema, example}) => {
    expect(example).toBeDefined();
    expect(faultsOf(schema, example)).toEqual([]);
  },
);
