import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import type {KeyState} from '../../../shared/api';

const WORDS: Readonly<Record<KeyState, string>> = {
  active: 'Active',
  retiring: 'Retiring',
  revoked: 'Revoked',
  expired: 'Expired',
  disabled: 'Disabled',
};

/** The state of a key by shape and word; the colour only helps. */
@Component({
  selector: 'app-state-mark',
  template: `
    <svg viewBox="0 0 12 12" aria-hidden="true" [class]="state()">
      @switch (state()) {
        @case ('active') {
          <circle class="fill" cx="6" cy="6" r="5" />
        }
        @case ('retiring') {
          <circle class="rim" cx="6" cy="6" r="4.5" />
          <path class="fill" d="M6 1.5a4.5 4.5 0 0 1 0 9z" />
        }
        @case ('expired') {
          <circle class="rim broken" cx="6" cy="6" r="4.5" />
        }
        @default {
          <circle class="rim" cx="6" cy="6" r="4.5" />
          <path class="rim" d="M3 9l6-6" />
        }
      }
    </svg>
    {{ word() }}
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 8px;
      font-weight: 550;
    }

    svg {
      flex: none;
      width: 12px;
      height: 12px;
      color: var(--mat-sys-on-surface-variant);
    }

    .active {
      color: var(--fst-good);
    }

    .retiring {
      color: var(--fst-positive);
    }

    .revoked,
    .disabled {
      color: var(--mat-sys-error);
    }

    .fill {
      fill: currentColor;
    }

    .rim {
      fill: none;
      stroke: currentColor;
      stroke-width: 1.6;
    }

    .broken {
      stroke-dasharray: 3 1.7;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StateMark {
  readonly state = input.required<KeyState>();
  protected readonly word = computed(() => WORDS[this.state()]);
}
