import {ChangeDetectionStrategy, Component} from '@angular/core';
import {MatButton} from '@angular/material/button';
import {RouterLink} from '@angular/router';

@Component({
  selector: 'app-not-found-page',
  imports: [MatButton, RouterLink],
  template: `
    <div class="page">
      <h1 tabindex="-1">No page here</h1>
      <div class="state">
        <p>The address names no page of this console. It may have been cut when it was copied.</p>
        <a matButton="filled" routerLink="/">Go to the start page</a>
      </div>
    </div>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class NotFoundPage {}
