import {ChangeDetectionStrategy, Component, inject, signal} from '@angular/core';
import {NonNullableFormBuilder, ReactiveFormsModule, Validators} from '@angular/forms';
import {MatButton} from '@angular/material/button';
import {MatError, MatFormField, MatHint, MatLabel} from '@angular/material/form-field';
import {MatInput} from '@angular/material/input';
import {ActivatedRoute, Router, RouterLink} from '@angular/router';
import {Mark} from '../frame/mark';
import {problemOf, type Problem} from '../problem/problem';
import {Session} from './session';

const MIN_LENGTH = 15;

/** Where a one-time link leads: its word, behind the #, lets a person choose a password. */
@Component({
  selector: 'app-welcome-page',
  imports: [
    Mark,
    MatButton,
    MatError,
    MatFormField,
    MatHint,
    MatInput,
    MatLabel,
    ReactiveFormsModule,
    RouterLink,
  ],
  templateUrl: './welcome-page.html',
  styleUrl: './welcome-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WelcomePage {
  private readonly session = inject(Session);
  private readonly router = inject(Router);
  private readonly link = inject(ActivatedRoute).snapshot.fragment ?? '';

  protected readonly minLength = MIN_LENGTH;
  protected readonly hasLink = this.link !== '';
  protected readonly isBusy = signal(false);
  protected readonly problem = signal<Problem | null>(null);
  protected readonly form = inject(NonNullableFormBuilder).group({
    password: ['', [Validators.required, Validators.minLength(MIN_LENGTH)]],
  });

  protected async choose(): Promise<void> {
    this.form.markAllAsTouched();
    if (this.form.invalid || this.isBusy()) return;
    this.isBusy.set(true);
    this.problem.set(null);
    try {
      await this.session.redeem(this.link, this.form.getRawValue().password);
      await this.router.navigateByUrl('/');
    } catch (error) {
      this.problem.set(problemOf(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}
