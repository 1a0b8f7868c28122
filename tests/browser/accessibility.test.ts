import {AxeBuilder} from '@axe-core/playwright';
import type {Browser, Page} from '@playwright/test';
import {afterAll, beforeAll, describe, expect, test} from 'vitest';
import {startService, type TestService} from '../support/service.ts';
import {chooseSample, openBrowser, run, visit, visitAs, writeRequest} from './visit.ts';

let service: TestService;
let browser: Browser;

beforeAll(async () => {
  service = await startService();
  await service.call('moments', {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1e-9]}}]});
  browser = await openBrowser();
});

afterAll(async () => {
  await browser.close();
  await service.close();
});

async function seriousFaults(page: Page): Promise<string[]> {
  await page.evaluate(() => document.fonts.ready);
  const {violations} = await new AxeBuilder({page}).analyze();
  return violations
    .filter(({impact}) => impact === 'serious' || impact === 'critical')
    .flatMap(({id, nodes}) => nodes.map(node => `${id}: ${node.target.join(' ')}`));
}

const REFERENCE = ['', '/units', '/accuracy', '/limits', '/errors'].map(
  path => `/reference${path}`,
);

for (const isDark of [false, true]) {
  describe(isDark ? 'dark' : 'light', () => {
    test.each(['/sign-in', ...REFERENCE, '/nowhere'])(
      '%s has no serious fault for strangers',
      async path => {
        const {page, faults, close} = await visit(browser, service, {path, isDark});
        await page.locator('h1').waitFor();
        expect(await seriousFaults(page)).toEqual([]);
        expect(faults).toEqual([]);
        await close();
      },
    );

    test.each([1440, 390])('the pages of an owner have none at %i px', async width => {
      const {page, faults, close} = await visitAs('owner', browser, service, {
        path: '/requests',
        isDark,
        width,
      });
      await page.locator('.cm-content').waitFor();
      expect(await seriousFaults(page), 'requests').toEqual([]);
      await run(page);
      await page.locator('canvas[data-painted]').waitFor();
      expect(await seriousFaults(page), 'picture').toEqual([]);
      for (const path of ['/usage', '/usage?by=operation', '/keys']) {
        await page.goto(path);
        await page
          .locator('table:visible, app-usage-chart svg, ul.narrow:visible')
          .first()
          .waitFor();
        expect(await seriousFaults(page), path).toEqual([]);
      }
      await page.getByRole('button', {name: 'New key'}).first().click();
      await page.getByRole('dialog').waitFor();
      expect(await seriousFaults(page), 'new key').toEqual([]);
      expect(faults).toEqual([]);
      await close();
    });

    test('answers of every kind and refusals have none', async () => {
      const {page, faults, close} = await visitAs('owner', browser, service, {
        path: '/requests',
        isDark,
      });
      for (const name of [
        'From the rim to the bracket',
        'Spray of 50 000 charges',
        'Forces in the booth',
        'Moments of bell',
      ]) {
        await chooseSample(page, name);
        await run(page);
        expect(await seriousFaults(page), name).toEqual([]);
      }
      await writeRequest(page, '{"bodies": [], "mirror": true}');
      await run(page);
      await page.locator('.cm-line.faulty').first().waitFor();
      expect(await seriousFaults(page), 'refusal').toEqual([]);
      expect(faults).toEqual([]);
      await close();
    });
  });
}

test('no page is wider than a screen of 320 px', async () => {
  const {page, close} = await visitAs('owner', browser, service, {
    path: '/requests',
    width: 320,
    height: 640,
  });
  for (const path of ['/requests', '/requests?view=picture', '/usage', '/keys', ...REFERENCE]) {
    await page.goto(path);
    await page.locator('h1').waitFor();
    const width = await page
      .locator('mat-sidenav-content')
      .evaluate(content => content.scrollWidth);
    expect(width, path).toBeLessThanOrEqual(320);
  }
  await close();
});

test('changing the page moves the focus to its heading', async () => {
  const {page, close} = await visitAs('owner', browser, service, {path: '/requests'});
  await page.getByRole('link', {name: 'Usage'}).click();
  await page.waitForFunction(() => document.activeElement?.textContent === 'Usage');
  expect(await page.title()).toBe('Usage · Fieldstead');
  await close();
});

test('the choice of light or dark stays on this machine', async () => {
  const {page, close} = await visit(browser, service, {path: '/reference'});
  const paper = () => page.evaluate(() => getComputedStyle(document.body).backgroundColor);
  const light = await paper();
  await page.getByRole('button', {name: 'Light or dark'}).click();
  await page.getByRole('menuitemradio', {name: 'Dark'}).click();
  expect(await paper()).not.toBe(light);
  await page.reload();
  await page.locator('h1').waitFor();
  expect(await paper()).not.toBe(light);
  await close();
});
