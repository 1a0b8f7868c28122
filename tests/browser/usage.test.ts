import {readFileSync} from 'node:fs';
import type {Browser} from '@playwright/test';
import {afterAll, beforeAll, expect, test} from 'vitest';
import type {ConsoleUsage} from '../../shared/api.ts';
import {startService, type TestService} from '../support/service.ts';
import {openBrowser, visitAs} from './visit.ts';

let service: TestService;
let browser: Browser;

beforeAll(async () => {
  service = await startService();
  browser = await openBrowser();
});

afterAll(async () => {
  await browser.close();
  await service.close();
});

test('an account that has spent nothing is told what usage is for', async () => {
  const {page, close} = await visitAs('reader', browser, service, {path: '/usage'});
  await page.getByRole('heading', {name: 'Nothing was spent in these days'}).waitFor();
  await close();
});

test('the chart, the table, the file and the header show the figures of the service', async () => {
  const body = {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1e-9]}}]};
  for (let k = 0; k < 3; k++) await service.call('moments', body);
  await service.call('forces', body);

  const reader = await service.signIn('reader');
  const usage = (await (await reader.fetch('/console/usage')).json()) as ConsoleUsage;
  const {page, faults, close} = await visitAs('reader', browser, service, {path: '/usage'});
  await page.locator('app-usage-chart svg').waitFor();
  const summary = await page.locator('app-usage-chart [role=img]').getAttribute('aria-label');
  expect(summary).toContain(`${usage.calls} calls`);
  const sum = page.getByRole('row', {name: /^Sum/});
  expect(await sum.getByRole('cell').allInnerTexts()).toEqual(['4', String(usage.pairs), '100.0']);

  await page.getByRole('button', {name: 'By operation'}).click();
  await page.waitForURL(/by=operation/);
  await page.getByRole('row', {name: /^Moments/}).waitFor();
  await page.getByRole('button', {name: 'Chart as a table'}).click();
  await page.getByRole('columnheader', {name: 'Day, UTC'}).waitFor();

  const [csv] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('button', {name: 'CSV'}).click(),
  ]);
  const [, ...rows] = readFileSync(await csv.path(), 'utf8')
    .trim()
    .split('\r\n');
  expect(rows.reduce((total, row) => total + Number(row.split(',').at(-1)), 0)).toBe(usage.pairs);

  await page.getByText(/^Left in/).waitFor();
  expect(await page.locator('.cells').innerText()).toContain('9.999 Tpairs');
  expect(faults).toEqual([]);
  await close();
});
