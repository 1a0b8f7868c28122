import {Injectable, computed, inject, signal} from '@angular/core';
import {catchError, firstValueFrom, of} from 'rxjs';
import type {ConsoleUsage} from '../../../shared/api';
import {isoDay, monthUtc} from '../format/times';
import {UsageApi} from '../usage/usage-api';

/** What is left of the month, as the service last said it. */
@Injectable({providedIn: 'root'})
export class Balance {
  private readonly api = inject(UsageApi);
  private readonly answer = signal<ConsoleUsage | null>(null);

  readonly account = computed(() => this.answer()?.account ?? null);
  readonly resetsAt = computed(() => this.answer()?.period.end ?? null);
  readonly month = computed(() => {
    const start = this.answer()?.period.start;
    return start === undefined ? '' : monthUtc(start);
  });
  /** The part of the allowance that is settled or held, 0 to 1. */
  readonly spentShare = computed(() => {
    const account = this.account();
    if (account === null || account.allowance === 0) return 0;
    return Math.min(1, (account.settled + account.held) / account.allowance);
  });

  /** Reads the balance again; where that fails, the last figures stay. */
  async refresh(): Promise<void> {
    const today = isoDay(new Date());
    const answer = await firstValueFrom(
      this.api.read(today, today).pipe(catchError(() => of(null))),
    );
    if (answer !== null) this.answer.set(answer);
  }

  forget(): void {
    this.answer.set(null);
  }
}
