import {DOCUMENT, Injectable, computed, effect, inject, signal} from '@angular/core';

export type SchemeChoice = 'system' | 'light' | 'dark';

const STORAGE_KEY = 'fieldstead-scheme';
const CHOICES: readonly SchemeChoice[] = ['system', 'light', 'dark'];

/** Light or dark: what the system prefers until somebody chooses otherwise on this machine. */
@Injectable({providedIn: 'root'})
export class ColourScheme {
  private readonly document = inject(DOCUMENT);
  private readonly systemIsDark = signal(false);

  readonly choice = signal<SchemeChoice>(this.stored());
  readonly isDark = computed(() =>
    this.choice() === 'system' ? this.systemIsDark() : this.choice() === 'dark',
  );

  constructor() {
    const query = this.document.defaultView?.matchMedia?.('(prefers-color-scheme: dark)');
    this.systemIsDark.set(query?.matches ?? false);
    query?.addEventListener('change', event => this.systemIsDark.set(event.matches));
    this.apply(this.choice());
    effect(() => this.apply(this.choice()));
  }

  choose(choice: SchemeChoice): void {
    this.choice.set(choice);
    try {
      this.document.defaultView?.localStorage.setItem(STORAGE_KEY, choice);
    } catch {
      // Storage is off in this browser: the choice then lasts until the page is closed.
    }
  }

  private apply(choice: SchemeChoice): void {
    if (choice === 'system') delete this.document.documentElement.dataset['scheme'];
    else this.document.documentElement.dataset['scheme'] = choice;
  }

  private stored(): SchemeChoice {
    try {
      const value = this.document.defaultView?.localStorage.getItem(STORAGE_KEY);
      return CHOICES.find(choice => choice === value) ?? 'system';
    } catch {
      // Storage is off in this browser.
      return 'system';
    }
  }
}
