import {expect} from 'vitest';

import {problemCatalogue} from '../../shared/problem-catalogue.ts';
import type {Problem, ProblemCode} from '../../shared/api.ts';
import {describedAnswer, faultsOf, operationsAt, problemSchema} from './contract.ts';
import type {TestService} from './service.ts';

// Stack frames, files, statements of the database, and what drivers say.
const INNARDS =
  /\bat \S+ \(|\.[jt]s:\d|node_modules|\/(home|opt|srv|tmp|usr|var)\/|\bSELECT .*\bFROM |\bINSERT INTO |\bUPDATE .*\bSET |\bDELETE FROM |SQLITE|no such table/;
// These come from before an operation is known, so no operation declares them.
const UNDECLARED: readonly ProblemCode[] = ['method-not-allowed', 'url-too-long'];

/**
 * Checks that a response is a whole and harmless problem document of one code, whatever layer it
 * comes from.
 */
export async function expectProblem(
  service: TestService,
  response: Response,
  code: ProblemCode,
): Promise<Problem> {
  const text = await response.text();
  const {headers} = response;
  expect(headers.get('content-type'), text).toBe('application/problem+json');
  const problem = JSON.parse(text) as Problem;
  const {status, title} = problemCatalogue[code];
  expect(problem, text).toMatchObject({
    code,
    status,
    title,
    type: `${service.deps.config.publicUrl}/problems/${code}`,
  });
  expect(response.status).toBe(status);
  expect(faultsOf(problemSchema, problem), text).toEqual([]);
  expect(problem.instance).toBe(headers.get('x-request-id'));
  expect(text).not.toMatch(INNARDS);
  expect(text).not.toContain(process.cwd());
  expectSafeHeaders(headers);
  expect(headers.get('cache-control')).toBe('no-store');
  await expectExplained(service, problem);
  expectDeclared(response, code);
  return problem;
}

/** What every answer carries, of whatever status. */
export function expectSafeHeaders(headers: Headers): void {
  expect(headers.get('x-content-type-options')).toBe('nosniff');
  expect(headers.get('content-security-policy')).toMatch(/default-src 'none'/);
  expect(headers.get('content-security-policy')).toMatch(/frame-ancestors 'none'/);
  expect(headers.get('referrer-policy')).toBe('no-referrer');
  expect(headers.get('x-powered-by')).toBeNull();
  expect(headers.get('server')).toBeNull();
  expect(headers.get('x-request-id')).toMatch(/^[A-Za-z0-9._-]{1,64}$/);
}

/** The type of a problem leads to a page about it. */
async function expectExplained(service: TestService, {type, title}: Problem): Promise<void> {
  // Services of tests listen on a port that their own address does not name.
  const page = await fetch(service.baseUrl + new URL(type).pathname);
  expect(page.status).toBe(200);
  expect(page.headers.get('content-type')).toMatch(/^text\/html/);
  expect(await page.text()).toContain(`<h1>${title}</h1>`);
}

/** The contract says that an operation at this address may answer so. */
function expectDeclared(response: Response, code: ProblemCode): void {
  if (response.url === '' || UNDECLARED.includes(code)) return;
  const here = operationsAt(new URL(response.url).pathname);
  if (here.length === 0) return;
  const isDeclared = here.some(({id}) => describedAnswer(id, response.status) !== null);
  expect(isDeclared, `${response.status} is not declared for ${here[0].path}`).toBe(true);
}
