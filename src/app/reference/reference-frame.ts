import {ChangeDetectionStrategy, Component, ViewEncapsulation} from '@angular/core';
import {RouterLink, RouterLinkActive, RouterOutlet} from '@angular/router';

/** The prose pages. Their styles reach into the pages, which are nothing but text and tables. */
@Component({
  selector: 'app-reference-frame',
  imports: [RouterLink, RouterLinkActive, RouterOutlet],
  template: `
    <div class="page">
      <nav aria-label="Reference">
        @for (page of pages; track page.path) {
          <a
            class="chip"
            [routerLink]="page.path"
            routerLinkActive
            #link="routerLinkActive"
            ariaCurrentWhenActive="page"
            [routerLinkActiveOptions]="{exact: true}"
            >{{ page.title }}</a
          >
        }
        <a class="chip" href="/docs">API reference</a>
      </nav>
      <div class="prose"><router-outlet /></div>
    </div>
  `,
  styleUrl: './reference-frame.scss',
  encapsulation: ViewEncapsulation.None,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ReferenceFrame {
  protected readonly pages = [
    {path: '/reference', title: 'Overview'},
    {path: '/reference/units', title: 'Units and frames'},
    {path: '/reference/accuracy', title: 'Accuracy and cautions'},
    {path: '/reference/limits', title: 'Cost and limits'},
    {path: '/reference/errors', title: 'Errors'},
  ];
}
