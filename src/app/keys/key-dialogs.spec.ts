import {provideHttpClient} from '@angular/common/http';
import {HttpTestingController, provideHttpClientTesting} from '@angular/common/http/testing';
import {TestbedHarnessEnvironment} from '@angular/cdk/testing/testbed';
import {Component, inject, type Type} from '@angular/core';
import {TestBed} from '@angular/core/testing';
import {MatButtonHarness} from '@angular/material/button/testing';
import {MatCheckboxHarness} from '@angular/material/checkbox/testing';
import {MatDialog, type MatDialogConfig} from '@angular/material/dialog';
import {MatDialogHarness} from '@angular/material/dialog/testing';
import {MatInputHarness} from '@angular/material/input/testing';
import type {CreatedKey, Key} from '../../../shared/api';
import {CreateKeyDialog} from './create-key-dialog';
import {keyRows} from './key-rows';
import {KeySecretDialog} from './key-secret-dialog';
import {RevokeKeyDialog} from './revoke-key-dialog';
import {RotateKeyDialog} from './rotate-key-dialog';

@Component({template: ''})
class Host {
  readonly dialog = inject(MatDialog);
}

const key: Key = {
  id: '7Q2mVx0aRk4B',
  name: 'Bell studio plug-in',
  prefix: 'fst_7Q2mVx0aRk4B',
  lastFour: '4f2a',
  state: 'active',
  scopes: ['compute:run'] as unknown as Key['scopes'],
  monthlyLimit: 800e9,
  spent: 412.6e9,
  held: 0,
  burst: 100,
  createdAt: '2026-03-12T00:00:00Z',
  expiresAt: '2027-03-12T00:00:00Z',
  retiresAt: null,
  revokedAt: null,
  lastUsed: null,
  predecessor: null,
  successor: null,
};
const created: CreatedKey = {...key, secret: `fst_7Q2mVx0aRk4B_${'x'.repeat(34)}4f2a`};

function open<C>(dialog: Type<C>, config: MatDialogConfig = {}) {
  TestBed.configureTestingModule({providers: [provideHttpClient(), provideHttpClientTesting()]});
  const fixture = TestBed.createComponent(Host);
  const opened = fixture.componentInstance.dialog.open<C, unknown, unknown>(dialog, config);
  let result: unknown = 'open';
  opened.afterClosed().subscribe(value => (result = value));
  return {
    loader: TestbedHarnessEnvironment.documentRootLoader(fixture),
    http: TestBed.inject(HttpTestingController),
    result: () => result,
  };
}

describe('making a key', () => {
  it('asks for a name and at least one scope before it calls', async () => {
    const {loader, http} = open(CreateKeyDialog);
    const make = await loader.getHarness(MatButtonHarness.with({text: 'Create key'}));
    await make.click();
    http.expectNone('/console/keys');

    await (await loader.getAllHarnesses(MatInputHarness))[0].setValue('Nightly sweep');
    await (await loader.getAllHarnesses(MatCheckboxHarness))[0].uncheck();
    await make.click();
    http.expectNone('/console/keys');
  });

  it('sends the limit in pairs, the scopes and an end', async () => {
    const {loader, http, result} = open(CreateKeyDialog);
    const [name, limit] = await loader.getAllHarnesses(MatInputHarness);
    await name.setValue('  Nightly sweep ');
    await limit.setValue('0.5');
    await (await loader.getAllHarnesses(MatCheckboxHarness))[1].check();
    await (await loader.getHarness(MatButtonHarness.with({text: 'Create key'}))).click();
    const call = http.expectOne('/console/keys');
    expect(call.request.body).toMatchObject({
      name: 'Nightly sweep',
      scopes: ['compute:run', 'usage:read'],
      monthlyLimit: 500_000_000,
      burst: 100,
    });
    call.flush(created);
    await vi.waitFor(() => expect(result()).toEqual(created));
  });

  it('stays open and says why where the service refuses', async () => {
    const {loader, http, result} = open(CreateKeyDialog);
    await (await loader.getAllHarnesses(MatInputHarness))[0].setValue('Nightly sweep');
    await (await loader.getHarness(MatButtonHarness.with({text: 'Create key'}))).click();
    http
      .expectOne('/console/keys')
      .flush(
        {title: 'A value is out of range', code: 'out-of-range'},
        {status: 422, statusText: 'Unprocessable'},
      );
    const [dialog] = await loader.getAllHarnesses(MatDialogHarness);
    expect(await dialog.getText()).toContain('A value is out of range');
    expect(result()).toBe('open');
  });
});

describe('the one-time view', () => {
  it('closes neither by Escape nor by a click beside it, and only after the key is stored', async () => {
    const {loader, result} = open(KeySecretDialog, {data: created, disableClose: true});
    const dialog = await loader.getHarness(MatDialogHarness);
    expect(await dialog.getText()).toContain(created.secret);
    const close = await loader.getHarness(MatButtonHarness.with({text: 'Close'}));
    expect(await close.isDisabled()).toBe(true);
    await dialog.close();
    expect(result()).toBe('open');

    await (await loader.getHarness(MatCheckboxHarness)).check();
    await close.click();
    await vi.waitFor(() => expect(result()).not.toBe('open'));
  });

  it('names the copy button after the key', async () => {
    const {loader} = open(KeySecretDialog, {data: created, disableClose: true});
    const copy = await loader.getHarness(MatButtonHarness.with({text: /Copy/}));
    expect(await (await copy.host()).getAttribute('aria-label')).toBe('Copy key ending 4f2a');
  });
});

describe('revoking a key', () => {
  it('needs the name typed, letter for letter', async () => {
    const {loader, http, result} = open(RevokeKeyDialog, {data: key});
    const revoke = await loader.getHarness(MatButtonHarness.with({text: 'Revoke key'}));
    const name = await loader.getHarness(MatInputHarness);
    await name.setValue('bell studio');
    expect(await revoke.isDisabled()).toBe(true);
    await name.setValue('Bell studio plug-in');
    await revoke.click();
    const call = http.expectOne('/console/keys/7Q2mVx0aRk4B');
    expect(call.request.method).toBe('DELETE');
    call.flush(null);
    await vi.waitFor(() => expect(result()).toBe(true));
  });
});

describe('rotating a key', () => {
  it('begins with 24 hours and refuses more than 168', async () => {
    const {loader, http} = open(RotateKeyDialog, {data: key});
    const overlap = await loader.getHarness(MatInputHarness);
    expect(await overlap.getValue()).toBe('24');
    const rotate = await loader.getHarness(MatButtonHarness.with({text: /Rotate key/}));
    await overlap.setValue('200');
    await rotate.click();
    http.expectNone('/console/keys/7Q2mVx0aRk4B/rotations');
    await overlap.setValue('0');
    await rotate.click();
    expect(http.expectOne('/console/keys/7Q2mVx0aRk4B/rotations').request.body).toEqual({
      overlapHours: 0,
    });
  });
});

describe('rows of keys', () => {
  it('say who follows whom, what is left of an overlap, and which have ended', () => {
    const now = new Date('2026-10-15T10:00:00Z');
    const rows = keyRows(
      [
        {...key, id: 'new', lastFour: 'e37c', predecessor: 'old'},
        {
          ...key,
          id: 'old',
          lastFour: '09bd',
          state: 'retiring',
          successor: 'new',
          retiresAt: '2026-10-16T08:30:00Z',
        },
        {...key, id: 'gone', state: 'revoked', revokedAt: '2026-09-09T00:00:00Z'},
      ],
      now,
    );
    expect(rows.map(({relation, stateNote, isEnded}) => [relation, stateNote, isEnded])).toEqual([
      ['Successor of …09bd', '', false],
      ['Succeeded by …e37c', '22 h left', false],
      ['', '9 Sep 2026', true],
    ]);
  });
});
