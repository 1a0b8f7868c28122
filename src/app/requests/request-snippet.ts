import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import {CopyButton} from '../states/copy-button';
import {curl} from './curl';

/** The call for a shell. The key stays a variable: the console never sees one. */
@Component({
  selector: 'app-request-snippet',
  imports: [CopyButton],
  template: `
    <div class="panel">
      <header>
        <h3>Snippet</h3>
        <span class="variant">curl</span>
        <app-copy-button [text]="call()" label="Copy as curl" />
      </header>
      <pre tabindex="0" role="region" aria-label="The call as curl">{{ shown() }}</pre>
    </div>
    <p class="variant small">Set FIELDSTEAD_KEY to a key with the scope compute:run.</p>
  `,
  styles: `
    header {
      display: flex;
      align-items: center;
      gap: 12px;
      padding: 6px 6px 6px 16px;
      border-block-end: 1px solid var(--mat-sys-outline-variant);
    }

    app-copy-button {
      margin-inline-start: auto;
    }

    pre {
      overflow: auto;
      max-height: 220px;
      margin: 0;
      padding: 10px 16px;
      font-size: 12px;
    }

    p {
      margin-block-start: 6px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RequestSnippet {
  readonly path = input.required<string>();
  readonly text = input.required<string>();

  protected readonly call = computed(() => curl(location.origin, this.path(), this.text()));
  protected readonly shown = computed(() => this.call().slice(0, 6000));
}
