import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  effect,
  type ElementRef,
  inject,
  input,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import type { StopCard } from '@shared/contract/routes';
import { Drafts } from '../core/drafts';
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
  template: `
    <form (submit)="$event.preventDefault(); submit()" novalidate>
      <h1 #title tabindex="-1">Give back call {{ card().callNumber }}</h1>
      <fieldset>
        <legend>Why?</legend>
        @for (one of reasons; track one) {
          <label class="choice" [class.chosen]="reason() === one">
            <input
              type="radio"
              name="reason"
              [checked]="reason() === one"
              (change)="reason.set(one)"
            />
            {{ words[one] }}
          </label>
        }
      </fieldset>
      <label class="field">
        A few words for the desk
        <textarea
          #field
          rows="2"
          maxlength="300"
          [value]="note()"
          (input)="note.set(field.value)"
        ></textarea>
      </label>
      @if (wrong()) {
        <p class="wrong" role="alert">{{ wrong() }}</p>
      }
      <div class="bar">
        <button type="button" class="second" (click)="closed.emit()">Back</button>
        <button type="submit" class="first" [disabled]="isBusy()">Give it back</button>
      </div>
    </form>
  `,
  styleUrl: './day-form.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DeclineForm {
  private readonly drafts = inject(Drafts);

  readonly card = input.required<StopCard>();
  readonly isBusy = input(false);
  readonly answered = output<DeclineAnswer>();
  readonly closed = output();

  protected readonly reasons = REASONS;
  protected readonly words = DECLINE_WORDS;
  protected readonly reason = signal<DeclineReason | null>(null);
  protected readonly note = signal('');
  protected readonly wrong = signal('');
  private readonly title = viewChild.required<ElementRef<HTMLElement>>('title');

  constructor() {
    let isRestored = false;
    effect(() => {
      const key = formDraftKey('decline', this.card().stop.id);
      const typed = { reason: this.reason(), note: this.note() };
      if (isRestored) this.drafts.save(key, typed);
      else untracked(() => this.restore(key));
      isRestored = true;
    });
    afterNextRender(() => this.title().nativeElement.focus());
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
