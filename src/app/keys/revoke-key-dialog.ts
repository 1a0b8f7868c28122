import {ChangeDetectionStrategy, Component, inject, signal} from '@angular/core';
import {FormControl, FormGroup, ReactiveFormsModule} from '@angular/forms';
import {toSignal} from '@angular/core/rxjs-interop';
import {MatButton} from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import {MatFormField, MatLabel} from '@angular/material/form-field';
import {MatInput} from '@angular/material/input';
import type {Key} from '../../../shared/api';
import {PairsText} from '../format/pairs-text';
import {ago, fullTime} from '../format/times';
import {problemOf, type Problem} from '../problem/problem';
import {KeysApi} from './keys-api';

/** Ends a key for good, after its name has been typed. Closes with true once it is done. */
@Component({
  selector: 'app-revoke-key-dialog',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatFormField,
    MatInput,
    MatLabel,
    PairsText,
    ReactiveFormsModule,
  ],
  template: `
    <form [formGroup]="form" (ngSubmit)="revoke()">
      <h2 mat-dialog-title>Revoke “{{ key.name }}”</h2>
      <mat-dialog-content>
        <p>
          Every call with the key ending <span class="num">{{ key.lastFour }}</span> answers 401
          from now on. A revoked key can not be brought back; what it spent stays in the ledger.
        </p>
        <dl class="title-block">
          <div>
            <dt>Last used</dt>
            <dd [title]="lastUsedAt">{{ lastUsed }}</dd>
          </div>
          <div>
            <dt>Spent this month</dt>
            <dd><app-pairs [count]="key.spent" /></dd>
          </div>
        </dl>
        <mat-form-field>
          <mat-label>Type the name of the key: {{ key.name }}</mat-label>
          <input matInput formControlName="name" autocomplete="off" cdkFocusInitial />
        </mat-form-field>
        @if (problem(); as problem) {
          <div class="failed" role="alert">
            <strong>{{ problem.title }}</strong><span>{{ problem.detail }}</span>
          </div>
        }
      </mat-dialog-content>
      <mat-dialog-actions>
        <button matButton type="button" mat-dialog-close>Keep this key</button>
        <button matButton="filled" type="submit" [disabled]="typed() !== key.name || isBusy()">
          Revoke key
        </button>
      </mat-dialog-actions>
    </form>
  `,
  styleUrl: './key-dialog.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RevokeKeyDialog {
  private readonly api = inject(KeysApi);
  private readonly dialog = inject<MatDialogRef<RevokeKeyDialog, boolean>>(MatDialogRef);
  protected readonly key = inject<Key>(MAT_DIALOG_DATA);

  protected readonly form = new FormGroup({name: new FormControl('', {nonNullable: true})});
  protected readonly typed = toSignal(this.form.controls.name.valueChanges, {initialValue: ''});
  protected readonly isBusy = signal(false);
  protected readonly problem = signal<Problem | null>(null);
  protected readonly lastUsed = this.key.lastUsed
    ? `${ago(this.key.lastUsed.at, new Date())}, ${this.key.lastUsed.operation}`
    : 'never';
  protected readonly lastUsedAt = this.key.lastUsed ? fullTime(this.key.lastUsed.at) : '';

  protected async revoke(): Promise<void> {
    if (this.typed() !== this.key.name || this.isBusy()) return;
    this.isBusy.set(true);
    this.problem.set(null);
    try {
      await this.api.revoke(this.key.id);
      this.dialog.close(true);
    } catch (error) {
      this.problem.set(problemOf(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}
