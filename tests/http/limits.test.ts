import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import {operations} from '../../server/contract/document.ts';
import type {FieldAnswer, Operation, Quota, Scope} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {startService, type TestService} from '../support/service.ts';
import {parseList} from '../support/structured-field.ts';

let clock = Date.parse('2026-12-31T23:59:00Z');
let service: TestService;
beforeAll(async () => {
  service = await startService({now: () => new Date(clock)});
});
afterAll(() => service.close());

const charges = {x: [0], y: [0], z: [0], charge: [1]};
const body = {bodies: [{charges}]};
const bearer = (secret: string): Record<string, string> => ({Authorization: `Bearer ${secret}`});
const post = (secret: string, request: object = body): Promise<Response> =>
  service.post('moments', request, bearer(secret));
/** As many pairs as a call of this many charges at one target costs. */
const costing = (pairs: number): object => {
  const zeros = new Array<number>(pairs).fill(0);
  const columns = {x: zeros.map((_zero, i) => i), y: zeros, z: zeros};
  return {bodies: [{charges: {...columns, charge: zeros}}]};
};

describe('scopes', () => {
  const SCOPES: readonly Scope[] = ['compute:run', 'usage:read'];
  const ofKeys = operations.filter(({callers}) => callers === 'apiKey');
  const cells = ofKeys.flatMap(operation =>
    SCOPES.map(scope => ({scope, id: operation.id, operation})),
  );

  test.each(cells)('$scope: $id is answered or refused as the contract says', async cell => {
    const {operation, scope} = cell;
    const key = await service.makeKey({scopes: [scope]});
    const example = operation.object.requestBody?.content['application/json'].example;
    const response = await fetch(service.baseUrl + operation.path, {
      method: operation.method.toUpperCase(),
      headers: {'Content-Type': 'application/json', ...bearer(key.secret)},
      ...(example === undefined ? {} : {body: JSON.stringify(example)}),
    });
    if (operation.scopes.every(one => one === scope)) {
      expect(response.status).toBe(200);
      return;
    }
    await expectProblem(service, response, 'insufficient-scope');
    expect(response.headers.get('www-authenticate')).toBe(
      `Bearer realm="fieldstead", error="insufficient_scope", scope="${operation.scopes.join(' ')}"`,
    );
  });
});

describe('the RateLimit fields', () => {
  test('of a success say what is left of the burst and of the month, and what it cost', async () => {
    const key = await service.makeKey({burst: 10, monthlyLimit: 5000});
    const {headers} = await post(key.secret, costing(1500));
    const month = 31 * 86_400;
    expect(parseList(headers.get('ratelimit-policy') ?? '')).toEqual([
      ['burst', {q: 10, w: 2}],
      ['month', {q: 5000, w: month, 'fst-unit': 'pair'}],
    ]);
    expect(parseList(headers.get('ratelimit') ?? '')).toEqual([
      ['burst', {a: 9, r: 9, w: 2, c: 1, t: 2}],
      ['month', {a: 3500, r: 3500, w: month, c: 1500, t: 60, 'fst-unit': 'pair'}],
    ]);
  });

  test.each(['/v1/quota', '/v1/usage'])('are on %s too', async path => {
    const {headers} = await fetch(service.baseUrl + path, {headers: bearer(service.key.secret)});
    expect(parseList(headers.get('ratelimit') ?? '').map(([name]) => name)).toEqual([
      'burst',
      'month',
    ]);
  });

  test('name no key and no account', async () => {
    const {headers} = await service.post('moments', body);
    const text = `${headers.get('ratelimit') ?? ''} ${headers.get('ratelimit-policy') ?? ''}`;
    expect(text).not.toContain(service.key.id);
    expect(text).not.toContain(service.accountId);
  });

  test('stay within the integers of structured fields, however great the allowance', async () => {
    const rich = await startService({allowance: 2 ** 53 - 1});
    const {headers} = await rich.post('moments', body);
    const [, [, {q}]] = parseList(headers.get('ratelimit-policy') ?? '');
    expect(q).toBe(999_999_999_999_999);
    await rich.close();
  });
});

test('more calls at once than the burst are refused until the window has passed', async () => {
  const key = await service.makeKey({burst: 3});
  const responses = await Promise.all([1, 2, 3, 4, 5].map(() => post(key.secret)));
  expect(responses.filter(({status}) => status === 200)).toHaveLength(3);
  for (const response of responses.filter(({status}) => status !== 200)) {
    await expectProblem(service, response, 'rate-limited');
    const wait = Number(response.headers.get('retry-after'));
    expect([2, 3]).toContain(wait);
    const [[name, burst]] = parseList(response.headers.get('ratelimit') ?? '');
    expect([name, burst]).toEqual(['burst', {a: 0, r: 0, w: 2, c: 1, t: 2}]);
    expect(parseList(response.headers.get('ratelimit-policy') ?? '')).toContainEqual([
      'burst',
      {q: 3, w: 2},
    ]);
  }
  await new Promise(done => setTimeout(done, 2050));
  expect((await post(key.secret)).status).toBe(200);
});

test('the bursts of two keys are counted apart', async () => {
  const [one, other] = [await service.makeKey({burst: 1}), await service.makeKey({burst: 1})];
  expect((await post(one.secret)).status).toBe(200);
  expect((await post(other.secret)).status).toBe(200);
});

describe('the month of a key', () => {
  test('that is used up is 429 with the time of its end, and a new month starts anew', async () => {
    const key = await service.makeKey({monthlyLimit: 2500});
    expect((await post(key.secret)).status).toBe(200);
    expect((await post(key.secret)).status).toBe(200);
    const response = await post(key.secret);
    const {detail} = await expectProblem(service, response, 'allowance-exhausted');
    expect(detail).toMatch(/1000 pairs; 500 are left until 2027-01-01T00:00:00Z/);
    expect(response.headers.get('retry-after')).toBe('60');
    const month = parseList(response.headers.get('ratelimit') ?? '').at(-1);
    expect(month).toMatchObject(['month', {a: 500, r: 500, c: 0, t: 60}]);
    clock += 60_000;
    expect((await post(key.secret)).status).toBe(200);
    clock -= 60_000;
  });

  test('that is smaller than the call is 422, used up or not', async () => {
    const key = await service.makeKey({monthlyLimit: 1000});
    const response = await post(key.secret, costing(1001));
    const {detail} = await expectProblem(service, response, 'exceeds-limit');
    expect(detail).toMatch(/1001 pairs; the whole limit of a month is 1000/);
    expect(response.headers.get('retry-after')).toBeNull();
    expect((await post(key.secret)).status).toBe(200);
    await expectProblem(service, await post(key.secret, costing(1001)), 'exceeds-limit');
    await expectProblem(service, await post(key.secret), 'allowance-exhausted');
  });

  test('does not help where the allowance of the account is used up', async () => {
    const poor = await startService({allowance: 1000});
    expect((await poor.post('moments', body)).status).toBe(200);
    await expectProblem(poor, await poor.post('moments', body), 'allowance-exhausted');
    const quota = await fetch(`${poor.baseUrl}/v1/quota`, {headers: bearer(poor.key.secret)});
    expect(((await quota.json()) as Quota).key.left).toBe(0);
    await poor.close();
  });
});

test.each(['potentials', 'fields', 'forces', 'moments'] satisfies Operation[])(
  'no call of %s costs less than a thousand pairs, and the answer says what it cost',
  async operation => {
    const targets = {points: {x: [1], y: [0], z: [0]}};
    const hasTargets = operation === 'potentials' || operation === 'fields';
    const {cost} = await service.call<FieldAnswer>(operation, {
      ...body,
      ...(hasTargets && {targets}),
    });
    expect(cost.pairs).toBe(1000);
  },
);
