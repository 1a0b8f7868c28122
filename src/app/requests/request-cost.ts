import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import type {Estimate} from '../../../shared/api';
import {NumberText} from '../format/number-text';
import {pairs, significant} from '../format/numbers';

/** What the request will cost, before it is sent. */
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
        <dt>Route</dt>
        <dd>{{ route() }}</dd>
      </div>
      <div>
        <dt>Expected time</dt>
        <dd>
          @if (time(); as time) {
            <span class="num">{{ time.prefix }}<app-number [value]="time.written" /></span
            ><span class="unit">{{ time.unit }}</span>
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
  protected readonly route = computed(() => {
    const estimate = this.estimate();
    return estimate === null ? '–' : estimate.route === 'inline' ? 'Inline' : 'Worker';
  });
  protected readonly time = computed(() => {
    const ms = this.estimate()?.milliseconds;
    if (ms === undefined) return null;
    if (ms < 1) return {prefix: 'under ', written: significant(1, 1), unit: 'ms'};
    const [value, unit] = ms < 1000 ? [ms, 'ms'] : [ms / 1000, 's'];
    return {prefix: 'about ', written: significant(value, 2), unit};
  });
}
