import {
  ChangeDetectionStrategy,
  Component,
  computed,
  input,
  linkedSignal,
  viewChild,
} from '@angular/core';
import {MatIconButton} from '@angular/material/button';
import type {FieldAnswer, FieldRequest, Operation} from '../../../shared/api';
import {duration} from '../format/durations';
import {NumberText} from '../format/number-text';
import {fixed, type WrittenNumber} from '../format/numbers';
import {FieldPicture} from '../field-picture/field-picture';
import type {Quantity} from '../field-picture/levels';
import {savePng} from '../field-picture/save-png';
import {sectionOf} from '../field-picture/section';
import {Icon} from '../icon/icon';
import {download} from '../states/download';
import {accuracyLine} from './accuracy-facts';
import {BodyTables} from './body-tables';
import {columnsOf} from './columns';
import {ColumnsTable} from './columns-table';
import {methodName} from './method-name';
import {PathChart} from './path-chart';
import type {Run} from './requests-api';

/** A run that came to an answer, and the request as it was sent. */
export interface FinishedRun extends Run {
  readonly operation: Operation;
  readonly text: string;
  readonly name: string;
  readonly at: Date;
}

type View = Quantity | 'path' | 'table';

const isField = (answer: Run['answer']): answer is FieldAnswer => 'columns' in answer;

/** The answer as a picture, where it is one, and always as numbers. */
@Component({
  selector: 'app-answer-view',
  imports: [BodyTables, ColumnsTable, FieldPicture, Icon, MatIconButton, NumberText, PathChart],
  templateUrl: './answer-view.html',
  styleUrl: './answer-view.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AnswerView {
  private readonly map = viewChild(FieldPicture);

  readonly run = input.required<FinishedRun>();
  /** On a narrow sheet, picture and numbers are pages of their own. */
  readonly only = input<'picture' | 'numbers' | null>(null);

  protected readonly computedIn = computed(() =>
    duration(this.run().answer.cost.computedMilliseconds),
  );
  private readonly request = computed(() => JSON.parse(this.run().text) as FieldRequest);
  protected readonly field = computed(() => {
    const {answer} = this.run();
    return isField(answer) ? answer : null;
  });
  protected readonly bodies = computed(() => {
    const {answer} = this.run();
    return isField(answer) ? null : answer;
  });
  protected readonly targets = computed(() => this.request().targets);
  protected readonly section = computed(() => {
    const answer = this.field();
    const {grid} = this.request().targets ?? {};
    return answer && grid
      ? sectionOf(grid, this.request().bodies, answer.columns, answer.units)
      : null;
  });
  protected readonly columns = computed(() => {
    const answer = this.field();
    return answer ? columnsOf(this.targets(), answer) : [];
  });
  protected readonly views = computed<readonly {view: View; word: string}[]>(() => {
    const section = this.section();
    if (section) {
      return [
        ...(section.potential ? [{view: 'potential' as const, word: 'Potential'}] : []),
        ...(section.strength ? [{view: 'strength' as const, word: 'Field strength'}] : []),
      ];
    }
    return this.targets()?.path ? [{view: 'path', word: 'Along the path'}] : [];
  });
  private readonly chosen = linkedSignal<readonly {view: View}[], View>({
    source: this.views,
    computation: (views, before) =>
      before && (before.value === 'table' || views.some(({view}) => view === before.value))
        ? before.value
        : (views[0]?.view ?? 'table'),
  });
  protected readonly view = computed<View>(() => {
    if (this.only() === 'numbers') return 'table';
    const chosen = this.chosen();
    return this.only() === 'picture' && chosen === 'table'
      ? (this.views()[0]?.view ?? 'table')
      : chosen;
  });
  protected readonly quantity = computed<Quantity>(() =>
    this.view() === 'strength' ? 'strength' : 'potential',
  );

  protected readonly counted = (count: number): WrittenNumber => fixed(count, 0);

  protected choose(view: View): void {
    this.chosen.set(view);
  }

  protected toggleTable(): void {
    this.chosen.update(view => (view === 'table' ? (this.views()[0]?.view ?? 'table') : 'table'));
  }

  protected async savePicture(): Promise<void> {
    const map = this.map();
    const section = this.section();
    const {answer, name, at} = this.run();
    if (!map || !section) return;
    const accuracy = accuracyLine(answer, this.quantity() === 'potential' ? 'V' : 'E');
    const blob = await savePng(map, section, [
      {label: 'Request', value: name || this.run().operation},
      {
        label: 'Method',
        value: methodName[answer.accuracy.method],
      },
      ...(accuracy ? [accuracy] : []),
      {
        label: 'Result digest',
        value: `${answer.resultDigest.slice(0, 14)}…${answer.resultDigest.slice(-6)}`,
      },
      {label: 'Engine', value: `${answer.engine.version}, ${answer.engine.constants}`},
      {label: 'Date', value: at.toISOString().slice(0, 16).replace('T', ' ') + ' UTC'},
    ]);
    download(`${this.run().operation}-section.png`, blob);
  }
}
