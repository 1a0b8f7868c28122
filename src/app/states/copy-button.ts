import {ChangeDetectionStrategy, Component, DestroyRef, inject, input, signal} from '@angular/core';
import {MatButton, MatIconButton} from '@angular/material/button';
import {Icon} from '../icon/icon';
import {Announcer} from './announcer';

const SHOWN_FOR = 2500;

/** Copies a text; what came of it is announced, and stays visible for more than two seconds. */
@Component({
  selector: 'app-copy-button',
  imports: [MatButton, MatIconButton, Icon],
  template: `
    @if (word()) {
      <button
        [matButton]="isFilled() ? 'filled' : 'outlined'"
        [attr.aria-label]="label()"
        (click)="copy()"
      >
        <app-icon matButtonIcon [name]="result() === 'Copied' ? 'check' : 'content-copy'" />
        {{ result() || word() }}
      </button>
    } @else {
      @if (result()) {
        <span class="small result">{{ result() }}</span>
      }
      <button matIconButton [attr.aria-label]="label()" [attr.title]="label()" (click)="copy()">
        <app-icon [name]="result() === 'Copied' ? 'check' : 'content-copy'" />
      </button>
    }
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 4px;
    }

    .result {
      color: var(--mat-sys-on-surface-variant);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CopyButton {
  private readonly announcer = inject(Announcer);
  private timer: ReturnType<typeof setTimeout> | undefined;

  readonly text = input.required<string>();
  /** The accessible name: "Copy key ending 4f2a". */
  readonly label = input.required<string>();
  /** Shown beside the icon; without it the button is the icon alone. */
  readonly word = input('');
  readonly isFilled = input(false);
  protected readonly result = signal<'' | 'Copied' | 'Not copied'>('');

  constructor() {
    inject(DestroyRef).onDestroy(() => clearTimeout(this.timer));
  }

  protected async copy(): Promise<void> {
    try {
      await navigator.clipboard.writeText(this.text());
      this.show('Copied');
    } catch {
      // The browser refuses the clipboard without a secure origin or a permission.
      this.show('Not copied');
    }
  }

  private show(result: 'Copied' | 'Not copied'): void {
    this.result.set(result);
    this.announcer.say(
      result === 'Copied' ? 'Copied' : 'Not copied. Select the text and copy it by hand.',
    );
    clearTimeout(this.timer);
    this.timer = setTimeout(() => this.result.set(''), SHOWN_FOR);
  }
}
