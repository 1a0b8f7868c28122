import {HttpClient} from '@angular/common/http';
import {Injectable, inject} from '@angular/core';
import type {Observable} from 'rxjs';
import type {ConsoleUsage} from '../../../shared/api';

@Injectable({providedIn: 'root'})
export class UsageApi {
  private readonly http = inject(HttpClient);

  /** What the account spent from day `since` to day `until`, both in UTC, and what is left of the month. */
  read(since: string, until: string): Observable<ConsoleUsage> {
    return this.http.get<ConsoleUsage>('/console/usage', {params: {since, until}});
  }
}
