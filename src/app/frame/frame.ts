import {BreakpointObserver} from '@angular/cdk/layout';
import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  computed,
  effect,
  inject,
} from '@angular/core';
import {toSignal} from '@angular/core/rxjs-interop';
import {MatButton, MatIconButton} from '@angular/material/button';
import {MatMenu, MatMenuItem, MatMenuTrigger} from '@angular/material/menu';
import {MatSidenav, MatSidenavContainer, MatSidenavContent} from '@angular/material/sidenav';
import {RouterLink, RouterLinkActive, RouterOutlet} from '@angular/router';
import {map} from 'rxjs';
import {NumberText} from '../format/number-text';
import {pairs} from '../format/numbers';
import {PairsText} from '../format/pairs-text';
import {fullTime, momentUtc, ownClock} from '../format/times';
import {Icon} from '../icon/icon';
import {initials} from '../session/person';
import {Session} from '../session/session';
import {ColourScheme, type SchemeChoice} from '../theme/colour-scheme';
import {Balance} from './balance';
import {Mark} from './mark';

const BALANCE_EVERY = 60_000;

@Component({
  selector: 'app-frame',
  imports: [
    Icon,
    Mark,
    MatButton,
    MatIconButton,
    MatMenu,
    MatMenuItem,
    MatMenuTrigger,
    MatSidenav,
    MatSidenavContainer,
    MatSidenavContent,
    NumberText,
    PairsText,
    RouterLink,
    RouterLinkActive,
    RouterOutlet,
  ],
  templateUrl: './frame.html',
  styleUrl: './frame.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Frame {
  protected readonly session = inject(Session);
  protected readonly balance = inject(Balance);
  protected readonly scheme = inject(ColourScheme);

  protected readonly isWide = toSignal(
    inject(BreakpointObserver)
      .observe('(min-width: 1024px)')
      .pipe(map(state => state.matches)),
    {initialValue: true},
  );
  protected readonly initials = computed(() => initials(this.session.person()?.name ?? ''));
  protected readonly allowance = computed(() => pairs(this.balance.account()?.allowance ?? 0));
  protected readonly left = computed(() => pairs(this.balance.account()?.left ?? 0));
  protected readonly schemes: readonly {
    choice: SchemeChoice;
    word: string;
    icon: 'computer' | 'light-mode' | 'dark-mode';
  }[] = [
    {choice: 'system', word: 'As the system', icon: 'computer'},
    {choice: 'light', word: 'Light', icon: 'light-mode'},
    {choice: 'dark', word: 'Dark', icon: 'dark-mode'},
  ];

  constructor() {
    // The frame also shows the reference to people who are not signed in.
    this.session.restore().catch(() => undefined);
    effect(() => {
      if (this.session.person() === null) this.balance.forget();
      else void this.balance.refresh();
    });
    const timer = setInterval(() => {
      if (this.session.person() !== null) void this.balance.refresh();
    }, BALANCE_EVERY);
    inject(DestroyRef).onDestroy(() => clearInterval(timer));
  }

  protected readonly resetUtc = momentUtc;
  protected readonly resetOwn = ownClock;
  protected readonly fullTime = fullTime;

  protected skipToContent(event: Event): void {
    event.preventDefault();
    document.querySelector<HTMLElement>('h1')?.focus();
  }

  protected async signOut(): Promise<void> {
    await this.session.signOut();
    // A new page forgets requests and answers, which belong to the person who left.
    location.assign('/sign-in');
  }
}
