import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import {groups, type WrittenNumber} from './numbers';

/** A number with drawn grouping and exponent, so that copied text stays plain. */
@Component({
  selector: 'app-number',
  template: `@for (group of groups(); track $index) {
      <span [class.gap]="$index > 0">{{ group }}</span>
    }
    @if (exponent() !== null) {
      <span>
        × 10<sup>{{ exponent() }}</sup></span
      >
    }`,
  styles: `
    .gap {
      margin-inline-start: 0.2em;
    }

    sup {
      font-size: 0.75em;
      line-height: 0;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {class: 'num'},
})
export class NumberText {
  readonly value = input.required<WrittenNumber>();
  protected readonly groups = computed(() => groups(this.value().digits));
  protected readonly exponent = computed(() => {
    const {exponent} = this.value();
    return exponent === null ? null : String(exponent).replace('-', '−');
  });
}
