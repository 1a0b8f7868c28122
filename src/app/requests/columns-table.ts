import {ChangeDetectionStrategy, Component, computed, input, linkedSignal} from '@angular/core';
import {MatButton, MatIconButton} from '@angular/material/button';
import {NumberText} from '../format/number-text';
import {columnWriter, groups, type WrittenNumber} from '../format/numbers';
import {Icon} from '../icon/icon';
import {download} from '../states/download';
import {csvOf, type Column} from './columns';

const PAGE = 100;

/** The columns of an answer, a hundred rows at a time, and all of them as CSV. */
@Component({
  selector: 'app-columns-table',
  imports: [Icon, MatButton, MatIconButton, NumberText],
  template: `
    <div class="bar">
      <span class="variant">
        Rows <span class="num">{{ span() }}</span> of <span class="num">{{ whole() }}</span>
      </span>
      <button
        matIconButton
        aria-label="Rows before"
        [disabled]="page() === 0"
        (click)="page.set(page() - 1)"
      >
        <app-icon name="chevron-left" />
      </button>
      <button
        matIconButton
        aria-label="Rows after"
        [disabled]="isLast()"
        (click)="page.set(page() + 1)"
      >
        <app-icon name="chevron-right" />
      </button>
      <button matButton="outlined" class="csv" (click)="save()">
        <app-icon matButtonIcon name="download" />CSV
      </button>
    </div>
    <div class="scroll" tabindex="0" role="region" aria-label="Columns of the answer">
      <table class="ruled dense">
        <thead>
          <tr>
            <th scope="col" class="end">Row</th>
            @for (column of columns(); track column.name) {
              <th scope="col" class="end">{{ column.head }}</th>
            }
          </tr>
        </thead>
        <tbody>
          @for (row of rows(); track row.index) {
            <tr>
              <td class="end num variant">{{ row.index }}</td>
              @for (cell of row.cells; track $index) {
                <td class="end">
                  @if (cell) {
                    <app-number [value]="cell" />
                  } @else {
                    <span class="variant" title="The target lies on a charge">masked</span>
                  }
                </td>
              }
            </tr>
          }
        </tbody>
      </table>
    </div>
  `,
  styles: `
    .bar {
      display: flex;
      flex-wrap: wrap;
      align-items: center;
      gap: 4px;
      padding-block: 0 8px;
    }

    .csv {
      margin-inline-start: auto;
    }

    .scroll {
      overflow: auto;
      max-height: 440px;
    }

    th {
      position: sticky;
      inset-block-start: 0;
      background: var(--mat-sys-surface-container-lowest);
      white-space: nowrap;
    }

    th.end,
    td.end {
      padding-inline: 14px 4px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ColumnsTable {
  readonly columns = input.required<readonly Column[]>();
  readonly count = input.required<number>();
  readonly fileName = input('answer.csv');

  protected readonly page = linkedSignal({source: this.columns, computation: () => 0});
  protected readonly isLast = computed(() => (this.page() + 1) * PAGE >= this.count());
  protected readonly whole = computed(() => groups(String(this.count())).join('\u202f'));
  protected readonly span = computed(() => {
    const first = this.page() * PAGE;
    return `${first}–${Math.min(this.count(), first + PAGE) - 1}`;
  });
  private readonly writers = computed(() =>
    this.columns().map(column => writerOf(column, this.count())),
  );
  protected readonly rows = computed(() => {
    const first = this.page() * PAGE;
    const size = Math.max(0, Math.min(PAGE, this.count() - first));
    return Array.from({length: size}, (_, k) => ({
      index: first + k,
      cells: this.columns().map((column, c) => {
        const value = column.valueAt(first + k);
        return value === null ? null : this.writers()[c](value);
      }),
    }));
  });

  protected save(): void {
    download(this.fileName(), csvOf(this.columns(), this.count()));
  }
}

/** Decimals for nine values in ten: a peak beside a charge must not take them from the others. */
function writerOf(column: Column, count: number): (value: number) => WrittenNumber {
  const stride = Math.max(1, Math.floor(count / 5000));
  const sample = Array.from({length: Math.ceil(count / stride)}, (_, k) =>
    Math.abs(column.valueAt(k * stride) ?? 0),
  ).sort((a, b) => a - b);
  const most = sample[Math.floor(0.9 * (sample.length - 1))] || sample[sample.length - 1] || 0;
  return columnWriter([most], column.name.length === 1 ? 4 : 5);
}
