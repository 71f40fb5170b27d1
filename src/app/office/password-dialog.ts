import { Clipboard } from '@angular/cdk/clipboard';
import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatIcon } from '@angular/material/icon';

export interface NewPassword {
  readonly name: string;
  readonly signInName: string;
  /** Empty when the answer that held it was lost: it is stored nowhere. */
  readonly password: string;
}

/** Shows a new password, this once. Closes only by its button, so that no slip loses it. */
@Component({
  selector: 'thaw-password-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle, MatIcon],
  template: `
    <h2 mat-dialog-title>Password for {{ data.name }}</h2>
    <mat-dialog-content>
      @if (data.password) {
        <p>
          Sign-in name <strong>{{ data.signInName }}</strong>
        </p>
        <p class="password">
          <code>{{ data.password }}</code>
          <button matButton="outlined" type="button" (click)="copy()">
            <mat-icon svgIcon="content-copy" aria-hidden="true" />
            Copy
          </button>
          <span role="status">{{ copied() }}</span>
        </p>
        <p class="caution">
          <mat-icon svgIcon="warning" aria-hidden="true" />
          <span>
            It is shown this once and kept nowhere. Pass it on in person or by voice; at the first
            sign-in it must be replaced.
          </span>
        </p>
      } @else {
        <p class="caution">
          <mat-icon svgIcon="warning" aria-hidden="true" />
          <span>
            It was made, but the answer with the password was lost on the way and cannot be shown
            again. Use "New password" for {{ data.name }}.
          </span>
        </p>
      }
    </mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton="filled" type="button" mat-dialog-close>
        {{ data.password ? 'I have passed it on' : 'Close' }}
      </button>
    </mat-dialog-actions>
  `,
  styles: `
    .password {
      display: flex;
      flex-wrap: wrap;
      align-items: center;
      gap: var(--thaw-gap);
      padding-block: calc(1.5 * var(--thaw-gap));
    }

    code {
      font:
        500 var(--thaw-text-xl) / 1.3 'IBM Plex Sans',
        sans-serif;
      color: var(--thaw-ink);
      user-select: all;
    }

    .mdc-button .mat-icon {
      vertical-align: middle;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PasswordDialog {
  private readonly clipboard = inject(Clipboard);
  protected readonly data = inject<NewPassword>(MAT_DIALOG_DATA);
  protected readonly copied = signal('');

  protected copy(): void {
    this.copied.set(
      this.clipboard.copy(this.data.password)
        ? 'Copied'
        : 'This browser does not allow it: select it and copy by hand',
    );
  }
}
