import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import {RouterLink} from '@angular/router';
import {duration} from '../format/durations';
import {NumberText} from '../format/number-text';
import {PairsText} from '../format/pairs-text';
import {CopyButton} from '../states/copy-button';
import {accuracyFacts, accuracyNote, toleranceOf} from './accuracy-facts';
import type {FinishedRun} from './answer-view';
import {methodName} from './method-name';

/** The title block of an answer: how it was computed, how well, what it cost, and how to name it. */
@Component({
  selector: 'app-answer-facts',
  imports: [CopyButton, NumberText, PairsText, RouterLink],
  template: `
    <dl class="title-block">
      <div>
        <dt>Method</dt>
        <dd>{{ method() }}</dd>
      </div>
      @if (tolerance(); as tolerance) {
        <div>
          <dt>Tolerance asked</dt>
          <dd><app-number [value]="tolerance" /></dd>
        </div>
      }
      <div>
        <dt>Charged</dt>
        <dd><app-pairs [count]="run().answer.cost.pairs" /></dd>
      </div>
      <div>
        <dt>Computed</dt>
        <dd>
          <app-number [value]="computedIn().written" /><span class="unit">{{
            computedIn().unit
          }}</span>
          &ngsp;<span class="variant small more"
            >waited <app-number [value]="waited().written" /><span class="unit">{{
              waited().unit
            }}</span></span
          >
        </dd>
      </div>
      @if (run().answer.cost.preparation; as preparation) {
        <div title="Packed columns and trees kept from earlier calls with the same charges">
          <dt>Prepared forms</dt>
          <dd>
            <span class="num">{{ preparation.hits }}</span> of
            <span class="num">{{ preparation.hits + preparation.misses }}</span> reused
          </dd>
        </div>
      }
      @for (fact of facts(); track fact.label) {
        <div>
          <dt>{{ fact.label }}</dt>
          <dd>
            <app-number [value]="fact.value" />
            @if (fact.unit) {
              <span class="unit">{{ fact.unit }}</span>
            }
            @if (fact.largest; as largest) {
              &ngsp;<span class="variant small more under"
                >largest <app-number [value]="largest"
              /></span>
            }
          </dd>
        </div>
      }
      <div>
        <dt>Result digest</dt>
        <dd class="with-copy">
          <span class="num" [title]="run().answer.resultDigest">{{ digest() }}</span>
          <app-copy-button [text]="run().answer.resultDigest" label="Copy result digest" />
        </dd>
      </div>
      @if (run().requestId; as id) {
        <div>
          <dt>Request id</dt>
          <dd class="with-copy">
            <span class="num id" [title]="id">{{ id }}</span>
            <app-copy-button [text]="id" label="Copy request id" />
          </dd>
        </div>
      }
    </dl>
    @if (note(); as note) {
      <p class="small">{{ note }} <a routerLink="/reference/accuracy">What this means</a></p>
    }
    <ul class="variant small">
      @for (notice of run().answer.notices; track notice.code) {
        <li>{{ notice.detail }}</li>
      }
    </ul>
  `,
  styles: `
    .with-copy {
      display: flex;
      align-items: center;
      justify-content: space-between;
      gap: 4px;
      margin-block: -8px -8px;
      margin-inline-end: -8px;
    }

    .id {
      overflow: hidden;
      max-width: 24ch;
      text-overflow: ellipsis;
    }

    .more {
      margin-inline-start: 4px;
      white-space: nowrap;

      app-number {
        font-size: inherit;
        line-height: inherit;
      }
    }

    .under {
      display: block;
      margin-inline-start: 0;
    }

    p {
      margin-block-start: 10px;
    }

    ul {
      display: grid;
      gap: 4px;
      margin: 12px 0 0;
      padding: 0;
      list-style: none;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AnswerFacts {
  readonly run = input.required<FinishedRun>();

  protected readonly digest = computed(() => {
    const [, hex = ''] = this.run().answer.resultDigest.split(':');
    return `sha-256:${hex.slice(0, 4)}…${hex.slice(-4)}`;
  });
  protected readonly method = computed(() => methodName[this.run().answer.accuracy.method]);
  protected readonly tolerance = computed(() => toleranceOf(this.run().answer));
  protected readonly facts = computed(() => accuracyFacts(this.run().answer));
  protected readonly note = computed(() => accuracyNote(this.run().answer));

  protected readonly computedIn = computed(() =>
    duration(this.run().answer.cost.computedMilliseconds),
  );
  protected readonly waited = computed(() => duration(this.run().answer.cost.queuedMilliseconds));
}
