import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';

export interface Confirmation {
  readonly title: string;
  readonly words: string;
  /** What the button says that does it: "Close the storm". */
  readonly action: string;
}

/** Asks before something that cannot be taken back. Closes with `true` only by its own button. */
@Component({
  selector: 'thaw-confirm-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle],
  template: `
    <h2 mat-dialog-title>{{ data.title }}</h2>
    <mat-dialog-content>{{ data.words }}</mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton type="button" cdkFocusInitial mat-dialog-close>Leave it</button>
      <button matButton="filled" type="button" [mat-dialog-close]="true">{{ data.action }}</button>
    </mat-dialog-actions>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ConfirmDialog {
  protected readonly data = inject<Confirmation>(MAT_DIALOG_DATA);
}
