import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import {icons, type IconName} from './icons';

/** A symbol beside a word. It says nothing by itself, so assistive technology does not see it. */
@Component({
  selector: 'app-icon',
  template: `<svg viewBox="0 -960 960 960" focusable="false"><path [attr.d]="path()" /></svg>`,
  styles: `
    :host {
      display: inline-block;
      flex: none;
      width: 20px;
      height: 20px;
      vertical-align: -4px;
    }

    svg {
      display: block;
      width: 100%;
      height: 100%;
      fill: currentColor;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {'aria-hidden': 'true', class: 'mat-icon'},
})
export class Icon {
  readonly name = input.required<IconName>();
  protected readonly path = computed(() => icons[this.name()]);
}
