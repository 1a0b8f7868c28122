import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import type {ProblemCode} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {answerOn, openRaw, parseAnswer, sendRaw} from '../support/raw-http.ts';
import {startService, type TestService} from '../support/service.ts';

let service: TestService;
let hasty: TestService;
beforeAll(async () => {
  service = await startService();
  hasty = await startService({
    limits: {headersMilliseconds: 200, requestMilliseconds: 400},
  });
});
afterAll(() => Promise.all([service.close(), hasty.close()]));

const post = (...fields: string[]): string =>
  [
    'POST /v1/moments HTTP/1.1',
    'Host: a',
    'Content-Type: application/json',
    `Authorization: Bearer ${service.key.secret}`,
    ...fields,
    '',
    '',
  ].join('\r\n');

/** What Node's parser refuses before Express would see it, and what only looks as if it did. */
const cases: readonly (readonly [what: string, request: () => string, code: ProblemCode])[] = [
  ['no request at all', () => 'hello\r\n\r\n', 'bad-request'],
  ['TLS on the plain port', () => '\x16\x03\x01\x02\x00\x01\x00\x01\xfc\x03\x03', 'bad-request'],
  ['an unknown method', () => 'FETCH /livez HTTP/1.1\r\nHost: a\r\n\r\n', 'bad-request'],
  ['a wrong version', () => 'GET /livez HTTP/9.9\r\nHost: a\r\n\r\n', 'bad-request'],
  ['no Host', () => 'GET /livez HTTP/1.1\r\n\r\n', 'bad-request'],
  ['two Hosts', () => 'GET /livez HTTP/1.1\r\nHost: a\r\nHost: b\r\n\r\n', 'bad-request'],
  ['a space in a header name', () => 'GET /livez HTTP/1.1\r\nHost : a\r\n\r\n', 'bad-request'],
  ['a length that is no number', () => post('Content-Length: ten'), 'bad-request'],
  ['two lengths', () => post('Content-Length: 1', 'Content-Length: 2'), 'bad-request'],
  [
    'a length and chunks, as in smuggling',
    () => `${post('Content-Length: 4', 'Transfer-Encoding: chunked')}0\r\n\r\n`,
    'bad-request',
  ],
  [
    'a transfer encoding that does not end in chunked',
    () => post('Transfer-Encoding: chunked, gzip'),
    'bad-request',
  ],
  ['a chunk without a size', () => `${post('Transfer-Encoding: chunked')}zz\r\n`, 'bad-request'],
  [
    '17 kB of headers',
    () => `GET /livez HTTP/1.1\r\nHost: a\r\nX: ${'a'.repeat(17_000)}\r\n\r\n`,
    'headers-too-large',
  ],
  [
    'an address of 9 kB',
    () => `GET /v1/quota?since=${'a'.repeat(9000)} HTTP/1.1\r\nHost: a\r\n\r\n`,
    'url-too-long',
  ],
  ['a broken escape', () => 'GET /console/keys/%zz HTTP/1.1\r\nHost: a\r\n\r\n', 'bad-request'],
  ['an address that is none', () => 'GET http://[::1 HTTP/1.1\r\nHost: a\r\n\r\n', 'bad-request'],
  ['an asterisk', () => 'GET * HTTP/1.1\r\nHost: a\r\n\r\n', 'bad-request'],
  ['a tunnel', () => 'CONNECT a:443 HTTP/1.1\r\nHost: a\r\n\r\n', 'bad-request'],
];

describe.each(cases)('%s', (_what, request, code) => {
  test(`is answered ${code} as a whole problem document`, async () => {
    await expectProblem(service, await sendRaw(service.baseUrl, request()), code);
    expect((await fetch(`${service.baseUrl}/livez`)).status).toBe(200);
  });
});

test('an address of just the limit is read', async () => {
  const start = '/v1/usage?a=';
  const url = start + 'a'.repeat(8 * 1024 - start.length);
  const request = `GET ${url} HTTP/1.1\r\nHost: a\r\nAuthorization: Bearer ${service.key.secret}\r\n\r\n`;
  await expectProblem(service, await sendRaw(service.baseUrl, request), 'invalid-query');
});

test('an absolute address is read as the path in it', async () => {
  const request = 'GET http://fieldstead.example/livez HTTP/1.1\r\nHost: a\r\n\r\n';
  expect((await sendRaw(service.baseUrl, request)).status).toBe(200);
});

test('headers that do not end in time are answered 408', async () => {
  const connection = openRaw(hasty.baseUrl);
  connection.send('GET /livez HTTP/1.1\r\nHost: a\r\n');
  await expectProblem(hasty, parseAnswer(await connection.closed()), 'request-timeout');
});

test('a body that does not end in time is answered 408, once', async () => {
  const connection = openRaw(hasty.baseUrl);
  const request = post('Content-Length: 100').replace(service.key.secret, hasty.key.secret);
  connection.send(`${request}{`);
  await expectProblem(hasty, parseAnswer(await connection.closed()), 'request-timeout');
});

test('a fault of the body after the answer brings no second answer', async () => {
  const connection = openRaw(service.baseUrl);
  connection.send(post('Transfer-Encoding: chunked').replace('/v1/moments', '/v1/nothing'));
  await expectProblem(service, await answerOn(connection), 'not-found');
  connection.send('zz\r\n');
  await new Promise(done => setTimeout(done, 50));
  expect(connection.received().match(/HTTP\/1\.1/g)).toHaveLength(1);
  connection.socket.destroy();
});

test('noise after a request that is being computed is not answered before it', async () => {
  const connection = openRaw(service.baseUrl);
  const body = JSON.stringify({bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]});
  connection.send(`${post(`Content-Length: ${body.length}`)}${body}noise\r\n\r\n`);
  const text = await connection.closed();
  expect(text).toMatch(/^(HTTP\/1\.1 200 OK[^]*)?$/);
});

test('a client that leaves in the middle of its body is only noted in the log', async () => {
  const connection = openRaw(service.baseUrl);
  connection.send(`${post('Content-Length: 100', 'X-Request-Id: left-early')}{`);
  await new Promise(done => setTimeout(done, 50));
  connection.socket.destroy();
  await expect
    .poll(() => service.logLines.filter(line => line.includes('left-early')))
    .toHaveLength(1);
  const line = service.logLines.find(one => one.includes('left-early')) ?? '';
  expect(JSON.parse(line)).toMatchObject({level: 30, status: 499});
});

test('time-outs are those of the configuration, and idle connections outlive those of proxies', () => {
  const {limits} = service.deps.config;
  expect(service.server).toMatchObject({
    headersTimeout: limits.headersMilliseconds,
    requestTimeout: limits.requestMilliseconds,
    keepAliveTimeout: limits.keepAliveMilliseconds,
  });
  expect(limits.keepAliveMilliseconds).toBeGreaterThan(60_000);
});

test('an idle connection says how long it stays open', async () => {
  const response = await sendRaw(service.baseUrl, 'GET /livez HTTP/1.1\r\nHost: a\r\n\r\n');
  expect(response.headers.get('keep-alive')).toBe('timeout=75');
});
