import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatCheckbox } from '@angular/material/checkbox';
import { MatIcon } from '@angular/material/icon';
import { Router, RouterLink } from '@angular/router';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { PasswordField } from '../ui/password-field';

/** As the contract's `Password`: NIST SP 800-63B-4 (2025), for a password that stands alone. */
const LEAST_LENGTH = 15;

@Component({
  selector: 'thaw-password-page',
  imports: [MatButton, MatCheckbox, MatIcon, PasswordField, ReactiveFormsModule, RouterLink],
  templateUrl: './password-page.html',
  styleUrl: './password-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PasswordPage {
  private readonly api = inject(Api);
  private readonly router = inject(Router);
  private readonly announce = inject(Announce);
  protected readonly session = inject(Session);

  protected readonly form = new FormGroup({
    current: new FormControl('', { nonNullable: true }),
    next: new FormControl('', { nonNullable: true }),
    endOtherSessions: new FormControl(true, { nonNullable: true }),
  });
  protected readonly isBusy = signal(false);
  protected readonly trouble = signal<string | null>(null);

  protected async change(): Promise<void> {
    this.trouble.set(null);
    const { next } = this.form.controls;
    const missing = LEAST_LENGTH - next.value.length;
    if (missing > 0) {
      next.setErrors({
        words: `${missing} more character${missing === 1 ? '' : 's'} needed.`,
      });
      next.markAsTouched();
      return;
    }
    this.isBusy.set(true);
    try {
      await this.api.call('changePassword', { body: this.form.getRawValue() });
    } catch (error) {
      this.show(error);
      return;
    } finally {
      this.isBusy.set(false);
    }
    this.session.passwordChanged();
    this.announce.notice('Your password has been changed.');
    await this.router.navigateByUrl(this.session.home());
  }

  private show(error: unknown): void {
    const words = error instanceof ProblemError ? error.fieldErrors.get('/next') : undefined;
    if (words) {
      this.form.controls.next.setErrors({ words });
      this.form.controls.next.markAsTouched();
    } else {
      this.trouble.set(problemWords(error));
    }
  }
}
