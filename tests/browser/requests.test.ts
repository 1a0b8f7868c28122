import {readFileSync} from 'node:fs';
import type {Browser} from '@playwright/test';
import {afterAll, beforeAll, describe, expect, test} from 'vitest';
import type {ConsoleUsage, FieldRequest} from '../../shared/api.ts';
import {startService, type TestService} from '../support/service.ts';
import {chooseSample, openBrowser, run, visit, visitAs, writeRequest} from './visit.ts';

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

const OVERLAPPING = `{
 "units": {"length": "mm", "charge": "nC"},
 "bodies": [
  {"id": "needle", "charges": {
    "x": [52], "y": [0], "z": [30], "charge": [-6.5]}},
  {"id": "bracket", "charges": {
    "x": [52], "y": [0], "z": [30], "charge": [13]}}
 ]
}`;

describe('signing in', () => {
  test('leads back to the page that was wanted, with its filters', async () => {
    const {page, faults, close} = await visitAs('owner', browser, service, {
      path: '/usage?range=today',
    });
    await page.getByRole('heading', {name: 'Usage'}).waitFor();
    expect(new URL(page.url()).search).toBe('?range=today');
    expect(await page.title()).toBe('Usage · Fieldstead');
    expect(faults).toEqual([]);
    await close();
  });

  test('with a wrong password stays and says so', async () => {
    const {page, close} = await visit(browser, service, {path: '/sign-in'});
    await page.getByLabel('E-mail').fill('owner@example.com');
    await page.getByLabel('Password', {exact: true}).fill('not the password');
    await page.getByRole('button', {name: 'Sign in', exact: true}).click();
    await page.getByRole('alert').waitFor();
    expect(new URL(page.url()).pathname).toBe('/sign-in');
    await close();
  });

  test('ends with signing out, and the pages are closed again', async () => {
    const {page, close} = await visitAs('developer', browser, service);
    await page.getByRole('button', {name: /account menu/}).click();
    await page.getByRole('menuitem', {name: 'Sign out'}).click();
    await page.getByRole('heading', {name: 'Sign in'}).waitFor();
    await page.goto('/requests');
    await page.getByRole('heading', {name: 'Sign in'}).waitFor();
    await close();
  });
});

describe('requests', () => {
  test('every sample shows its cost first, runs, and is charged exactly that', async () => {
    const {page, faults, close} = await visitAs('owner', browser, service, {path: '/requests'});
    const owner = await service.signIn('owner');
    const spent = async (): Promise<number> => {
      const answer = await owner.fetch('/console/usage');
      return ((await answer.json()) as ConsoleUsage).account.settled;
    };
    const samples = [
      ['Bell cup and bracket', 'app-field-picture'],
      ['Cloud of 12 000 droplets', 'app-field-picture'],
      ['Spray of 50 000 charges above a panel', 'app-field-picture'],
      ['From the rim to the bracket', 'app-path-chart svg'],
      ['Forces in the booth', 'app-body-tables table'],
      ['Moments of bell and bracket', 'app-body-tables table'],
    ] as const;
    for (const [name, shown] of samples) {
      await chooseSample(page, name);
      const cost = page.locator('app-request-cost .title-block:not(.stale) .cost app-number');
      await cost.waitFor();
      const estimated = Number(await cost.textContent());
      const before = await spent();
      await run(page);
      await page.locator(shown).first().waitFor();
      expect((await spent()) - before, name).toBe(estimated);
      await page.getByText('No substitute for standards').waitFor();
    }
    expect(faults).toEqual([]);
    await close();
  });

  test('a section becomes a picture that is read out under the pointer and by arrow keys', async () => {
    const {page, faults, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await run(page);
    const picture = page.getByRole('application', {name: /Map of the potential/});
    await picture.waitFor();
    const size = await picture.locator('canvas').evaluate((canvas: HTMLCanvasElement) => {
      const {data} = canvas.getContext('2d')?.getImageData(0, 0, canvas.width, canvas.height) ?? {
        data: [],
      };
      return new Set(Array.from({length: 4000}, (_, k) => data[4 * 97 * k])).size;
    });
    expect(size, 'shades on the canvas').toBeGreaterThan(8);

    await picture.hover({position: {x: 200, y: 150}});
    await page.locator('.read-out').getByText('V', {exact: true}).waitFor();
    await page.mouse.move(0, 0);
    await picture.focus();
    await page.keyboard.press('ArrowRight');
    const first = await page.locator('.read-out').innerText();
    await page.keyboard.press('Shift+ArrowUp');
    await expect.poll(() => page.locator('.read-out').innerText()).not.toBe(first);

    await page.getByRole('button', {name: 'Field strength'}).click();
    await page.getByRole('application', {name: /Map of the field strength/}).waitFor();
    await page.getByRole('button', {name: 'Numbers as a table'}).click();
    await page.getByRole('columnheader', {name: 'V, kV'}).waitFor();
    expect(faults).toEqual([]);
    await close();
  });

  test('50 000 charges to a tolerance: the method beforehand, the estimate with the answer', async () => {
    const {page, faults, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await chooseSample(page, 'Spray of 50 000 charges above a panel');
    const estimate = page.locator('app-request-cost .title-block:not(.stale)');
    await estimate.getByText('Multipole').waitFor();
    await estimate.getByText(/≈/).waitFor();

    // A change by hand in so long a text is handed on, and all of it is sent.
    await page.locator('.cm-line', {hasText: '"tolerance": 0.0001'}).click();
    await page.keyboard.press('End');
    for (const key of ['ArrowLeft', 'ArrowLeft', 'Backspace', '2']) await page.keyboard.press(key);
    await expect.poll(() => page.locator('.title-block.stale').count()).toBe(1);
    await estimate.getByText('Multipole').waitFor();
    const [sent] = await Promise.all([
      page.waitForRequest('**/console/requests/fields'),
      run(page),
    ]);
    const {bodies, accuracy} = sent.postDataJSON() as FieldRequest;
    expect(bodies.reduce((sum, {charges}) => sum + charges.charge.length, 0)).toBe(50_000);
    expect(accuracy).toEqual({tolerance: 2e-4});

    await page.locator('canvas[data-painted]').waitFor();
    await page.getByText('of 50000 charges lie within').waitFor();
    const facts = page.locator('app-answer-facts');
    const valueOf = (label: string): Promise<string> =>
      facts
        .locator('dl > div')
        .filter({has: page.getByText(label, {exact: true})})
        .locator('dd')
        .innerText();
    expect(await valueOf('Method')).toBe('Multipole');
    expect(await valueOf('Tolerance asked')).toContain('2 × 10');
    expect(await valueOf('Estimated error of V')).toMatch(/^[\d.]+ × 10/);
    expect(await valueOf('Estimated error of E')).toMatch(/largest/);
    expect(await valueOf('Prepared forms')).toMatch(/^\d of [1-9]\d* reused$/);
    await facts.getByText(/Estimated at \d{3} targets/).waitFor();
    expect(faults).toEqual([]);
    await close();
  });

  test('a map is drawn anew at every width', async () => {
    const {page, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await run(page);
    await page.locator('canvas[data-painted]').waitFor();
    const widths = await page.evaluate(async () => {
      const canvas = document.querySelector<HTMLCanvasElement>('app-field-picture canvas');
      const host = document.querySelector<HTMLElement>('app-field-picture');
      const found: number[] = [];
      for (const width of [500, 560, 440]) {
        if (!canvas || !host) break;
        const before = canvas.dataset['painted'];
        host.style.width = `${width}px`;
        while (canvas.dataset['painted'] === before) await new Promise(requestAnimationFrame);
        found.push(canvas.width);
      }
      return found;
    });
    expect(widths).toHaveLength(3);
    expect(new Set(widths).size).toBe(3);
    await close();
  });

  test('a file of the numbers keeps every bit, and the picture is saved as PNG', async () => {
    const {page, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await chooseSample(page, 'From the rim to the bracket');
    await run(page);
    await page.getByRole('button', {name: 'Numbers as a table'}).click();
    const [csv] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', {name: 'CSV'}).click(),
    ]);
    const lines = readFileSync(await csv.path(), 'utf8')
      .trim()
      .split('\r\n');
    expect(lines[0]).toBe(
      'x,y,z,arcLength,potential,fieldX,fieldY,fieldZ,fieldMagnitude,potentialBound,fieldBound',
    );
    expect(lines).toHaveLength(402);

    await chooseSample(page, 'Bell cup and bracket');
    await run(page);
    await page.locator('canvas[data-painted]').waitFor();
    const [png] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', {name: 'Save picture as PNG'}).click(),
    ]);
    expect(
      readFileSync(await png.path())
        .subarray(1, 4)
        .toString(),
    ).toBe('PNG');
    await close();
  });

  test('an unknown unit is marked at its line before anything is sent', async () => {
    const {page, faults, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await writeRequest(page, OVERLAPPING.replace('"nC"}', '"nC",\n  "field": "gauss"}'));
    await page.locator('.cm-line.faulty', {hasText: 'gauss'}).waitFor();
    await page.locator('.cm-gutter-lint .cm-lint-marker-error').first().waitFor();
    await page.locator('.fault', {hasText: /Line \d/}).waitFor();
    expect(faults).toEqual([]);
    await close();
  });

  test('a refused request says what to do, where, and that nothing was charged', async () => {
    const {page, faults, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await page.getByLabel('Operation').click();
    await page.getByRole('option', {name: 'Forces and torques'}).click();
    await writeRequest(page, OVERLAPPING);
    await run(page);
    await page.getByText('Nothing was charged').waitFor();
    await page.getByRole('heading', {name: /same place/}).waitFor();
    await page.getByRole('cell', {name: '/bodies/1/charges/x/0'}).waitFor();
    await page.getByRole('button', {name: 'Show line 7 in the request'}).click();
    expect(await page.locator('.cm-line.faulty').count()).toBe(2);
    const meaning = await page
      .getByRole('link', {name: 'What the code means'})
      .getAttribute('href');
    const {pathname} = new URL(meaning ?? '', service.baseUrl);
    expect((await page.request.get(pathname)).status()).toBe(200);
    expect(faults).toEqual([]);
    await close();
  });

  test('what is not JSON is marked while it is written', async () => {
    const {page, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await writeRequest(page, '{\n "bodies": [}\n');
    await page.locator('.cm-line.faulty').waitFor();
    await run(page);
    await page.getByRole('heading', {name: 'The request is not JSON'}).waitFor();
    await close();
  });

  test('a run can be cancelled', async () => {
    const {page, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await chooseSample(page, 'Cloud of 12 000 droplets');
    await page.route('**/console/requests/fields', async route => {
      await new Promise(resolve => setTimeout(resolve, 5000));
      await route.continue().catch(() => undefined);
    });
    await page.getByRole('button', {name: 'Run', exact: true}).click();
    await page.getByText('Computing', {exact: true}).waitFor();
    await page.getByRole('button', {name: 'Cancel'}).click();
    await page.getByRole('button', {name: 'Run', exact: true}).waitFor();
    expect(await page.getByText('Computing', {exact: true}).count()).toBe(0);
    await close();
  });

  test('readers are told who runs requests', async () => {
    const {page, close} = await visitAs('reader', browser, service, {path: '/requests'});
    await page.getByRole('heading', {name: 'Developers and owners run requests'}).waitFor();
    expect(await page.getByRole('link', {name: 'Keys'}).count()).toBe(0);
    await close();
  });

  test('copying as curl leaves the key out', async () => {
    const {page, close} = await visitAs('developer', browser, service, {path: '/requests'});
    await page.getByRole('button', {name: 'Copy as curl'}).click();
    await page.getByText('Copied', {exact: true}).first().waitFor();
    const call = await page.evaluate(() => navigator.clipboard.readText());
    expect(call).toContain('$FIELDSTEAD_KEY');
    expect(call).toContain(`${service.baseUrl}/v1/fields`);
    await close();
  });
});
