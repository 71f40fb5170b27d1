import { ChangeDetectionStrategy, Component, inject, Injectable } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialog,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import { Router } from '@angular/router';
import { readDangers } from '@shared/domain/night-log/danger-words';
import { readUnits } from '@shared/domain/night-log/read-units';
import { formatPhone } from '@shared/domain/phone-number';
import { firstValueFrom } from 'rxjs';
import { newId } from '../core/api';
import { Drafts } from '../core/drafts';
import {
  blankDraft,
  type IntakeDraft,
  isIntakeDraft,
  isWorthKeeping,
  newUnit,
} from '../intake/intake-draft';

/** Under which the intake keeps the call that is being taken. */
const INTAKE_DRAFT = 'intake';
/** The contract's limits. */
const MOST_REMARK = 2000;
const MOST_NAME = 120;
const MOST_ADDRESS = 160;

/** What is known of a caller before anybody has spoken to them. Empty where it is not. */
export interface CallerFacts {
  readonly phone: string;
  readonly name: string;
  readonly address: string;
  /** Cold units as somebody wrote them: "fridge, chest freezer". */
  readonly units: string;
  /** Every word that came, so that nothing is lost. */
  readonly remark: string;
}

/** Begins a call in the intake with what is known already. */
@Injectable({ providedIn: 'root' })
export class IntakePrefill {
  private readonly drafts = inject(Drafts);
  private readonly dialogs = inject(MatDialog);
  private readonly router = inject(Router);

  /**
   * Goes to the intake with these facts filled in; a call that is being taken already is only
   * replaced when the person says so.
   *
   * @returns the id that the call will have; `null` when the other call was kept
   */
  async take(facts: CallerFacts): Promise<string | null> {
    const begun = this.drafts.load(INTAKE_DRAFT, isIntakeDraft);
    if (begun && isWorthKeeping(begun)) {
      const asked = this.dialogs.open<ReplaceDraftDialog, IntakeDraft, 'go-on' | 'replace'>(
        ReplaceDraftDialog,
        { data: begun },
      );
      const answer = await firstValueFrom(asked.afterClosed());
      if (answer === 'go-on') await this.toIntake();
      if (answer !== 'replace') return null;
    }
    const draft = draftFrom(facts);
    this.drafts.save(INTAKE_DRAFT, draft);
    await this.toIntake();
    return draft.callId;
  }

  private toIntake(): Promise<boolean> {
    return this.router.navigate(['/board'], { queryParams: { call: 'new' } });
  }
}

/** The intake's draft; what could not be understood is left for the person to ask. */
export function draftFrom({ phone, name, address, units, remark }: CallerFacts): IntakeDraft {
  const blank = blankDraft(newId);
  const said = units.trim() === '' ? [] : readUnits(units, '').units;
  return {
    ...blank,
    phone: phone === '' ? '' : formatPhone(phone),
    name: name.slice(0, MOST_NAME),
    address: { ...blank.address, text: address.slice(0, MOST_ADDRESS) },
    units: said.map(({ kind }) => newUnit(kind, newId())),
    remark: remark.slice(0, MOST_REMARK),
    danger: readDangers(remark).length > 0,
  };
}

/** Asked only while a call that somebody would miss is being taken. */
@Component({
  selector: 'thaw-replace-draft-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle],
  template: `
    <h2 mat-dialog-title>A call is being taken already</h2>
    <mat-dialog-content>
      {{ who }} is in the intake and is not saved yet. Go on with that call, or throw it away and
      take this one?
    </mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton type="button" mat-dialog-close>Stay here</button>
      <button matButton type="button" [mat-dialog-close]="'replace'">
        Throw it away, take this one
      </button>
      <button matButton="filled" type="button" [mat-dialog-close]="'go-on'">
        Go on with that call
      </button>
    </mat-dialog-actions>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ReplaceDraftDialog {
  private readonly draft = inject<IntakeDraft>(MAT_DIALOG_DATA);
  protected readonly who =
    [this.draft.name, this.draft.phone].filter((part) => part !== '').join(', ') ||
    'A call without a name';
}
