import {HttpClient} from '@angular/common/http';
import {Injectable, inject} from '@angular/core';
import {firstValueFrom} from 'rxjs';
import type {CreatedKey, NewKey} from '../../../shared/api';

export const KEYS_PATH = '/console/keys';

/** `burst` has a default in the contract. */
export type KeyWish = Omit<NewKey, 'burst' | 'scopes'> & {
  readonly scopes: readonly NewKey['scopes'][number][];
  readonly burst?: number;
};

@Injectable({providedIn: 'root'})
export class KeysApi {
  private readonly http = inject(HttpClient);

  create(wish: KeyWish): Promise<CreatedKey> {
    return firstValueFrom(this.http.post<CreatedKey>(KEYS_PATH, wish));
  }

  rotate(id: string, overlapHours: number): Promise<CreatedKey> {
    return firstValueFrom(
      this.http.post<CreatedKey>(`${KEYS_PATH}/${id}/rotations`, {overlapHours}),
    );
  }

  async revoke(id: string): Promise<void> {
    await firstValueFrom(this.http.delete(`${KEYS_PATH}/${id}`));
  }
}
