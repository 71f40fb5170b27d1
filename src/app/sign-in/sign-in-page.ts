import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  input,
  signal,
  viewChild,
} from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatIcon } from '@angular/material/icon';
import { MatInput } from '@angular/material/input';
import { Router } from '@angular/router';
import { Clock } from '../core/clock';
import { ProblemError, problemWords } from '../core/problem-error';
import { isWorthReturningTo, Session } from '../core/session';
import { duration } from '../core/zone';
import { PasswordField } from '../ui/password-field';

@Component({
  selector: 'thaw-sign-in-page',
  imports: [MatButton, MatFormFieldModule, MatIcon, MatInput, PasswordField, ReactiveFormsModule],
  templateUrl: './sign-in-page.html',
  styleUrl: './sign-in-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SignInPage {
  private readonly router = inject(Router);
  private readonly clock = inject(Clock);
  protected readonly session = inject(Session);

  /** The address that was asked for, from the query. */
  readonly back = input<string>();

  protected readonly form = new FormGroup({
    signInName: new FormControl('', { nonNullable: true }),
    password: new FormControl('', { nonNullable: true }),
  });
  protected readonly isBusy = signal(false);
  private readonly refused = signal<{ words: string; until: number | null } | null>(null);

  /** What stands above the form, with the time still to wait when there is one. */
  protected readonly trouble = computed(() => {
    const refused = this.refused();
    if (!refused) return null;
    if (refused.until === null) return refused.words;
    const leftMs = refused.until - this.clock.now();
    return leftMs > 0
      ? `Too many attempts. Wait ${waitWords(leftMs)} and try again. Nothing is locked for good.`
      : 'You can try again now.';
  });

  private readonly nameField = viewChild.required<ElementRef<HTMLInputElement>>('nameField');

  constructor() {
    afterNextRender(() => this.nameField().nativeElement.focus());
  }

  protected async signIn(): Promise<void> {
    const { signInName, password } = this.form.getRawValue();
    if (!signInName.trim() || !password) {
      this.refused.set({
        words: 'Fill in both your e-mail address and your password.',
        until: null,
      });
      return;
    }
    this.isBusy.set(true);
    this.refused.set(null);
    try {
      await this.session.signIn(signInName.trim(), password);
    } catch (error) {
      this.refused.set(this.refusal(error));
      return;
    } finally {
      this.isBusy.set(false);
    }
    const back = this.back();
    const mustChange = this.session.user()?.mustChangePassword;
    const target = back && isWorthReturningTo(back) && !mustChange ? back : this.session.home();
    await this.router.navigateByUrl(target);
  }

  private refusal(error: unknown): { words: string; until: number | null } {
    if (!(error instanceof ProblemError)) return { words: problemWords(error), until: null };
    if (error.code === 'too-many-attempts' && error.retryAfterSeconds !== null) {
      return { words: error.message, until: this.clock.exact() + error.retryAfterSeconds * 1000 };
    }
    return { words: error.message, until: null };
  }
}

/** Seconds matter only when there are few of them. */
const waitWords = (leftMs: number): string =>
  leftMs < 60_000 ? `${Math.ceil(leftMs / 10_000) * 10} seconds` : duration(leftMs + 59_999);
