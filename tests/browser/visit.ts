import {chromium, type Browser, type Page} from '@playwright/test';
import type {Role} from '../../shared/api.ts';
import {PASSWORD, emailOf, type TestService} from '../support/service.ts';

const ARGS = [
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
];

export function openBrowser(): Promise<Browser> {
  const executablePath = process.env['CHROME_BIN'] ?? '/usr/bin/chromium';
  return chromium.launch({executablePath, args: ARGS});
}

export interface VisitOptions {
  readonly path?: string;
  readonly width?: number;
  readonly height?: number;
  readonly isDark?: boolean;
}

/** A page of the console, and what went wrong in it. */
export interface Visit {
  readonly page: Page;
  /** Violations of the page's policy, errors of scripts, and requests to anywhere else. */
  readonly faults: string[];
  close(): Promise<void>;
}

/** Opens the console as somebody who is not signed in. */
export async function visit(
  browser: Browser,
  service: TestService,
  options: VisitOptions = {},
): Promise<Visit> {
  const {path = '/', width = 1440, height = 900, isDark = false} = options;
  const context = await browser.newContext({
    baseURL: service.baseUrl,
    viewport: {width, height},
    colorScheme: isDark ? 'dark' : 'light',
    reducedMotion: 'reduce',
    permissions: ['clipboard-read', 'clipboard-write'],
  });
  const page = await context.newPage();
  const faults: string[] = [];
  page.on('pageerror', error => faults.push(`error: ${error.message}`));
  page.on('console', message => {
    if (message.text().includes('Content Security Policy')) faults.push(message.text());
  });
  page.on('request', request => {
    const {origin, protocol} = new URL(request.url());
    if (origin !== service.baseUrl && !['blob:', 'data:'].includes(protocol)) {
      faults.push(`request to ${request.url()}`);
    }
  });
  await page.goto(path);
  return {page, faults, close: () => context.close()};
}

/** Opens the console and signs in through its form. */
export async function visitAs(
  role: Role,
  browser: Browser,
  service: TestService,
  options: VisitOptions = {},
): Promise<Visit> {
  const visited = await visit(browser, service, options);
  const {page} = visited;
  await page.getByLabel('E-mail').fill(emailOf(role));
  await page.getByLabel('Password', {exact: true}).fill(PASSWORD);
  await page.getByRole('button', {name: 'Sign in', exact: true}).click();
  await page
    .getByRole('heading', {name: 'Sign in'})
    .waitFor({state: 'detached'})
    .catch(async () => {
      throw new Error(`not signed in: ${await page.locator('main').innerText()}`);
    });
  return visited;
}

/** Replaces the request in the editor. */
export async function writeRequest(page: Page, text: string): Promise<void> {
  await page.locator('.cm-content').click();
  await page.keyboard.press('ControlOrMeta+a');
  await page.keyboard.insertText(text);
}

export async function chooseSample(page: Page, name: string): Promise<void> {
  await page.getByRole('button', {name: 'Sample requests'}).click();
  await page.getByRole('menuitem', {name}).click();
}

/** Runs the request and waits for the answer. */
export async function run(page: Page): Promise<void> {
  await page.getByRole('button', {name: 'Run', exact: true}).click();
  await page.getByText(/Computed in|Not computed/).waitFor({timeout: 60_000});
}
