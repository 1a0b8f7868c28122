import {HttpClient, HttpErrorResponse} from '@angular/common/http';
import {Injectable, computed, inject, signal} from '@angular/core';
import {firstValueFrom} from 'rxjs';
import type {Person, Session as SessionAnswer} from '../../../shared/api';

const PATH = '/console/session';

/** Who is signed in. The session itself is a cookie that scripts cannot read. */
@Injectable({providedIn: 'root'})
export class Session {
  private readonly http = inject(HttpClient);
  private readonly current = signal<SessionAnswer | null>(null);
  private restored: Promise<void> | null = null;
  /** Who was signed in before the session ended; the page still holds what they wrote. */
  private lastPerson: string | null = null;

  readonly person = computed<Person | null>(() => this.current()?.person ?? null);
  readonly csrfToken = computed(() => this.current()?.csrfToken ?? null);
  readonly isOwner = computed(() => this.person()?.role === 'owner');
  readonly canRun = computed(() => ['developer', 'owner'].includes(this.person()?.role ?? ''));

  /** Asks the service once whether the browser still holds a session. */
  restore(): Promise<void> {
    this.restored ??= this.read().catch((error: unknown) => {
      this.restored = null;
      throw error;
    });
    return this.restored;
  }

  /** Signs in. Answers false if another person than before did, so that the page is to be loaded anew. */
  async signIn(email: string, password: string): Promise<boolean> {
    this.current.set(await firstValueFrom(this.http.post<SessionAnswer>(PATH, {email, password})));
    this.restored = Promise.resolve();
    const id = this.person()?.id ?? null;
    return this.lastPerson === null || this.lastPerson === id;
  }

  /** Uses up a one-time link: sets the password of the person it was made for, and signs in. */
  async redeem(link: string, password: string): Promise<void> {
    const answer = this.http.post<SessionAnswer>('/console/password', {link, password});
    this.current.set(await firstValueFrom(answer));
    this.restored = Promise.resolve();
  }

  async signOut(): Promise<void> {
    await firstValueFrom(this.http.delete<void>(PATH));
    this.forget();
  }

  forget(): void {
    this.lastPerson = this.person()?.id ?? this.lastPerson;
    this.current.set(null);
  }

  private async read(): Promise<void> {
    try {
      this.current.set(await firstValueFrom(this.http.get<SessionAnswer>(PATH)));
    } catch (error) {
      // 401 is the answer "nobody is signed in"; anything else is a failure.
      if (!(error instanceof HttpErrorResponse) || error.status !== 401) throw error;
      this.current.set(null);
    }
  }
}
