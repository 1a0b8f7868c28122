import {ChangeDetectionStrategy, Component, input, output} from '@angular/core';
import {MatButton} from '@angular/material/button';
import {CopyButton} from '../states/copy-button';
import type {Problem} from './problem';

/** A failure that fills a region: what happened, what to do, and what to quote when asking for help. */
@Component({
  selector: 'app-problem',
  imports: [MatButton, CopyButton],
  template: `
    <section class="state" role="alert">
      <h2>{{ problem().title }}</h2>
      <p>{{ problem().detail }}</p>
      <dl class="title-block">
        @if (problem().status > 0) {
          <div>
            <dt>Status</dt>
            <dd class="num">{{ problem().status }}</dd>
          </div>
        }
        <div>
          <dt>Code</dt>
          <dd class="num">{{ problem().code }}</dd>
        </div>
        @if (problem().requestId; as id) {
          <div>
            <dt>Request id</dt>
            <dd class="with-copy">
              <span class="num">{{ id }}</span>
              <app-copy-button [text]="id" label="Copy request id" />
            </dd>
          </div>
        }
      </dl>
      <div class="actions after">
        <ng-content />
        @if (canRetry()) {
          <button matButton="outlined" (click)="retry.emit()">Try again</button>
        }
        @if (problem().type; as type) {
          <a matButton [href]="type" target="_blank" rel="noopener">What the code means</a>
        }
      </div>
    </section>
  `,
  styles: `
    .with-copy {
      display: flex;
      align-items: center;
      justify-content: space-between;
      gap: 8px;
      margin-block: -8px;
      margin-inline-end: -8px;
    }

    .after {
      margin-block-start: 20px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ProblemView {
  readonly problem = input.required<Problem>();
  readonly canRetry = input(false);
  readonly retry = output();
}
