import {ChangeDetectionStrategy, Component, computed, inject, signal} from '@angular/core';
import {toSignal} from '@angular/core/rxjs-interop';
import {FormControl, ReactiveFormsModule, Validators} from '@angular/forms';
import {MatButton} from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import {MatError, MatFormField, MatHint, MatLabel, MatSuffix} from '@angular/material/form-field';
import {MatInput} from '@angular/material/input';
import type {CreatedKey, Key} from '../../../shared/api';
import {ago} from '../format/times';
import {Icon} from '../icon/icon';
import {problemOf, type Problem} from '../problem/problem';
import {KeysApi} from './keys-api';

const LONGEST = 168;
const HOUR = 3_600_000;

const clock = new Intl.DateTimeFormat('en-GB', {
  day: 'numeric',
  month: 'short',
  hour: '2-digit',
  minute: '2-digit',
});
const zone = (time: Date): string =>
  new Intl.DateTimeFormat('en-GB', {timeZoneName: 'short'})
    .formatToParts(time)
    .find(part => part.type === 'timeZoneName')?.value ?? '';

/** Shows what a rotation does to both keys, and does it. Closes with the successor and its secret. */
@Component({
  selector: 'app-rotate-key-dialog',
  imports: [
    Icon,
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatError,
    MatFormField,
    MatHint,
    MatInput,
    MatLabel,
    MatSuffix,
    ReactiveFormsModule,
  ],
  templateUrl: './rotate-key-dialog.html',
  styleUrl: './rotate-key-dialog.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RotateKeyDialog {
  private readonly api = inject(KeysApi);
  private readonly dialog = inject<MatDialogRef<RotateKeyDialog, CreatedKey>>(MatDialogRef);
  protected readonly key = inject<Key>(MAT_DIALOG_DATA);

  protected readonly now = new Date();
  protected readonly overlap = new FormControl(24, {
    nonNullable: true,
    validators: [
      Validators.required,
      Validators.min(0),
      Validators.max(LONGEST),
      Validators.pattern(/^\d+$/),
    ],
  });
  private readonly typed = toSignal(this.overlap.valueChanges, {initialValue: 24});
  protected readonly hours = computed(() =>
    Math.min(LONGEST, Math.max(0, Math.round(this.typed()) || 0)),
  );
  protected readonly end = computed(() => new Date(this.now.getTime() + this.hours() * HOUR));
  /** Where the overlap ends in the drawing, between 230 and 430. */
  protected readonly endX = computed(() => 230 + 200 * Math.sqrt(this.hours() / LONGEST));
  protected readonly nowText = clock.format(this.now);
  protected readonly endText = computed(() => `${clock.format(this.end())} ${zone(this.end())}`);
  protected readonly lastUsed = this.key.lastUsed
    ? `Last used ${ago(this.key.lastUsed.at, this.now)}, ${this.key.lastUsed.operation}. Give the successor to every tool that uses this key before the overlap ends.`
    : 'This key has not been used yet.';
  protected readonly isBusy = signal(false);
  protected readonly problem = signal<Problem | null>(null);

  protected async rotate(): Promise<void> {
    this.overlap.markAsTouched();
    if (this.overlap.invalid || this.isBusy()) return;
    this.isBusy.set(true);
    this.problem.set(null);
    try {
      this.dialog.close(await this.api.rotate(this.key.id, this.hours()));
    } catch (error) {
      this.problem.set(problemOf(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}
