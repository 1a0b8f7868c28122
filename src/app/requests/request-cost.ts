import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import type {Estimate} from '../../../shared/api';
import {duration} from '../format/durations';
import {NumberText} from '../format/number-text';
import {pairs, significant} from '../format/numbers';
import {methodName} from './method-name';

/** What the request will cost, by which method it runs, and about how long, before it is sent. */
@Component({
  selector: 'app-request-cost',
  imports: [NumberText],
  template: `
    <dl class="title-block" aria-live="polite" [class.stale]="isStale()">
      <div>
        <dt>Cost of this request</dt>
        <dd class="cost">
          @if (cost(); as cost) {
            <app-number [value]="cost.written" /><span class="unit">{{ cost.unit }}</span>
          } @else {
            –
          }
        </dd>
      </div>
      <div>
        <dt>Method</dt>
        <dd>{{ method() }}</dd>
      </div>
      <div>
        <dt>Expected time</dt>
        <dd>
          @if (time(); as time) {
            {{ time.sign }} <app-number [value]="time.written" /><span class="unit">{{
              time.unit
            }}</span>
          } @else {
            –
          }
        </dd>
      </div>
    </dl>
  `,
  styles: `
    .cost {
      min-height: 24px;
      font-size: 16px;
      line-height: 24px;

      app-number {
        font-size: 17px;
        font-weight: 600;
        line-height: 24px;
      }
    }

    .stale dd {
      color: var(--mat-sys-on-surface-variant);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RequestCost {
  readonly estimate = input.required<Estimate | null>();
  /** Whether the request has changed since. */
  readonly isStale = input(false);

  protected readonly cost = computed(() => {
    const estimate = this.estimate();
    return estimate && pairs(estimate.pairs);
  });
  protected readonly method = computed(() => {
    const estimate = this.estimate();
    if (estimate === null) return '–';
    const name = methodName[estimate.method];
    return estimate.route === 'inline' ? `${name}, inline` : name;
  });

  protected readonly time = computed(() => {
    const estimate = this.estimate();
    if (estimate === null) return null;
    return estimate.milliseconds < 1
      ? {sign: '<', written: significant(1, 1), unit: 'ms'}
      : {sign: '≈', ...duration(estimate.milliseconds)};
  });
}
