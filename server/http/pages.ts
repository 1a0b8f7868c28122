import {randomBytes} from 'node:crypto';
import {existsSync, readFileSync} from 'node:fs';
import type {ServerResponse} from 'node:http';
import {createRequire} from 'node:module';
import {dirname, join} from 'node:path';
import {fileURLToPath} from 'node:url';
import compression from 'compression';
import express, {type Express, type Response} from 'express';

import {problemCatalogue} from '../../shared/problem-catalogue.ts';
import {contractText} from '../contract/document.ts';
import type {Deps} from '../deps.ts';
import {ServiceError} from '../errors.ts';
import {setEach} from './common-headers.ts';
import {refuseOtherMethods} from './mount.ts';
import {problemListPage, problemPage} from './problem-pages.ts';
import {consoleHeaders, documentHeaders, type Headers} from './security-headers.ts';

const folderOf = (name: string, file = ''): string =>
  join(dirname(createRequire(import.meta.url).resolve(`${name}/package.json`)), file);
const swaggerFolder = folderOf('swagger-ui-dist');
const publicFolder = fileURLToPath(new URL('./public/', import.meta.url));
const docs = readFileSync(join(publicFolder, 'docs.html'));
/** What these pages load. The folders hold more, which is nobody's affair. */
const documentFiles: readonly (readonly [name: string, file: string])[] = [
  ...['document.css', 'reference.css', 'reference.js'].map(
    name => [name, join(publicFolder, name)] as const,
  ),
  ...['swagger-ui.css', 'swagger-ui-bundle.js'].map(
    name => [name, join(swaggerFolder, name)] as const,
  ),
  fontFile('bricolage-grotesque', 'bricolage-grotesque-latin-opsz-normal.woff2'),
  fontFile('hanken-grotesk', 'hanken-grotesk-latin-wght-normal.woff2'),
  fontFile('jetbrains-mono', 'jetbrains-mono-latin-wght-normal.woff2'),
];

function fontFile(face: string, name: string): readonly [name: string, file: string] {
  return [name, folderOf(`@fontsource-variable/${face}`, `files/${name}`)];
}

/** What is not an operation: the contract itself, its reference page, the problems, the console. */
export function mountPages(app: Express, deps: Deps): void {
  const isHttps = deps.config.publicUrl.startsWith('https:');
  app.use(['/docs', '/problems', '/openapi.yaml', '/assets'], compression());
  mountReference(app, documentHeaders(isHttps));
  mountConsole(app, isHttps);
}

function mountReference(app: Express, headers: Headers): void {
  app.get('/openapi.yaml', (_req, res) => {
    res.setHeader('Cache-Control', 'no-cache');
    res.type('application/yaml').end(contractText);
  });
  refuseOtherMethods(app, '/openapi.yaml', ['GET']);

  app.get('/docs', (_req, res) => sendPage(res, headers, docs));
  refuseOtherMethods(app, '/docs', ['GET']);
  for (const [name, file] of documentFiles) {
    app.get(`/docs/${name}`, (_req, res) => {
      res.sendFile(file, {acceptRanges: false, cacheControl: false});
    });
    refuseOtherMethods(app, `/docs/${name}`, ['GET']);
  }

  app.get('/problems', (_req, res) => sendPage(res, headers, problemListPage()));
  refuseOtherMethods(app, '/problems', ['GET']);
  app.get('/problems/:code', ({params}, res) => {
    const code = Object.keys(problemCatalogue).find(one => one === params.code);
    if (!code) throw new ServiceError('not-found', 'There is no problem of this name.');
    sendPage(res, headers, problemPage(code as keyof typeof problemCatalogue));
  });
  refuseOtherMethods(app, '/problems/:code', ['GET']);
}

function sendPage(res: Response, headers: Headers, page: string | Buffer): void {
  setEach(res, headers);
  res.setHeader('Cache-Control', 'no-cache');
  res.type('html').end(page);
}

/** Where `ng build` puts the console; seen from the source and from the compiled server. */
function consoleFolder(): string | null {
  const folders = ['../../dist/console/browser/', '../../console/browser/'];
  const found = folders.map(one => fileURLToPath(new URL(one, import.meta.url)));
  return found.find(folder => existsSync(join(folder, 'index.html'))) ?? null;
}

/** Names with a hash of the content never change what they mean; the others are asked for again. */
function setCaching(res: ServerResponse, path: string): void {
  const isHashed = /-[0-9A-Z]{8}\.\w+$/.test(path);
  res.setHeader('Cache-Control', isHashed ? 'public, max-age=31536000, immutable' : 'no-cache');
}

function mountConsole(app: Express, isHttps: boolean): void {
  const folder = consoleFolder();
  if (!folder) return; // In development ng serve has it.
  const index = readFileSync(join(folder, 'index.html'), 'utf8');
  app.use(compression());
  app.use(
    express.static(folder, {
      index: false,
      redirect: false,
      cacheControl: false,
      acceptRanges: false,
      setHeaders: setCaching,
    }),
  );
  app.get('/{*page}', (req, res, next) => {
    const isApi = /^\/(v1|console)(\/|$)/.test(req.path);
    if (isApi || /\.\w+$/.test(req.path) || !req.accepts('html') || req.headers.accept === '*/*') {
      next();
      return;
    }
    const nonce = randomBytes(16).toString('base64');
    sendPage(res, consoleHeaders(isHttps, nonce), index.replaceAll('CSP_NONCE', nonce));
  });
}
