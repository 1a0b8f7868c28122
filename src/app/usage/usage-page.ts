import {ChangeDetectionStrategy, Component} from '@angular/core';

@Component({
  selector: 'app-usage-page',
  template: '<div class="page"><h1 tabindex="-1">Usage</h1></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UsagePage {}
