import {ChangeDetectionStrategy, Component} from '@angular/core';

/** The mark: four charges at the corners of a plot and the steady point between them. */
@Component({
  selector: 'app-mark',
  template: `
    <svg viewBox="0 0 24 24" aria-hidden="true" focusable="false">
      <path class="ink" d="M1 1h10a10 10 0 0 1-10 10zM23 23h-10a10 10 0 0 1 10-10z" />
      <path class="rim" d="M22 2v8.9a8.9 8.9 0 0 1-8.9-8.9zM2 22v-8.9a8.9 8.9 0 0 1 8.9 8.9z" />
      <circle cx="12" cy="12" r="2.5" />
    </svg>
    <span>Fieldstead</span>
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 0.5em;
      color: var(--mat-sys-on-surface);
      font: 650 18px/24px var(--fst-display);
      letter-spacing: -0.02em;
    }

    svg {
      width: 1.45em;
      height: 1.45em;
    }

    .ink {
      fill: currentColor;
    }

    .rim {
      fill: none;
      stroke: currentColor;
      stroke-width: 2;
    }

    circle {
      fill: var(--fst-positive);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Mark {}
