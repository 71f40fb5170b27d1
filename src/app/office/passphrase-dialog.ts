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

export interface NewPassphrase {
  readonly name: string;
  readonly signInName: string;
  /** Empty when the answer that held it was lost: it is stored nowhere. */
  readonly passphrase: string;
}

/** Shows a new passphrase, this once. Closes only by its button, so that no slip loses it. */
@Component({
  selector: 'thaw-passphrase-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle, MatIcon],
  template: `
    <h2 mat-dialog-title>Passphrase for {{ data.name }}</h2>
    <mat-dialog-content>
      @if (data.passphrase) {
        <p>
          Sign-in name <strong>{{ data.signInName }}</strong>
        </p>
        <p class="passphrase">
          <code>{{ data.passphrase }}</code>
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
            It was made, but the answer with the passphrase was lost on the way and cannot be shown
            again. Use "New passphrase" for {{ data.name }}.
          </span>
        </p>
      }
    </mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton="filled" type="button" mat-dialog-close>
        {{ data.passphrase ? 'I have passed it on' : 'Close' }}
      </button>
    </mat-dialog-actions>
  `,
  styles: `
    .passphrase {
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
export class PassphraseDialog {
  private readonly clipboard = inject(Clipboard);
  protected readonly data = inject<NewPassphrase>(MAT_DIALOG_DATA);
  protected readonly copied = signal('');

  protected copy(): void {
    this.copied.set(
      this.clipboard.copy(this.data.passphrase)
        ? 'Copied'
        : 'This browser does not allow it: select it and copy by hand',
    );
  }
}
