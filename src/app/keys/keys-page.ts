import {ChangeDetectionStrategy, Component} from '@angular/core';

@Component({
  selector: 'app-keys-page',
  template: '<div class="page"><h1 tabindex="-1">Keys</h1></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class KeysPage {}
