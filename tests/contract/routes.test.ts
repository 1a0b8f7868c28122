import {afterAll, beforeAll, expect, test} from 'vitest';

import {contract, operations} from '../../server/contract/document.ts';
import {createApp} from '../../server/http/app.ts';
import {Bursts} from '../../server/http/burst.ts';
import {mountOperations} from '../../server/http/mount.ts';
import {createRoutes} from '../../server/routes/index.ts';
import {startService, type TestService} from '../support/service.ts';

/** Everything there is besides the operations of the contract. */
const PAGES = [
  'GET /docs',
  'GET /docs/bricolage-grotesque-latin-opsz-normal.woff2',
  'GET /docs/document.css',
  'GET /docs/hanken-grotesk-latin-wght-normal.woff2',
  'GET /docs/jetbrains-mono-latin-wght-normal.woff2',
  'GET /docs/reference.css',
  'GET /docs/reference.js',
  'GET /docs/swagger-ui-bundle.js',
  'GET /docs/swagger-ui.css',
  'GET /openapi.yaml',
  'GET /problems',
  'GET /problems/{code}',
];
// The console is one page for all its addresses, there only once it is built.
const CONSOLE = 'GET /{*page}';

let service: TestService;
beforeAll(async () => {
  service = await startService();
});
afterAll(() => service.close());

interface Layer {
  readonly route?: {
    readonly path: string;
    readonly methods: Readonly<Record<string, boolean>>;
  };
}

// Express lists the answer to all other methods as a route of every method there is.
const MANY = 20;

/** The routes that an application has, without the answers to other methods. */
function routesOf(app: {readonly router: unknown}): string[] {
  const {stack} = app.router as {readonly stack: readonly Layer[]};
  return stack.flatMap(({route}) => {
    const methods = Object.keys(route?.methods ?? {});
    if (!route || methods.length > MANY) return [];
    const path = route.path.replaceAll(/:(\w+)/g, '{$1}');
    return methods.map(method => `${method.toUpperCase()} ${path}`);
  });
}

test('what runs is what the contract says, and the pages', () => {
  const running = routesOf(createApp(service.deps)).filter(route => route !== CONSOLE);
  const described = operations.map(({method, path}) => `${method.toUpperCase()} ${path}`);
  expect(running.sort()).toEqual([...described, ...PAGES].sort());
});

test('every operation has one name, and every name one operation', () => {
  const ids = operations.map(({id}) => id);
  expect(new Set(ids).size).toBe(ids.length);
  expect(Object.keys(createRoutes(service.deps)).sort()).toEqual([...ids].sort());
});

test('an application with a route too many or too few does not start', () => {
  const routes = createRoutes(service.deps);
  const {getQuota, ...fewer} = routes;
  const mount = (wrong: unknown) => () => {
    const app = createApp(service.deps);
    mountOperations(app, service.deps, wrong as typeof routes, new Bursts(1));
  };
  expect(mount(fewer)).toThrow(/getQuota/);
  expect(mount({...routes, getNothing: getQuota})).toThrow(/getNothing/);
});

test('every operation says who may call it, and needs a scope or role that exists', () => {
  const {Scope, Role} = contract.components.schemas as unknown as Record<string, {enum: string[]}>;
  for (const {id, callers, scopes, roles, path} of operations) {
    expect(Scope.enum, id).toEqual(expect.arrayContaining([...scopes]));
    expect(Role.enum, id).toEqual(expect.arrayContaining([...roles]));
    if (path.startsWith('/v1/')) expect(callers).toBe('apiKey');
    if (scopes.length > 0) expect(callers).toBe('apiKey');
    if (roles.length > 0) expect(callers).toBe('session');
  }
});
