import {ChangeDetectionStrategy, Component, inject, signal} from '@angular/core';
import {NonNullableFormBuilder, ReactiveFormsModule, Validators} from '@angular/forms';
import {MatButton} from '@angular/material/button';
import {MatCheckbox} from '@angular/material/checkbox';
import {
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import {MatError, MatFormField, MatHint, MatLabel, MatSuffix} from '@angular/material/form-field';
import {MatInput} from '@angular/material/input';
import {MatOption, MatSelect} from '@angular/material/select';
import type {CreatedKey, Scope} from '../../../shared/api';
import {problemOf, type Problem} from '../problem/problem';
import {KeysApi, type KeyWish} from './keys-api';

const GIGA = 1e9;
const DAY = 86_400_000;
/** The smallest limit of the contract, 1000 pairs. */
const LEAST = 1000 / GIGA;

/** Asks for what a new key may do, and makes it. Closes with the key and its secret. */
@Component({
  selector: 'app-create-key-dialog',
  imports: [
    MatButton,
    MatCheckbox,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatError,
    MatFormField,
    MatHint,
    MatInput,
    MatLabel,
    MatOption,
    MatSelect,
    MatSuffix,
    ReactiveFormsModule,
  ],
  templateUrl: './create-key-dialog.html',
  styleUrl: './key-dialog.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CreateKeyDialog {
  private readonly api = inject(KeysApi);
  private readonly dialog = inject<MatDialogRef<CreateKeyDialog, CreatedKey>>(MatDialogRef);

  protected readonly lifetimes = [30, 90, 365] as const;
  protected readonly isBusy = signal(false);
  protected readonly isTried = signal(false);
  protected readonly problem = signal<Problem | null>(null);
  protected readonly form = inject(NonNullableFormBuilder).group({
    name: ['', [Validators.required, Validators.maxLength(80), Validators.pattern(/\S/)]],
    canCompute: [true],
    canReadUsage: [false],
    limit: [null as number | null, [Validators.min(LEAST), Validators.max(9_007_199)]],
    days: [365],
    burst: [100, [Validators.required, Validators.min(1), Validators.max(1_000_000)]],
  });

  protected get hasScope(): boolean {
    return this.form.controls.canCompute.value || this.form.controls.canReadUsage.value;
  }

  protected async create(): Promise<void> {
    this.isTried.set(true);
    this.form.markAllAsTouched();
    if (this.form.invalid || !this.hasScope || this.isBusy()) return;
    this.isBusy.set(true);
    this.problem.set(null);
    try {
      this.dialog.close(await this.api.create(this.wish()));
    } catch (error) {
      this.problem.set(problemOf(error));
    } finally {
      this.isBusy.set(false);
    }
  }

  private wish(): KeyWish {
    const {name, canCompute, canReadUsage, limit, days, burst} = this.form.getRawValue();
    const scopes: Scope[] = [];
    if (canCompute) scopes.push('compute:run');
    if (canReadUsage) scopes.push('usage:read');
    return {
      name: name.trim(),
      scopes,
      ...(limit === null ? {} : {monthlyLimit: Math.round(limit * GIGA)}),
      expiresAt: new Date(Date.now() + days * DAY).toISOString(),
      burst: Math.round(burst),
    };
  }
}
