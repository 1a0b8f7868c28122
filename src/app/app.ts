import {ChangeDetectionStrategy, Component, DOCUMENT, inject} from '@angular/core';
import {takeUntilDestroyed} from '@angular/core/rxjs-interop';
import {NavigationEnd, Router, RouterOutlet} from '@angular/router';
import {filter, map, pairwise} from 'rxjs';
import {ColourScheme} from './theme/colour-scheme';

const pathOf = (url: string): string => url.split(/[?#]/)[0];

@Component({
  selector: 'app-root',
  imports: [RouterOutlet],
  template: '<router-outlet />',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class App {
  constructor() {
    inject(ColourScheme);
    const document = inject(DOCUMENT);
    inject(Router)
      .events.pipe(
        filter(event => event instanceof NavigationEnd),
        map(event => pathOf(event.urlAfterRedirects)),
        pairwise(),
        filter(([before, after]) => before !== after),
        takeUntilDestroyed(),
      )
      // The new page is in the document after the next frame; its heading tells where one has arrived.
      .subscribe(() =>
        requestAnimationFrame(() => document.querySelector<HTMLElement>('h1')?.focus()),
      );
  }
}
