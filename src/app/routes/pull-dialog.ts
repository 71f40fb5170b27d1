import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import type { StopView } from './route-rows';

export interface PullQuestion {
  readonly view: StopView;
  readonly technicianName: string;
}

/** Takes a stop off its route, with the reason that the technician is told. */
@Component({
  selector: 'thaw-pull-dialog',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatFormFieldModule,
    MatInput,
  ],
  template: `
    <h2 mat-dialog-title>Pull call {{ question.view.number }} off its route</h2>
    <form (submit)="$event.preventDefault(); submit()" novalidate>
      <mat-dialog-content>
        <p>
          The call waits again.
          @if (question.view.stop.state === 'accepted') {
            {{ question.technicianName }} has accepted it and is told why it is taken back.
          } @else if (question.view.stop.state === 'offered') {
            {{ question.technicianName }} has it on offer and is told why it is taken back.
          }
        </p>
        <mat-form-field>
          <mat-label>Reason</mat-label>
          <input
            #field
            matInput
            type="text"
            maxlength="300"
            autocomplete="off"
            cdkFocusInitial
            [value]="reason()"
            (input)="reason.set(field.value)"
          />
          @if (tried() && reason().trim() === '') {
            <mat-hint class="wrong">A few words, for the technician and the record.</mat-hint>
          }
        </mat-form-field>
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Leave it</button>
        <button matButton="filled" type="submit">Pull it</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: calc(1.5 * var(--thaw-gap));
      inline-size: min(460px, 80vw);
    }
    .wrong {
      color: var(--thaw-danger);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PullDialog {
  private readonly dialog = inject<MatDialogRef<PullDialog, string>>(MatDialogRef);
  protected readonly question = inject<PullQuestion>(MAT_DIALOG_DATA);
  protected readonly reason = signal('');
  protected readonly tried = signal(false);

  protected submit(): void {
    this.tried.set(true);
    const reason = this.reason().trim();
    if (reason !== '') this.dialog.close(reason);
  }
}
