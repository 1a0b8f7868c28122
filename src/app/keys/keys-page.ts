import {httpResource} from '@angular/common/http';
import {ChangeDetectionStrategy, Component, computed, inject, input} from '@angular/core';
import {MatButton, MatIconButton} from '@angular/material/button';
import {MatDialog} from '@angular/material/dialog';
import {MatMenu, MatMenuContent, MatMenuItem, MatMenuTrigger} from '@angular/material/menu';
import {Router} from '@angular/router';
import {firstValueFrom} from 'rxjs';
import type {CreatedKey, Key} from '../../../shared/api';
import {NumberText} from '../format/number-text';
import {headOf, pairsScale} from '../format/pairs-scale';
import {Icon} from '../icon/icon';
import {problemOf} from '../problem/problem';
import {ProblemView} from '../problem/problem-view';
import {Session} from '../session/session';
import {Announcer} from '../states/announcer';
import {CreateKeyDialog} from './create-key-dialog';
import {keyRows} from './key-rows';
import {KeySecretDialog} from './key-secret-dialog';
import {KEYS_PATH} from './keys-api';
import {RevokeKeyDialog} from './revoke-key-dialog';
import {RotateKeyDialog} from './rotate-key-dialog';
import {StateMark} from './state-mark';

const WIDTH = '620px';

@Component({
  selector: 'app-keys-page',
  imports: [
    Icon,
    MatButton,
    MatIconButton,
    MatMenu,
    MatMenuContent,
    MatMenuItem,
    MatMenuTrigger,
    NumberText,
    ProblemView,
    StateMark,
  ],
  templateUrl: './keys-page.html',
  styleUrl: './keys-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class KeysPage {
  private readonly dialog = inject(MatDialog);
  private readonly announcer = inject(Announcer);
  private readonly router = inject(Router);
  protected readonly session = inject(Session);

  /** Filters, from the address: "ended" or "in-use" is left out, and a part of the name or last four. */
  readonly hide = input<string>();
  readonly q = input<string>();

  protected readonly list = httpResource<{readonly keys: readonly Key[]}>(() =>
    this.session.isOwner() ? KEYS_PATH : undefined,
  );
  private readonly all = computed(() =>
    this.list.hasValue() ? keyRows(this.list.value().keys, new Date()) : [],
  );
  protected readonly problem = computed(() => {
    const error = this.list.error();
    return error ? problemOf(error) : null;
  });
  protected readonly inUse = computed(() => this.all().filter(row => !row.isEnded).length);
  protected readonly ended = computed(() => this.all().filter(row => row.isEnded).length);
  protected readonly rows = computed(() => {
    const sought = (this.q() ?? '').trim().toLowerCase();
    return this.all().filter(
      ({key, isEnded}) =>
        !(isEnded ? this.hide() === 'ended' : this.hide() === 'in-use') &&
        (key.name.toLowerCase().includes(sought) || key.lastFour.toLowerCase().startsWith(sought)),
    );
  });
  protected readonly limitScale = computed(() =>
    pairsScale(Math.max(0, ...this.all().map(({key}) => key.monthlyLimit ?? 0))),
  );
  protected readonly spentScale = computed(() =>
    pairsScale(Math.max(0, ...this.all().map(({key}) => key.spent))),
  );
  protected readonly limitHead = computed(() => headOf('Limit', this.limitScale()));
  protected readonly spentHead = computed(() => headOf('Spent', this.spentScale()));
  protected readonly sums = computed(() => {
    const keys = this.rows().map(row => row.key);
    return {
      spent: keys.reduce((sum, key) => sum + key.spent, 0),
      limit: keys.reduce((sum, key) => sum + (key.monthlyLimit ?? 0), 0),
    };
  });

  protected toggle(part: 'ended' | 'in-use'): void {
    this.filter({hide: this.hide() === part ? null : part});
  }

  protected seek(event: Event): void {
    this.filter({q: (event.target as HTMLInputElement).value || null});
  }

  protected async create(): Promise<void> {
    const dialog = this.dialog.open<CreateKeyDialog, void, CreatedKey>(CreateKeyDialog, {
      width: WIDTH,
    });
    await this.showSecret(await firstValueFrom(dialog.afterClosed()));
  }

  protected async rotate(key: Key): Promise<void> {
    const dialog = this.dialog.open<RotateKeyDialog, Key, CreatedKey>(RotateKeyDialog, {
      data: key,
      width: WIDTH,
    });
    await this.showSecret(await firstValueFrom(dialog.afterClosed()));
  }

  protected async revoke(key: Key): Promise<void> {
    const dialog = this.dialog.open<RevokeKeyDialog, Key, boolean>(RevokeKeyDialog, {
      data: key,
      width: WIDTH,
    });
    if (!(await firstValueFrom(dialog.afterClosed()))) return;
    this.announcer.say(`${key.name} is revoked`);
    this.list.reload();
  }

  private async showSecret(key: CreatedKey | undefined): Promise<void> {
    if (!key) return;
    this.list.reload();
    const dialog = this.dialog.open(KeySecretDialog, {data: key, width: WIDTH, disableClose: true});
    await firstValueFrom(dialog.afterClosed());
  }

  private filter(queryParams: Record<string, string | null>): void {
    void this.router.navigate([], {queryParams, queryParamsHandling: 'merge', replaceUrl: true});
  }
}
