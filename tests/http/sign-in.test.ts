import {afterEach, beforeEach, describe, expect, test} from 'vitest';

import {createLink} from '../../server/accounts/sign-in-links.ts';
import type {Session} from '../../shared/api.ts';
import {expectProblem} from '../support/problem.ts';
import {emailOf, PASSWORD, startService, type TestService} from '../support/service.ts';

let service: TestService;
beforeEach(async () => {
  service = await startService();
});
afterEach(() => service.close());

const email = emailOf('owner');
const signIn = (
  form: object = {email, password: PASSWORD},
  headers: Record<string, string> = {},
): Promise<Response> =>
  fetch(`${service.baseUrl}/console/session`, {
    method: 'POST',
    headers: {'Content-Type': 'application/json', ...headers},
    body: JSON.stringify(form),
  });

test('the cookie of a session is bound to the host, secure, and out of reach of scripts', async () => {
  const response = await signIn();
  expect(response.status).toBe(200);
  const [first, ...attributes] = (response.headers.get('set-cookie') ?? '').split('; ');
  const [name, token] = first.split('=');
  expect(name).toBe('__Host-fieldstead');
  // 256 random bits.
  expect(token).toMatch(/^[\w-]{43}$/);
  expect(attributes.sort()).toEqual(['HttpOnly', 'Path=/', 'SameSite=Lax', 'Secure']);
  expect(response.headers.get('cache-control')).toBe('no-store');
  expect(await response.text()).not.toContain(token);
  // Nor could the database be used to sign in.
  const dump = service.deps.database.driver.serialize().toString('latin1');
  expect(dump).not.toContain(token);
});

test('every sign-in starts another session', async () => {
  const cookies = [await signIn(), await signIn()].map(({headers}) => headers.get('set-cookie'));
  expect(cookies[0]).not.toBe(cookies[1]);
});

test('the address of a person is taken in any letters, the password only as it is', async () => {
  expect((await signIn({email: email.toUpperCase(), password: PASSWORD})).status).toBe(200);
  const response = await signIn({email, password: PASSWORD.toUpperCase()});
  await expectProblem(service, response, 'sign-in-failed');
});

test('an unknown person and a wrong password get one answer', async () => {
  const wrong = await expectProblem(
    service,
    await signIn({email, password: 'wrong'}),
    'sign-in-failed',
  );
  const unknown = await expectProblem(
    service,
    await signIn({email: 'nobody@test.example', password: 'wrong'}),
    'sign-in-failed',
  );
  expect(unknown.detail).toBe(wrong.detail);
});

describe('after five failures', () => {
  test('a person is let in from the same address only later', async () => {
    for (let i = 0; i < 5; i++) {
      await expectProblem(service, await signIn({email, password: 'x'}), 'sign-in-failed');
    }
    const response = await signIn();
    await expectProblem(service, response, 'rate-limited');
    const seconds = Number(response.headers.get('retry-after'));
    expect(seconds).toBeGreaterThan(14 * 60);
    expect(seconds).toBeLessThanOrEqual(15 * 60);
    // Another person is not kept out by it.
    expect((await signIn({email: emailOf('reader'), password: PASSWORD})).status).toBe(200);
  });

  test('no more passwords are tried, even if all were sent at once', async () => {
    const tries = Array.from({length: 30}, () => signIn({email, password: 'x'}));
    const statuses = (await Promise.all(tries)).map(({status}) => status);
    expect(statuses.filter(status => status === 401)).toHaveLength(5);
    expect(statuses.filter(status => status === 429)).toHaveLength(25);
  });

  test('a success in between starts the count anew', async () => {
    for (let i = 0; i < 4; i++) await signIn({email, password: 'x'});
    expect((await signIn()).status).toBe(200);
    for (let i = 0; i < 4; i++) await signIn({email, password: 'x'});
    expect((await signIn()).status).toBe(200);
  });
});

test('an address that fails with many persons is slowed down', async () => {
  await service.close();
  service = await startService({limits: {signInFailuresOfAddress: 3}});
  for (const name of ['a', 'b', 'c']) await signIn({email: `${name}@test.example`, password: 'x'});
  await expectProblem(service, await signIn(), 'rate-limited');
});

test.each([
  [{'Sec-Fetch-Site': 'cross-site'}],
  [{'Sec-Fetch-Site': 'same-site'}],
  [{Origin: 'https://elsewhere.example'}],
])('another site can not sign somebody in: %s', async headers => {
  await expectProblem(service, await signIn(undefined, headers), 'cross-site-request');
});

test.each(['text/plain', 'application/x-www-form-urlencoded', 'multipart/form-data; boundary=x'])(
  'a form of the type %s can not sign in',
  async type => {
    const response = await signIn(undefined, {'Content-Type': type});
    await expectProblem(service, response, 'unsupported-media-type');
    expect(response.headers.get('set-cookie')).toBeNull();
  },
);

describe.each([
  ['http://fieldstead.example', '0.0.0.0', false],
  ['http://10.1.2.3:4300', '10.1.2.3', false],
  // A proxy on this machine that speaks plain HTTP to browsers.
  ['http://fieldstead.example', '127.0.0.1', false],
  ['https://fieldstead.example', '127.0.0.1', true],
  ['http://localhost:4300', '0.0.0.0', true],
  ['http://[::1]:4300', '::1', true],
])('at %s, listening on %s', (publicUrl, host, isSecure) => {
  test(`sign-in is ${isSecure ? 'possible' : 'refused with the reason'}`, async () => {
    await service.close();
    service = await startService({env: {PUBLIC_URL: publicUrl, HOST: host}});
    const response = await signIn();
    if (isSecure) {
      expect(response.status).toBe(200);
      return;
    }
    const {detail} = await expectProblem(service, response, 'insecure-origin');
    expect(detail).toContain(publicUrl);
    expect(detail).toContain('PUBLIC_URL');
    expect(response.headers.get('set-cookie')).toBeNull();
  });
});

describe('the link for a first password', () => {
  const redeem = (link: string, password: string): Promise<Response> =>
    fetch(`${service.baseUrl}/console/password`, {
      method: 'POST',
      headers: {'Content-Type': 'application/json'},
      body: JSON.stringify({link, password}),
    });
  const linkAt = async (at: Date): Promise<string> => {
    const visitor = await service.signIn('owner');
    return createLink(service.deps.database, visitor.session.person.id, at);
  };

  test('sets the password, signs in, and works once', async () => {
    const link = await linkAt(new Date());
    const response = await redeem(link, 'a password of their own');
    expect(response.status).toBe(200);
    expect(((await response.json()) as Session).person.email).toBe(email);
    expect(response.headers.get('set-cookie')).toMatch(/^__Host-fieldstead=/);
    await expectProblem(service, await redeem(link, 'another password'), 'link-spent');
    expect((await signIn({email, password: 'a password of their own'})).status).toBe(200);
    await expectProblem(service, await signIn(), 'sign-in-failed');
  });

  test('is too old after a day', async () => {
    const link = await linkAt(new Date(Date.now() - 24 * 3_600_000));
    await expectProblem(service, await redeem(link, 'a password of their own'), 'link-spent');
  });

  test('takes no password shorter than fifteen characters, and is not used up by one', async () => {
    const link = await linkAt(new Date());
    await expectProblem(service, await redeem(link, 'fourteen chars'), 'out-of-range');
    expect((await redeem(link, 'fifteen charact')).status).toBe(200);
  });
});
