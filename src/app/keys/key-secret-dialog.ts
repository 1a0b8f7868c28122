import {ChangeDetectionStrategy, Component, computed, inject, signal} from '@angular/core';
import {MatButton} from '@angular/material/button';
import {MatCheckbox} from '@angular/material/checkbox';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import type {CreatedKey} from '../../../shared/api';
import {PairsText} from '../format/pairs-text';
import {dayUtc} from '../format/times';
import {CopyButton} from '../states/copy-button';

/** Shows a new key, this once. It closes only after somebody has said that the key is stored. */
@Component({
  selector: 'app-key-secret-dialog',
  imports: [
    CopyButton,
    MatButton,
    MatCheckbox,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    PairsText,
  ],
  template: `
    <h2 mat-dialog-title>Store this key now</h2>
    <mat-dialog-content>
      <p class="lead">This is the only time Fieldstead shows it. If it is lost, rotate the key.</p>
      <div class="secret">
        <code>{{ key.secret }}</code>
        <app-copy-button word="Copy" [isFilled]="true" [text]="key.secret" [label]="copyLabel" />
      </div>
      <dl class="title-block">
        <div>
          <dt>Name</dt>
          <dd>{{ key.name }}</dd>
        </div>
        <div>
          <dt>Limit a month</dt>
          <dd>
            @if (key.monthlyLimit !== null) {
              <app-pairs [count]="key.monthlyLimit" />
            } @else {
              shared
            }
          </dd>
        </div>
        <div>
          <dt>Expires</dt>
          <dd class="num">{{ expires() }}</dd>
        </div>
      </dl>
      <mat-checkbox [checked]="isStored()" (change)="isStored.set($event.checked)">
        I have stored the key where the tool can read it
      </mat-checkbox>
    </mat-dialog-content>
    <mat-dialog-actions>
      <button matButton="filled" mat-dialog-close [disabled]="!isStored()">Close</button>
    </mat-dialog-actions>
  `,
  styleUrl: './key-dialog.scss',
  styles: `
    .secret {
      display: flex;
      align-items: center;
      gap: 16px;
      padding: 16px;
      border: 1.5px solid var(--mat-sys-on-surface);
      border-radius: 4px;
      background: var(--mat-sys-surface);
    }

    code {
      flex: 1;
      overflow-wrap: anywhere;
      font-size: 14px;
      line-height: 22px;
      user-select: all;
    }

    @media (width < 600px) {
      .secret {
        flex-direction: column;
        align-items: stretch;
      }
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class KeySecretDialog {
  protected readonly key = inject<CreatedKey>(MAT_DIALOG_DATA);
  protected readonly copyLabel = `Copy key ending ${this.key.lastFour}`;
  protected readonly isStored = signal(false);
  protected readonly expires = computed(() =>
    this.key.expiresAt ? dayUtc(this.key.expiresAt) : '–',
  );
}
