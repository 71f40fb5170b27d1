import {
  ChangeDetectionStrategy,
  Component,
  effect,
  inject,
  input,
  output,
  signal,
  untracked,
} from '@angular/core';
import type { StopCard } from '@shared/contract/routes';
import { Drafts } from '../core/drafts';
import { type Choice, ChoiceForm } from './choice-form';
import { formDraftKey } from './day-orders';
import { DECLINE_WORDS, type DeclineReason } from './day-words';

export interface DeclineAnswer {
  readonly reason: DeclineReason;
  readonly note: string;
}

const REASONS = Object.keys(DECLINE_WORDS) as DeclineReason[];

/** Gives a stop back, with the reason that the desk needs to place it again. */
@Component({
  selector: 'thaw-decline-form',
  imports: [ChoiceForm],
  template: `
    <thaw-choice-form
      [heading]="'Give back call ' + card().callNumber"
      legend="Why?"
      [choices]="choices"
      [(choice)]="reason"
      [mostNote]="300"
      [(note)]="note"
      submitWords="Give it back"
      [isBusy]="isBusy()"
      [wrong]="wrong()"
      (submitted)="submit()"
      (closed)="closed.emit()"
    />
  `,
  styles: ':host { display: contents; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DeclineForm {
  private readonly drafts = inject(Drafts);

  readonly card = input.required<StopCard>();
  readonly isBusy = input(false);
  readonly answered = output<DeclineAnswer>();
  readonly closed = output();

  protected readonly choices: readonly Choice<DeclineReason>[] = REASONS.map((value) => ({
    value,
    words: DECLINE_WORDS[value],
  }));
  protected readonly reason = signal<DeclineReason | null>(null);
  protected readonly note = signal('');
  protected readonly wrong = signal('');

  constructor() {
    let isRestored = false;
    effect(() => {
      const key = formDraftKey('decline', this.card().stop.id);
      const typed = { reason: this.reason(), note: this.note() };
      if (isRestored) this.drafts.save(key, typed);
      else untracked(() => this.restore(key));
      isRestored = true;
    });
  }

  protected submit(): void {
    const reason = this.reason();
    const note = this.note().trim();
    if (reason === null) this.wrong.set('Choose a reason first.');
    else if (reason === 'other' && note === '') this.wrong.set('Say in a few words what it is.');
    else this.answered.emit({ reason, note });
  }

  private restore(key: string): void {
    const draft = this.drafts.load(key, isDraft);
    if (!draft) return;
    this.reason.set(draft.reason);
    this.note.set(draft.note);
  }
}

const isDraft = (value: unknown): value is { reason: DeclineReason | null; note: string } =>
  typeof value === 'object' &&
  value !== null &&
  'note' in value &&
  typeof value.note === 'string' &&
  'reason' in value &&
  (value.reason === null || (REASONS as readonly unknown[]).includes(value.reason));
