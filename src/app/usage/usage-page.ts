import {httpResource} from '@angular/common/http';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  input,
  linkedSignal,
  signal,
} from '@angular/core';
import {MatButton, MatIconButton} from '@angular/material/button';
import {Router, RouterLink} from '@angular/router';
import type {ConsoleUsage} from '../../../shared/api';
import {NumberText} from '../format/number-text';
import {fixed, pairsText} from '../format/numbers';
import {headOf, pairsScale} from '../format/pairs-scale';
import {dayUtc} from '../format/times';
import {Icon} from '../icon/icon';
import {problemOf} from '../problem/problem';
import {ProblemView} from '../problem/problem-view';
import {Session} from '../session/session';
import {download} from '../states/download';
import {UsageChart} from './usage-chart';
import {daysOf, rangeChoices, usageRange, type RangeName} from './usage-range';
import {stacked, usageCsv, usageSeries, type GroupBy} from './usage-series';

@Component({
  selector: 'app-usage-page',
  imports: [Icon, MatButton, MatIconButton, NumberText, ProblemView, RouterLink, UsageChart],
  templateUrl: './usage-page.html',
  styleUrl: './usage-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UsagePage {
  private readonly router = inject(Router);
  private readonly now = new Date();
  protected readonly session = inject(Session);

  /** All of the filters are in the address, so that a colleague sees the same. */
  readonly range = input<string>();
  readonly since = input<string>();
  readonly until = input<string>();
  readonly by = input<string>();

  protected readonly choices = rangeChoices(this.now);
  protected readonly isTable = signal(false);
  protected readonly chosen = computed(() =>
    usageRange(this.range(), this.since(), this.until(), this.now),
  );
  protected readonly groupBy = computed<GroupBy>(() =>
    this.by() === 'operation' ? 'operation' : 'key',
  );
  protected readonly usage = httpResource<ConsoleUsage>(() => ({
    url: '/console/usage',
    params: {since: this.chosen().since, until: this.chosen().until},
  }));
  /** The last figures stay while new ones are on their way. */
  protected readonly shown = linkedSignal<ConsoleUsage | undefined, ConsoleUsage | undefined>({
    source: () => (this.usage.hasValue() ? this.usage.value() : undefined),
    computation: (now, before) => now ?? before?.value,
  });
  protected readonly problem = computed(() => {
    const error = this.usage.error();
    return error ? problemOf(error) : null;
  });
  protected readonly series = computed(() => usageSeries(this.shown()?.days ?? [], this.groupBy()));
  protected readonly stack = computed(() => stacked(this.series()));
  protected readonly days = computed(() => daysOf(this.chosen()));
  protected readonly dayScale = computed(() => {
    const totals = this.days().map(day =>
      this.stack().reduce((sum, {byDay}) => sum + (byDay.get(day) ?? 0), 0),
    );
    return pairsScale(Math.max(0, ...totals));
  });
  protected readonly spentScale = computed(() => pairsScale(this.shown()?.pairs ?? 0));
  protected readonly spentHead = computed(() => headOf('Spent', this.spentScale()));
  protected readonly title = computed(() => {
    const unit = `${this.dayScale().letter}pairs`;
    return `${unit[0].toUpperCase()}${unit.slice(1)} by day and ${this.groupBy()}`;
  });
  protected readonly evenPace = computed(() => {
    const shown = this.shown();
    return shown && this.chosen().name === 'month'
      ? shown.account.allowance / this.days().length
      : null;
  });
  protected readonly period = computed(() => {
    const {since, until} = this.chosen();
    return since === until
      ? `${dayUtc(since)}, a day in UTC.`
      : `${dayUtc(since)} to ${dayUtc(until)}, days in UTC.`;
  });
  protected readonly summary = computed(() => {
    const shown = this.shown();
    if (!shown) return '';
    const [first] = this.series();
    const most = first ? ` Most by ${first.name}, ${pairsText(first.pairs)}.` : '';
    return `${this.period()} ${shown.calls} calls spent ${pairsText(shown.pairs)}.${most}`;
  });
  protected readonly dayRows = computed(() =>
    this.days()
      .filter(day => day <= this.chosen().until)
      .map(day => {
        const parts = this.stack().map(({byDay}) => byDay.get(day) ?? 0);
        return {day: dayUtc(day), parts, sum: parts.reduce((sum, part) => sum + part, 0)};
      }),
  );

  protected readonly count = (value: number) => fixed(value, 0);
  protected readonly share = (value: number) =>
    fixed((100 * value) / Math.max(1, this.shown()?.pairs ?? 0), 1);

  protected choose(range: RangeName): void {
    const {since, until} = this.chosen();
    this.filter(range === 'custom' ? {range, since, until} : {range, since: null, until: null});
  }

  protected setDay(end: 'since' | 'until', event: Event): void {
    const {since, until} = this.chosen();
    this.filter({range: 'custom', since, until, [end]: (event.target as HTMLInputElement).value});
  }

  protected group(by: GroupBy): void {
    this.filter({by});
  }

  protected save(): void {
    const {since, until} = this.chosen();
    download(`usage-${since}-${until}.csv`, usageCsv(this.shown()?.days ?? []));
  }

  private filter(queryParams: Record<string, string | null>): void {
    void this.router.navigate([], {queryParams, queryParamsHandling: 'merge', replaceUrl: true});
  }
}
