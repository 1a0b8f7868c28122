import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import {contract} from '../../server/contract/document.ts';
import {internalError, problemOf, problemType} from '../../server/http/problem.ts';
import {ServiceError} from '../../server/errors.ts';
import type {ProblemCode} from '../../shared/api.ts';
import {problemCatalogue} from '../../shared/problem-catalogue.ts';
import {faultsOf, problemSchema} from '../support/contract.ts';
import {startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

const {enum: codes} = contract.components.schemas['ProblemCode'] as {enum: ProblemCode[]};

test('the codes of the contract are those of the catalogue, in one order', () => {
  expect(Object.keys(problemCatalogue)).toEqual(codes);
});

describe.each(codes)('%s', code => {
  const {status, title, meaning, remedy} = problemCatalogue[code];

  test('has a page that says what happened and what to do', async () => {
    const response = await fetch(`${service.baseUrl}/problems/${code}`);
    expect(response.status).toBe(200);
    const page = await response.text();
    for (const text of [title, meaning, remedy, String(status), code]) expect(page).toContain(text);
    expect(meaning.length).toBeGreaterThan(20);
    expect(remedy.length).toBeGreaterThan(10);
  });

  test('makes a document that fits the contract', () => {
    const problem = problemOf(
      new ServiceError(code, 'What was given.'),
      'https://a.example',
      'req_1',
    );
    expect(faultsOf(problemSchema, problem)).toEqual([]);
    expect(problem.type).toBe(problemType('https://a.example', code));
    expect(problem.status).toBe(status);
    expect(status).toBeGreaterThanOrEqual(400);
  });
});

test('a fault of our own says nothing but that nothing was charged', () => {
  expect(internalError().message).toBe('Nothing was charged.');
});

test('an unknown code leads to no page', async () => {
  for (const name of ['nothing', 'constructor', '__proto__', 'toString']) {
    expect((await fetch(`${service.baseUrl}/problems/${name}`)).status).toBe(404);
  }
});
