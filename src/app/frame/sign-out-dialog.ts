import { ChangeDetectionStrategy, Component } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';

/** Asked only while unfinished work is kept in this browser. */
@Component({
  selector: 'thaw-sign-out-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle],
  template: `
    <h2 mat-dialog-title>Unfinished work is kept in this browser</h2>
    <mat-dialog-content>
      A call that was begun but not taken is still here. Keep it until you sign in again, or throw
      it away?
    </mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton type="button" mat-dialog-close>Stay signed in</button>
      <button matButton type="button" [mat-dialog-close]="'clear-drafts'">
        Throw it away and sign out
      </button>
      <button matButton="filled" type="button" [mat-dialog-close]="'keep-drafts'">
        Keep it and sign out
      </button>
    </mat-dialog-actions>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SignOutDialog {}
