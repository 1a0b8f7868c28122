import {afterAll, beforeAll, expect, test} from 'vitest';

import {expectProblem} from '../support/problem.ts';
import {answerOn, openRaw, sendRaw} from '../support/raw-http.ts';
import {startService, type TestService} from '../support/service.ts';

const MIB = 1024 * 1024;
const SMALL = JSON.stringify({
  bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}],
});

let service: TestService;
/** Reads on for less long after a refusal. */
let impatient: TestService;
beforeAll(async () => {
  service = await startService();
  impatient = await startService({limits: {discardBytes: 2 * MIB, discardMilliseconds: 400}});
});
afterAll(() => Promise.all([service.close(), impatient.close()]));

function head(fields: Record<string, string | number>, token = service.key.secret): string {
  const all = {
    Host: 'fieldstead.example',
    Authorization: `Bearer ${token}`,
    'Content-Type': 'application/json',
    ...fields,
  };
  const lines = Object.entries(all).map(([name, value]) => `${name}: ${value}\r\n`);
  return `POST /v1/moments HTTP/1.1\r\n${lines.join('')}\r\n`;
}

const STRANGER = 'fst_000000000000_00000000000000000000000000000000000000';

test('a stranger is answered before any of the body was sent', async () => {
  const response = await sendRaw(service.baseUrl, head({'Content-Length': 8 * MIB}, STRANGER));
  await expectProblem(service, response, 'invalid-key');
});

test('a stranger who goes on sending is cut off', async () => {
  const connection = openRaw(impatient.baseUrl);
  connection.send(head({'Content-Length': 64 * MIB}, STRANGER));
  await expectProblem(impatient, await answerOn(connection), 'invalid-key');
  const sending = setInterval(() => connection.send(Buffer.alloc(64 * 1024)), 5);
  try {
    await connection.closed(3000);
  } finally {
    clearInterval(sending);
  }
  expect(connection.socket.bytesWritten).toBeLessThan(32 * MIB);
});

test('a length over the limit is refused before any of the body was sent', async () => {
  const response = await sendRaw(service.baseUrl, head({'Content-Length': 8 * MIB + 1}));
  await expectProblem(service, response, 'body-too-large');
});

test('a body that turns out over the limit is refused while it is still being sent', async () => {
  const connection = openRaw(service.baseUrl);
  connection.send(head({'Transfer-Encoding': 'chunked'}));
  const chunk = Buffer.alloc(MIB, ' ');
  for (let i = 0; i < 9; i++) {
    connection.send(`${MIB.toString(16)}\r\n`);
    connection.send(chunk);
    connection.send('\r\n');
  }
  // The last chunk, which would end the body, is never sent.
  await expectProblem(service, await answerOn(connection), 'body-too-large');
  connection.socket.destroy();
});

test('a client that only looks for an answer once it has sent everything sees the refusal', async () => {
  const connection = openRaw(service.baseUrl);
  connection.socket.pause();
  connection.send(head({'Content-Length': 9 * MIB}));
  for (let i = 0; i < 9; i++) {
    connection.send(Buffer.alloc(MIB, ' '));
    await new Promise(done => setTimeout(done, 10));
  }
  connection.socket.resume();
  await expectProblem(service, await answerOn(connection), 'body-too-large');
});

test('after a refusal the service reads on for a while and then closes', {retry: 3}, async () => {
  const connection = openRaw(impatient.baseUrl);
  const start = performance.now();
  connection.send(head({'Content-Length': 9 * MIB}, STRANGER));
  await answerOn(connection);
  connection.send(Buffer.alloc(1000));
  await connection.closed(3000);
  const waited = performance.now() - start;
  expect(waited).toBeGreaterThan(350);
  expect(waited).toBeLessThan(2000);
});

test('a body of exactly the limit is read', async () => {
  const padded = SMALL + ' '.repeat(8 * MIB - SMALL.length);
  const response = await service.post('moments', padded);
  expect(response.status).toBe(200);
});

test('"Expect: 100-continue" of a valid key is answered 100, then the result', async () => {
  const connection = openRaw(service.baseUrl);
  connection.send(head({Expect: '100-continue', 'Content-Length': SMALL.length}));
  expect(await connection.until(/\r\n\r\n/)).toBe('HTTP/1.1 100 Continue\r\n\r\n');
  connection.send(SMALL);
  await connection.until(/HTTP\/1\.1 200 OK/);
  connection.socket.destroy();
});

test('"Expect: 100-continue" with a wrong key is answered 401 and never 100', async () => {
  const request = head({Expect: '100-continue', 'Content-Length': SMALL.length}, STRANGER);
  await expectProblem(service, await sendRaw(service.baseUrl, request), 'invalid-key');
});

test('"Expect: 100-continue" with too great a length is answered 413 and never 100', async () => {
  const request = head({Expect: '100-continue', 'Content-Length': 8 * MIB + 1});
  await expectProblem(service, await sendRaw(service.baseUrl, request), 'body-too-large');
});

test('an expectation that is not known is passed over', async () => {
  const request = head({Expect: 'the-best', 'Content-Length': SMALL.length}) + SMALL;
  const response = await sendRaw(service.baseUrl, request);
  expect(response.status).toBe(200);
  expect(response.headers.get('content-type')).toBe('application/json');
});

test('a wrong scope is named before a wrong body', async () => {
  const reader = await service.makeKey({scopes: ['usage:read']});
  const response = await service.post('moments', '{', {Authorization: `Bearer ${reader.secret}`});
  await expectProblem(service, response, 'insufficient-scope');
});

test('a used-up burst is named before a wrong body', async () => {
  const slow = await service.makeKey({burst: 1});
  const headers = {Authorization: `Bearer ${slow.secret}`};
  await expectProblem(service, await service.post('moments', '{', headers), 'malformed-json');
  await expectProblem(service, await service.post('moments', '{', headers), 'rate-limited');
});
