import type {Browser} from '@playwright/test';
import {afterAll, beforeAll, describe, expect, test} from 'vitest';
import {startService, type TestService} from '../support/service.ts';
import {openBrowser, visitAs, type Visit} from './visit.ts';

let service: TestService;
let browser: Browser;
let owner: Visit;

beforeAll(async () => {
  service = await startService();
  browser = await openBrowser();
  owner = await visitAs('owner', browser, service, {path: '/keys'});
});

afterAll(async () => {
  await browser.close();
  await service.close();
});

const REQUEST = {bodies: [{charges: {x: [0], y: [0], z: [0], charge: [1e-9]}}]};

async function statusWith(secret: string): Promise<number> {
  const response = await fetch(`${service.baseUrl}/v1/moments`, {
    method: 'POST',
    headers: {'Content-Type': 'application/json', Authorization: `Bearer ${secret}`},
    body: JSON.stringify(REQUEST),
  });
  return response.status;
}

/** Reads the secret from the one-time view, tries to leave too early, and leaves. */
async function takeSecret(): Promise<string> {
  const {page} = owner;
  const dialog = page.getByRole('dialog', {name: 'Store this key now'});
  await dialog.waitFor();
  await page.keyboard.press('Escape');
  await page.mouse.click(5, 5);
  expect(await dialog.getByRole('button', {name: 'Close'}).isDisabled()).toBe(true);
  await dialog.getByRole('button', {name: /^Copy key ending/}).click();
  await dialog.getByText('Copied').waitFor();
  const secret = await page.evaluate(() => navigator.clipboard.readText());
  await dialog.getByRole('checkbox').check();
  await dialog.getByRole('button', {name: 'Close'}).click();
  await dialog.waitFor({state: 'hidden'});
  return secret;
}

describe('keys', () => {
  test('a key is created, works, is rotated with its successor, and both end when revoked', async () => {
    const {page, faults} = owner;
    await page.getByRole('button', {name: 'New key'}).first().click();
    await page.getByLabel('Name', {exact: true}).fill('Nightly sweep');
    await page.getByLabel('Limit a month').fill('0.5');
    await page.getByRole('button', {name: 'Create key'}).click();
    const first = await takeSecret();
    expect(first).toMatch(/^fst_[0-9A-Za-z]{12}_[0-9A-Za-z]{38}$/);
    expect(await statusWith(first)).toBe(200);

    const rowOf = (state: string) =>
      page.getByRole('row').filter({hasText: 'Nightly sweep'}).filter({hasText: state});
    await rowOf('Active')
      .getByRole('button', {name: /^Actions for Nightly sweep/})
      .click();
    await page.getByRole('menuitem', {name: 'Rotate key'}).click();
    await page.getByRole('button', {name: 'Rotate key'}).click();
    const second = await takeSecret();
    await rowOf('Retiring').waitFor();
    expect([await statusWith(first), await statusWith(second)]).toEqual([200, 200]);

    for (const state of ['Retiring', 'Active']) {
      await rowOf(state)
        .getByRole('button', {name: /^Actions for Nightly sweep/})
        .click();
      await page.getByRole('menuitem', {name: 'Revoke key'}).click();
      const dialog = page.getByRole('dialog', {name: /^Revoke/});
      const revoke = dialog.getByRole('button', {name: 'Revoke key'});
      await dialog.getByRole('textbox').fill('Nightly');
      expect(await revoke.isDisabled()).toBe(true);
      await dialog.getByRole('textbox').fill('Nightly sweep');
      await revoke.click();
      await dialog.waitFor({state: 'hidden'});
    }
    await page.getByRole('row').filter({hasText: 'Revoked'}).nth(1).waitFor();
    expect([await statusWith(first), await statusWith(second)]).toEqual([401, 401]);
    expect(faults).toEqual([]);
  });

  test('filters are in the address and survive a reload', async () => {
    const {page} = owner;
    await page.getByRole('button', {name: /^Ended/}).click();
    await page.getByLabel('Name or last four').fill('test');
    await page.waitForURL(/hide=ended/);
    await page.waitForURL(/q=test/);
    await page.reload();
    await page.getByRole('row').filter({hasText: 'Test key'}).waitFor();
    expect(await page.getByRole('row').filter({hasText: 'Nightly sweep'}).count()).toBe(0);
  });

  test('the whole flow of a key works by keyboard alone', async () => {
    const {page} = owner;
    await page.goto('/keys');
    await page.getByRole('button', {name: 'New key'}).first().focus();
    await page.keyboard.press('Enter');
    await page.getByRole('dialog', {name: 'New key'}).waitFor();
    await page.keyboard.type('By keyboard');
    await page.keyboard.press('Enter');
    const dialog = page.getByRole('dialog', {name: 'Store this key now'});
    await dialog.waitFor();
    await dialog.getByRole('checkbox').focus();
    await page.keyboard.press('Space');
    await dialog.getByRole('button', {name: 'Close', disabled: false}).waitFor();
    await page.keyboard.press('Tab');
    await page.keyboard.press('Enter');
    await dialog.waitFor({state: 'hidden'});
    await page.getByRole('row').filter({hasText: 'By keyboard'}).waitFor();
  });

  test('others than owners are told who creates keys', async () => {
    const {page, close} = await visitAs('developer', browser, service, {path: '/keys'});
    await page.getByRole('heading', {name: 'Owners create keys'}).waitFor();
    await close();
  });
});
