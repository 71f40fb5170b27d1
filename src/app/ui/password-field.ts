import { ChangeDetectionStrategy, Component, input, signal } from '@angular/core';
import { type FormControl, ReactiveFormsModule } from '@angular/forms';
import { MatIconButton } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatIcon } from '@angular/material/icon';
import { MatInput } from '@angular/material/input';

/** A password that can be pasted, filled in by a password manager, and looked at. */
@Component({
  selector: 'thaw-password-field',
  imports: [MatFormFieldModule, MatIcon, MatIconButton, MatInput, ReactiveFormsModule],
  template: `
    <mat-form-field hideRequiredMarker>
      <mat-label>{{ label() }}</mat-label>
      <input
        matInput
        [type]="isShown() ? 'text' : 'password'"
        [formControl]="control()"
        [attr.autocomplete]="autocomplete()"
        autocapitalize="off"
        spellcheck="false"
        required
      />
      <button
        matIconButton
        matSuffix
        type="button"
        [attr.aria-label]="(isShown() ? 'Hide: ' : 'Show: ') + label()"
        [attr.aria-pressed]="isShown()"
        (click)="isShown.set(!isShown())"
      >
        <mat-icon [svgIcon]="isShown() ? 'visibility-off' : 'visibility'" />
      </button>
      @if (hint()) {
        <mat-hint>{{ hint() }}</mat-hint>
      }
      @if (control().touched && control().hasError('words')) {
        <mat-error>{{ control().getError('words') }}</mat-error>
      }
    </mat-form-field>
  `,
  styles: 'mat-form-field { inline-size: 100%; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PasswordField {
  readonly label = input.required<string>();
  readonly control = input.required<FormControl<string>>();
  readonly autocomplete = input.required<'current-password' | 'new-password'>();
  readonly hint = input('');

  protected readonly isShown = signal(false);
}
