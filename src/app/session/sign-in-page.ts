import {ChangeDetectionStrategy, Component, inject, input, signal} from '@angular/core';
import {NonNullableFormBuilder, ReactiveFormsModule, Validators} from '@angular/forms';
import {MatButton, MatIconButton} from '@angular/material/button';
import {MatError, MatFormField, MatLabel, MatSuffix} from '@angular/material/form-field';
import {MatInput} from '@angular/material/input';
import {Router, RouterLink} from '@angular/router';
import {FieldPicture} from '../field-picture/field-picture';
import {fixed, plain} from '../format/numbers';
import {Mark} from '../frame/mark';
import {Icon} from '../icon/icon';
import {problemOf, type Problem} from '../problem/problem';
import {fourRods} from './four-rods';
import {Session} from './session';
import {safeReturnTo} from './session-guard';

@Component({
  selector: 'app-sign-in-page',
  imports: [
    FieldPicture,
    Icon,
    Mark,
    MatButton,
    MatError,
    MatFormField,
    MatIconButton,
    MatInput,
    MatLabel,
    MatSuffix,
    ReactiveFormsModule,
    RouterLink,
  ],
  templateUrl: './sign-in-page.html',
  styleUrl: './sign-in-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SignInPage {
  private readonly session = inject(Session);
  private readonly router = inject(Router);

  readonly returnTo = input<string>();
  /** Set where the service ended the session while somebody was at work. */
  readonly ended = input<string>();

  protected readonly rods = fourRods();
  protected readonly centre = plain(fixed(this.rods.centre, 0));
  protected readonly isShown = signal(false);
  protected readonly isBusy = signal(false);
  protected readonly problem = signal<Problem | null>(null);
  protected readonly form = inject(NonNullableFormBuilder).group({
    email: ['', [Validators.required, Validators.email]],
    password: ['', Validators.required],
  });

  protected async signIn(): Promise<void> {
    this.form.markAllAsTouched();
    if (this.form.invalid || this.isBusy()) return;
    const {email, password} = this.form.getRawValue();
    this.isBusy.set(true);
    this.problem.set(null);
    try {
      const isSamePerson = await this.session.signIn(email, password);
      const target = safeReturnTo(this.returnTo());
      if (isSamePerson) await this.router.navigateByUrl(target);
      else location.assign(target);
    } catch (error) {
      this.problem.set(problemOf(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}
