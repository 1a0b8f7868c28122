import {Injectable, inject} from '@angular/core';
import {LiveAnnouncer} from '@angular/cdk/a11y';

/** Says what happened to those who cannot see it; one region for all pages, also above dialogs. */
@Injectable({providedIn: 'root'})
export class Announcer {
  private readonly live = inject(LiveAnnouncer);

  say(message: string): void {
    void this.live.announce(message, 'polite');
  }
}
