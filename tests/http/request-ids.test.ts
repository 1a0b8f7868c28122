import {afterAll, beforeAll, expect, test} from 'vitest';

import {startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

const ask = (headers: Record<string, string>): Promise<Response> =>
  fetch(`${service.baseUrl}/livez`, {headers});

interface Line {
  readonly requestId: string;
  readonly traceId: string;
}

/** The line of the log about a response. */
async function lineOf(response: Response): Promise<Line> {
  const id = response.headers.get('x-request-id') ?? '';
  const find = (): string | undefined =>
    service.logLines.find(line => line.includes(`"requestId":"${id}"`));
  await expect.poll(find).toBeDefined();
  return JSON.parse(find() ?? '') as Line;
}

test.each(['a', 'A-1_b.c', 'x'.repeat(64)])(
  'the request id %s is taken, echoed and logged',
  async id => {
    const response = await ask({'X-Request-Id': id});
    expect(response.headers.get('x-request-id')).toBe(id);
    expect((await lineOf(response)).requestId).toBe(id);
  },
);

test.each([
  '',
  'x'.repeat(65),
  'a b',
  'a"b',
  'a,b',
  '<script>',
  '\u00e4',
  // It would be found in every log on the way.
  'fst_0123456789AB_0123456789012345678901234567890123456789',
])('the request id %j is replaced by one of our own', async id => {
  const response = await ask({'X-Request-Id': id});
  expect(response.headers.get('x-request-id')).toMatch(/^req_[0-9a-f]{24}$/);
  expect((await lineOf(response)).requestId).toBe(response.headers.get('x-request-id'));
});

test('two requests get two ids', async () => {
  const [one, other] = [await ask({}), await ask({})];
  expect(one.headers.get('x-request-id')).not.toBe(other.headers.get('x-request-id'));
});

const TRACE = '4bf92f3577b34da6a3ce929d0e0e4736';
const SPAN = '00f067aa0ba902b7';

test('a valid traceparent is followed: its trace, with a span of our own', async () => {
  const response = await ask({traceparent: `00-${TRACE}-${SPAN}-01`});
  const answered = response.headers.get('traceparent') ?? '';
  expect(answered).toMatch(new RegExp(`^00-${TRACE}-[0-9a-f]{16}-[0-9a-f]{2}$`));
  expect(answered).not.toContain(SPAN);
  expect((await lineOf(response)).traceId).toBe(TRACE);
});

test.each([
  ['in upper case', `00-${TRACE.toUpperCase()}-${SPAN}-01`],
  ['with a trace of zeros', `00-${'0'.repeat(32)}-${SPAN}-01`],
  ['with a parent of zeros', `00-${TRACE}-${'0'.repeat(16)}-01`],
  ['that is too short', `00-${TRACE}-${SPAN}-1`],
  ['of the forbidden version', `ff-${TRACE}-${SPAN}-01`],
  ['with something after it', `00-${TRACE}-${SPAN}-01-extra`],
  ['of other letters', 'hello'],
])('a traceparent %s starts a fresh trace and is no error', async (_what, traceparent) => {
  const response = await ask({traceparent});
  expect(response.status).toBe(200);
  const answered = response.headers.get('traceparent') ?? '';
  expect(answered).toMatch(/^00-(?!0{32})[0-9a-f]{32}-(?!0{16})[0-9a-f]{16}-[0-9a-f]{2}$/);
  expect(answered.toLowerCase()).not.toContain(TRACE);
  expect((await lineOf(response)).traceId).toBe(answered.slice(3, 35));
});
