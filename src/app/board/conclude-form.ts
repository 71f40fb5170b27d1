import {
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  input,
  linkedSignal,
  signal,
  viewChild,
} from '@angular/core';
import {
  type Conclusion,
  OUTCOME_WORDS,
  STATE_AFTER,
} from '@shared/domain/phone-check/phone-check';
import { isOpen, type PhoneOutcome } from '@shared/domain/call-state';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { type Choice, Choices } from '../intake/choices';
import { CallModel } from './call-model';

type Outcome = PhoneOutcome | 'waiting';

const OUTCOMES: readonly Choice<Outcome>[] = [
  { value: 'waiting', label: 'Needs a visit' },
  { value: 'running-again', label: 'Running again' },
  { value: 'referred', label: 'Referred' },
  { value: 'cancelled', label: 'Cancelled' },
  { value: 'duplicate', label: 'Duplicate' },
];

/** Ends the work on the phone: settled, or waiting for a visit. It starts from what the check found. */
@Component({
  selector: 'thaw-conclude-form',
  imports: [Choices],
  templateUrl: './conclude-form.html',
  styleUrls: ['../intake/fields.scss', './conclude-form.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ConcludeForm {
  private readonly board = inject(BoardStore);
  private readonly announce = inject(Announce);
  protected readonly call = inject(CallModel);

  /** What the phone check has come to; its outcome is proposed, never forced. */
  readonly check = input.required<Conclusion | null>();

  protected readonly outcomes = OUTCOMES;
  protected readonly outcome = linkedSignal<Outcome>(() => proposedOutcome(this.check()));
  protected readonly reason = linkedSignal<string>(() => proposedReason(this.check()));
  protected readonly duplicateOf = signal('');
  protected readonly tried = signal(false);
  protected readonly isEnding = signal(false);

  private readonly reasonField = viewChild.required<ElementRef<HTMLInputElement>>('reasonField');

  protected readonly original = computed(() => {
    const number = Number(this.duplicateOf().trim());
    const own = this.call.row()?.id;
    return [...this.board.calls().values()].find(
      (call) => call.number === number && call.id !== own && isOpen(call.state),
    );
  });
  protected readonly error = computed(() =>
    this.tried() && this.outcome() === 'duplicate' && !this.original()
      ? 'Which open call stays? Write its number.'
      : '',
  );

  focus(): void {
    this.reasonField().nativeElement.focus();
  }

  protected async submit(): Promise<void> {
    this.tried.set(true);
    const outcome = this.outcome();
    const reason = this.reason().trim();
    const duplicateOfId = outcome === 'duplicate' ? this.original()?.id : undefined;
    if (outcome === 'duplicate' && duplicateOfId === undefined) return;
    if (this.isEnding()) return;
    this.isEnding.set(true);
    try {
      await this.end({
        outcome,
        reason,
        ...(duplicateOfId === undefined ? {} : { duplicateOfId }),
      });
    } finally {
      this.isEnding.set(false);
    }
  }

  /** The last answer may still be on its way when Enter ends the check; the end comes after it. */
  private async end(conclusion: Parameters<CallModel['conclude']>[0]): Promise<void> {
    const call = this.call.row();
    await this.call.whenIdle();
    if (this.call.row()?.id !== call?.id) {
      this.announce.notice(`Call ${call?.number ?? ''} was left before its check had ended.`);
    } else if (await this.call.conclude(conclusion)) {
      this.announce.notice(`Call ${call?.number ?? ''}: ${labelOf(conclusion.outcome)}.`);
    }
  }
}

const labelOf = (outcome: Outcome): string =>
  OUTCOMES.find(({ value }) => value === outcome)?.label ?? outcome;

function proposedOutcome(check: Conclusion | null): Outcome {
  if (!check || check.outcome === null) return 'waiting';
  const state = STATE_AFTER[check.outcome];
  return state === 'running-again' || state === 'referred' ? state : 'waiting';
}

function proposedReason(check: Conclusion | null): string {
  if (!check || check.outcome === null) return '';
  if (check.danger) return `${check.danger.title}: ${check.danger.whoToCall}`.slice(0, 300);
  const referral = check.referTo === null ? '' : `, to ${check.referTo}`;
  return `Phone check: ${OUTCOME_WORDS[check.outcome].toLowerCase()}${referral}`;
}
