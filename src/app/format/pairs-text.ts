import {ChangeDetectionStrategy, Component, computed, input} from '@angular/core';
import {NumberText} from './number-text';
import {pairs} from './numbers';

/** A count of pairs with its unit; the exact count is in the tooltip. */
@Component({
  selector: 'app-pairs',
  imports: [NumberText],
  template: `<app-number [value]="parts().written" />&ngsp;<span class="variant">{{
      parts().unit
    }}</span>`,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {'[attr.title]': 'exact()'},
})
export class PairsText {
  readonly count = input.required<number>();
  protected readonly parts = computed(() => pairs(this.count()));
  protected readonly exact = computed(() => (this.count() < 1e9 ? null : `${this.count()} pairs`));
}
