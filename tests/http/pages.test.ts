import {readFileSync} from 'node:fs';
import {afterAll, beforeAll, describe, expect, test} from 'vitest';

import {contractText} from '../../server/contract/document.ts';
import {problemCatalogue} from '../../shared/problem-catalogue.ts';
import {expectProblem, expectSafeHeaders} from '../support/problem.ts';
import {startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

const html = {Accept: 'text/html,application/xhtml+xml,*/*;q=0.8'};
const get = (path: string, headers: Record<string, string> = html): Promise<Response> =>
  fetch(service.baseUrl + path, {headers});

/** The directives of a Content-Security-Policy. */
function policyOf(response: Response): Record<string, string> {
  const text = response.headers.get('content-security-policy') ?? '';
  return Object.fromEntries(
    text.split(';').map(directive => {
      const [name, ...sources] = directive.trim().split(' ');
      return [name, sources.join(' ')];
    }),
  );
}

/** What a strict policy would stop: scripts, styles and handlers within the page. */
function inlineParts(page: string): string[] {
  return [
    ...(page.match(/<script(?![^>]*\bsrc=)[^>]*>/gi) ?? []),
    ...(page.match(/<style(?![^>]*\bnonce="[^"]+")[^>]*>/gi) ?? []),
    ...(page.match(/<[^>]*\s(?:on\w+|style)\s*=/gi) ?? []),
    ...(page.match(/javascript:/gi) ?? []),
  ];
}

/** The addresses that a page loads from. */
const loads = (page: string): string[] =>
  [...page.matchAll(/<(?:script|link|img)[^>]*\s(?:src|href)="([^"]+)"/gi)].map(match => match[1]);

describe.each(['/docs', '/problems', '/problems/invalid-key'])('%s', path => {
  test('is a page that runs nothing inline and loads only from here', async () => {
    const response = await get(path);
    expect(response.status).toBe(200);
    expect(response.headers.get('content-type')).toMatch(/^text\/html/);
    expectSafeHeaders(response.headers);
    const policy = policyOf(response);
    expect(policy).toMatchObject({
      'default-src': "'none'",
      'script-src': "'self'",
      'style-src': "'self'",
      'connect-src': "'self'",
      'base-uri': "'none'",
      'form-action': "'none'",
      'frame-ancestors': "'none'",
    });
    expect(JSON.stringify(policy)).not.toContain('unsafe');
    const page = await response.text();
    expect(inlineParts(page)).toEqual([]);
    expect(loads(page).length).toBeGreaterThan(0);
    for (const address of loads(page)) {
      expect(address).toMatch(/^\//);
      const loaded = await get(address, {});
      expect(loaded.status, address).toBe(200);
      expect(loaded.headers.get('x-content-type-options')).toBe('nosniff');
    }
  });
});

test('the reference page asks nobody outside, keeps no key and colours no large answer', async () => {
  const script = await (await get('/docs/reference.js')).text();
  expect(script).toMatch(/validatorUrl: null/);
  expect(script).toMatch(/persistAuthorization: false/);
  expect(script).toMatch(/syntaxHighlight: false/);
  const {version} = JSON.parse(
    readFileSync('node_modules/swagger-ui-dist/package.json', 'utf8'),
  ) as {version: string};
  const manifest = readFileSync('package.json', 'utf8');
  expect(manifest).toContain(`"swagger-ui-dist": "${version}"`);
});

test('the contract is served as it is written', async () => {
  const response = await get('/openapi.yaml', {});
  expect(response.headers.get('content-type')).toMatch(/^application\/yaml/);
  expect(await response.text()).toBe(contractText);
  expectSafeHeaders(response.headers);
});

test('the list of problems leads to all of them', async () => {
  const page = await (await get('/problems')).text();
  const linked = [...page.matchAll(/href="\/problems\/([a-z0-9-]+)"/g)].map(match => match[1]);
  expect(linked).toEqual(Object.keys(problemCatalogue));
});

describe('the console', () => {
  test('is a page with a policy of its own and a nonce that is never used twice', async () => {
    const [first, second] = [await get('/'), await get('/keys')];
    const nonces: string[] = [];
    for (const response of [first, second]) {
      // Without a built console there is no page: npm run build makes it.
      expect(response.status, 'is the console built?').toBe(200);
      expectSafeHeaders(response.headers);
      expect(response.headers.get('cache-control')).toBe('no-cache');
      const policy = policyOf(response);
      expect(policy).toMatchObject({
        'default-src': "'none'",
        'script-src': "'self'",
        'connect-src': "'self'",
        'object-src': "'none'",
        'base-uri': "'none'",
        'form-action': "'self'",
      });
      const nonce = /^'self' 'nonce-([\w+/]{22}==)'$/.exec(policy['style-src'])?.[1] ?? '';
      expect(nonce).not.toBe('');
      nonces.push(nonce);
      const page = await response.text();
      expect(page).toContain(nonce);
      expect(page).not.toContain('CSP_NONCE');
      expect(inlineParts(page)).toEqual([]);
      // "base-uri 'none'" would make the browser pass over a base of the page.
      expect(page).not.toMatch(/<base\b/i);
      for (const address of loads(page)) {
        expect(address).toMatch(/^\/[^/]/);
        const loaded = await get(address, {});
        expect(loaded.status, address).toBe(200);
        if (!/-\w{8}\.\w+$/.test(address)) continue;
        expect(loaded.headers.get('cache-control')).toBe('public, max-age=31536000, immutable');
      }
    }
    expect(nonces[0]).not.toBe(nonces[1]);
  });

  test.each([
    ['/v1/nothing', html],
    ['/console/nothing', html],
    ['/nothing.js', html],
    ['/', {Accept: 'application/json'}],
    ['/../../package.json', html],
    ['/%2e%2e/package.json', html],
    ['/main.js.map', html],
  ])('is not what %s gets', async (path, headers) => {
    await expectProblem(service, await get(path, headers), 'not-found');
  });

  test('has no source maps', async () => {
    const page = await (await get('/')).text();
    const scripts = loads(page).filter(address => address.endsWith('.js'));
    expect(scripts.length).toBeGreaterThan(0);
    for (const address of scripts) {
      expect(await (await get(address, {})).text()).not.toContain('sourceMappingURL');
      expect((await get(`${address}.map`, {})).status).toBe(404);
    }
  });
});

test.each(['/docs/swagger-ui.css', '/favicon.svg'])(
  '%s is a problem, and no fault of ours, where conditions do not hold',
  async path => {
    expect((await get(path, {Range: 'bytes=99999999-'})).status).toBe(200);
    await expectProblem(service, await get(path, {'If-Match': '"other"'}), 'bad-request');
    expect(service.logLines.filter(line => line.includes('"level":50'))).toEqual([]);
  },
);

test('what is text is compressed for those who ask, and answers of the API are not', async () => {
  const page = await get('/problems', {'Accept-Encoding': 'gzip'});
  expect(page.headers.get('content-encoding')).toBe('gzip');
  const answer = await service.post(
    'moments',
    {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1]}}]},
    {'Accept-Encoding': 'gzip'},
  );
  expect(answer.headers.get('content-encoding')).toBeNull();
});

test('behind https, every answer says to come back by https only', async () => {
  const safe = await startService({env: {PUBLIC_URL: 'https://fieldstead.example'}});
  for (const path of ['/livez', '/docs', '/v1/nothing']) {
    const {headers} = await fetch(safe.baseUrl + path);
    expect(headers.get('strict-transport-security')).toBe('max-age=31536000; includeSubDomains');
  }
  await safe.close();
  expect((await get('/livez')).headers.get('strict-transport-security')).toBeNull();
});
