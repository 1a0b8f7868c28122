import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import {NumberText} from '../format/number-text';
import {significant} from '../format/numbers';
import {PairsText} from '../format/pairs-text';
import {CopyButton} from '../states/copy-button';
import type {FinishedRun} from './answer-view';

const largest = (column: readonly (number | null)[] | undefined): number | null =>
  column ? column.reduce<number>((most, value) => Math.max(most, value ?? 0), 0) : null;

/** The title block of an answer: how it was computed, how well, what it cost, and how to name it. */
@Component({
  selector: 'app-answer-facts',
  imports: [CopyButton, NumberText, PairsText],
  template: `
    <dl class="title-block">
      <div>
        <dt>Method</dt>
        <dd>Direct sum</dd>
      </div>
      <div>
        <dt>Charged</dt>
        <dd><app-pairs [count]="run().answer.cost.pairs" /></dd>
      </div>
      @if (bound(); as bound) {
        <div>
          <dt>{{ bound.label }}</dt>
          <dd>
            <app-number [value]="bound.value" /><span class="unit">{{ bound.unit }}</span>
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
  protected readonly bound = computed(() => {
    const {answer} = this.run();
    if ('columns' in answer) {
      const {potentialBound, fieldBound} = answer.columns;
      const ofPotential = largest(potentialBound);
      if (ofPotential !== null) {
        return {
          label: 'Largest bound of V',
          value: significant(ofPotential, 2),
          unit: answer.units.potential,
        };
      }
      const ofField = largest(fieldBound);
      return ofField === null
        ? null
        : {label: 'Largest bound of E', value: significant(ofField, 2), unit: answer.units.field};
    }
    if ('assembly' in answer) return null;
    const bounds = answer.bodies.flatMap(({forceBound}) => forceBound ?? []);
    return bounds.length === 0
      ? null
      : {
          label: 'Largest bound of F',
          value: significant(Math.max(...bounds), 2),
          unit: answer.units.force,
        };
  });
}
