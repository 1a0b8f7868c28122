import {ChangeDetectionStrategy, Component} from '@angular/core';
import {MatButton} from '@angular/material/button';

/** Shown in place of a page where the service could not say who is signed in. */
@Component({
  selector: 'app-no-answer-page',
  imports: [MatButton],
  template: `
    <div class="page">
      <h1 tabindex="-1">The service did not answer</h1>
      <div class="state" role="alert">
        <p>The page could not be read. Nothing was changed and nothing was charged.</p>
        <button matButton="filled" (click)="reload()">Try again</button>
      </div>
    </div>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class NoAnswerPage {
  protected reload(): void {
    location.reload();
  }
}
