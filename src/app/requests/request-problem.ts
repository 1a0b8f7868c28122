import {ChangeDetectionStrategy, Component, computed, input, output} from '@angular/core';
import {MatButton} from '@angular/material/button';
import {ProblemView} from '../problem/problem-view';
import type {Problem} from '../problem/problem';

/** A problem as the request page shows it: each pointer with the line it points to, if it is in the text. */
export interface Finding {
  readonly pointer: string;
  readonly detail: string;
  readonly line: number | null;
}

@Component({
  selector: 'app-request-problem',
  imports: [MatButton, ProblemView],
  template: `
    <app-problem [problem]="problem()">
      @if (firstLine(); as line) {
        <button matButton="outlined" (click)="showLine.emit(line)">Show line {{ line }}</button>
      }
    </app-problem>
    @if (findings().length > 0) {
      <table class="ruled dense">
        <thead>
          <tr>
            <th scope="col">Where</th>
            <th scope="col">What was given</th>
            <th scope="col" class="end">Line</th>
          </tr>
        </thead>
        <tbody>
          @for (finding of findings(); track $index) {
            <tr>
              <td>
                <code>{{ finding.pointer || 'the whole request' }}</code>
              </td>
              <td>{{ finding.detail }}</td>
              <td class="end">
                @if (finding.line; as line) {
                  <button
                    class="line num"
                    [attr.aria-label]="'Show line ' + line + ' in the request'"
                    (click)="showLine.emit(line)"
                  >
                    {{ line }}
                  </button>
                } @else {
                  –
                }
              </td>
            </tr>
          }
        </tbody>
      </table>
      @if (problem().errorCount > findings().length) {
        <p class="variant small more">
          The first {{ findings().length }} of {{ problem().errorCount }} faults.
        </p>
      }
    }
  `,
  styles: `
    :host {
      display: flex;
      flex-direction: column;
      gap: 4px;
    }

    code {
      white-space: nowrap;
    }

    td {
      vertical-align: top;
    }

    .line {
      min-width: 24px;
      min-height: 24px;
      padding: 0 4px;
      border: 0;
      background: none;
      color: var(--mat-sys-primary);
      text-decoration: underline;
      text-underline-offset: 3px;
      cursor: pointer;
    }

    .more {
      margin-block-start: 6px;
    }

    @media (width < 600px) {
      code {
        overflow-wrap: anywhere;
        white-space: normal;
      }
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RequestProblem {
  readonly problem = input.required<Problem>();
  readonly findings = input.required<readonly Finding[]>();
  readonly showLine = output<number>();

  protected readonly firstLine = computed(
    () => this.findings().find(({line}) => line !== null)?.line ?? null,
  );
}
