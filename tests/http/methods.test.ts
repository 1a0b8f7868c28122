import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import {operations} from '../../server/contract/document.ts';
import {expectProblem, expectSafeHeaders} from '../support/problem.ts';
import {sendRaw} from '../support/raw-http.ts';
import {startService, type TestService, type Visitor} from '../support/service.ts';

let service: TestService;
let owner: Visitor;
beforeAll(async () => {
  service = await startService();
  owner = await service.signIn('owner');
});
afterAll(() => service.close());

/** Sends it with every credential there is, so that nothing else is in the way. */
const send = (
  path: string,
  method: string,
  headers: Record<string, string> = {},
): Promise<Response> =>
  owner.fetch(path, {
    method,
    headers: {Authorization: `Bearer ${service.key.secret}`, ...headers},
  });

const PAGES = ['/openapi.yaml', '/docs', '/problems', '/problems/not-found'];
const paths = [...new Set(operations.map(({path}) => path))];
const methodsOf = (path: string): string[] =>
  operations.filter(one => one.path === path).map(({method}) => method.toUpperCase());
const addressOf = (path: string): string =>
  path.replace('{id}', service.key.id).replace('{operation}', 'moments');

const places = [
  ...paths.map(path => ({path, methods: methodsOf(path)})),
  ...PAGES.map(path => ({path, methods: ['GET']})),
];

describe.each(places)('$path', ({path, methods}) => {
  const allow = [...methods, ...(methods.includes('GET') ? ['HEAD'] : []), 'OPTIONS'].join(', ');

  test('answers every method that it has not with 405 and the list of those it has', async () => {
    for (const method of ['GET', 'POST', 'PUT', 'PATCH', 'DELETE', 'PROPFIND']) {
      if (methods.includes(method)) continue;
      const response = await send(addressOf(path), method);
      await expectProblem(service, response, 'method-not-allowed');
      expect(response.headers.get('allow')).toBe(allow);
    }
  });

  test('answers TRACE with 405 and sends nothing back', async () => {
    const request = `TRACE ${addressOf(path)} HTTP/1.1\r\nHost: a\r\nX-Mine: echo\r\n\r\n`;
    const response = await sendRaw(service.baseUrl, request);
    expect(response.headers.get('allow')).toBe(allow);
    const problem = await expectProblem(service, response, 'method-not-allowed');
    expect(JSON.stringify(problem)).not.toContain('echo');
  });

  test('answers OPTIONS with the same list and no word of other origins', async () => {
    const response = await send(addressOf(path), 'OPTIONS', {
      Origin: 'https://elsewhere.example',
      'Access-Control-Request-Method': 'POST',
    });
    expect(response.status).toBe(204);
    expect(response.headers.get('allow')).toBe(allow);
    expect([...response.headers.keys()].filter(name => name.startsWith('access-'))).toEqual([]);
    expectSafeHeaders(response.headers);
  });

  if (!methods.includes('GET')) return;
  test('answers HEAD as GET, without the body', async () => {
    const plain = {'Accept-Encoding': 'identity'};
    const get = await send(addressOf(path), 'GET', plain);
    const head = await send(addressOf(path), 'HEAD', plain);
    expect(head.status).toBe(200);
    expect(await head.text()).toBe('');
    // Apart from what is of the moment, or of the connection (RFC 9110 §7.6.1).
    const other =
      /^(date|x-request-id|traceparent|ratelimit|connection|keep-alive|transfer-encoding)$/;
    const lasting = ({headers}: Response): object =>
      Object.fromEntries([...headers].filter(([name]) => !other.test(name)));
    expect(lasting(head)).toEqual(lasting(get));
    expectSafeHeaders(head.headers);
  });
});

test.each(['/v1', '/v1/nothing', '/v2/potentials', '/console/keys/a/b', '/.env'])(
  '%s is not found, by any method',
  async path => {
    for (const method of ['GET', 'POST', 'DELETE', 'OPTIONS', 'HEAD']) {
      const response = await send(path, method);
      if (method === 'HEAD') expect(response.status).toBe(404);
      else await expectProblem(service, response, 'not-found');
    }
  },
);

test.each([
  '/problems/nothing',
  '/docs/package.json',
  '/docs/index.html',
  '/docs/swagger-ui.css.map',
])('%s is not found', async path => {
  await expectProblem(service, await send(path, 'GET'), 'not-found');
});

test.each(['/V1/quota', '/v1/quota/', '/v1//quota', '/v1/%71uota/'])(
  '%s is not another way to write a path of the contract',
  async path => {
    await expectProblem(service, await send(path, 'GET'), 'not-found');
  },
);

describe('Accept', () => {
  const ask = (accept: string): Promise<Response> => send('/v1/quota', 'GET', {Accept: accept});

  test.each([
    '*/*',
    'application/json',
    'application/*',
    'text/html, application/json;q=0.1',
    'application/problem+json, */*;q=0.1',
  ])('%s gets JSON', async accept => {
    const response = await ask(accept);
    expect(response.status).toBe(200);
    expect(response.headers.get('content-type')).toBe('application/json');
  });

  test.each([
    'text/csv',
    'application/vnd.apache.arrow.stream',
    'application/json;q=0',
    'nonsense',
  ])('%s is answered 406 with the forms that there are', async accept => {
    const {detail} = await expectProblem(service, await ask(accept), 'not-acceptable');
    expect(detail).toContain('application/json');
  });

  test('of a form of data gets problems as JSON all the same', async () => {
    const response = await send('/v1/nothing', 'GET', {
      Accept: 'application/vnd.apache.arrow.stream',
    });
    await expectProblem(service, response, 'not-found');
  });

  test('is looked at before anything is computed or charged', async () => {
    const before = service.deps.database.driver.prepare('SELECT count(*) FROM ledger_entry').get();
    const response = await service.post(
      'moments',
      {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]},
      {Accept: 'text/csv'},
    );
    await expectProblem(service, response, 'not-acceptable');
    const after = service.deps.database.driver.prepare('SELECT count(*) FROM ledger_entry').get();
    expect(after).toEqual(before);
  });
});

describe('Content-Type', () => {
  const body = JSON.stringify({bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]});

  test.each([
    'application/json',
    'application/json; charset=utf-8',
    'Application/JSON;charset="UTF-8"',
  ])('%s is read', async type => {
    expect((await service.post('moments', body, {'Content-Type': type})).status).toBe(200);
  });

  test.each([
    'text/plain',
    'text/json',
    'application/json; charset=utf-16',
    'application/json; charset=iso-8859-1',
    'application/problem+json',
    'application/x-www-form-urlencoded',
  ])('%s is refused with the one that is read', async type => {
    const response = await service.post('moments', body, {'Content-Type': type});
    await expectProblem(service, response, 'unsupported-media-type');
    expect(response.headers.get('accept')).toBe('application/json');
  });

  test.each(['zstd', 'compress', 'gzip, gzip', 'constructor'])(
    'Content-Encoding %s is refused with those that are read',
    async encoding => {
      const response = await service.post('moments', body, {'Content-Encoding': encoding});
      await expectProblem(service, response, 'unsupported-encoding');
      expect(response.headers.get('accept-encoding')).toBe('gzip, deflate, br');
    },
  );
});

describe('the query', () => {
  test.each([
    ['/v1/usage?from=2026-12-01', /Unknown query parameter "from"/],
    ['/v1/quota?since=2026-12-01', /the operation has none/],
    ['/v1/usage?since=2026-12-01&since=2026-12-02', /twice/],
    ['/v1/usage?since=2026-02-30', /since/],
    ['/v1/usage?since=yesterday', /since/],
    ['/v1/usage?since=2026-12-02&until=2026-12-01', /after until/],
    ['/v1/usage?since=2020-01-01&until=2026-12-01', /at most 400/],
    ['/v1/usage?__proto__=1', /Unknown query parameter "__proto__"/],
  ])('%s is refused', async (path, text) => {
    const {detail} = await expectProblem(service, await send(path, 'GET'), 'invalid-query');
    expect(detail).toMatch(text);
  });
});
