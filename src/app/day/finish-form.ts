import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  input,
  output,
  signal,
  untracked,
} from '@angular/core';
import type { StopCard, TechnicianDto } from '@shared/contract/routes';
import { VISIT_OUTCOMES, type VisitOutcome } from '@shared/domain/call-state';
import { PART_WORDS, type Part, PARTS } from '@shared/domain/skills';
import { Drafts } from '../core/drafts';
import { type Choice, ChoiceForm } from './choice-form';
import { formDraftKey } from './day-orders';
import { OUTCOME_CHOICES } from './day-words';

export interface FinishAnswer {
  readonly outcome: VisitOutcome;
  readonly note: string;
  readonly partsUsed: Part[];
}

type Used = Readonly<Partial<Record<Part, number>>>;

/** The contract's own bound on parts of one visit. */
const MOST_PARTS = 20;

/** Ends the visit: what came of it, in plain words, and what it took from the van. */
@Component({
  selector: 'thaw-finish-form',
  imports: [ChoiceForm],
  template: `
    <thaw-choice-form
      [heading]="'Finish call ' + card().callNumber"
      legend="What came of it?"
      [choices]="choices"
      [(choice)]="outcome"
      noteLabel="What you found and did"
      [noteRows]="3"
      [mostNote]="2000"
      [(note)]="note"
      [submitWords]="submitWords()"
      [isBusy]="isBusy()"
      [wrong]="wrong()"
      (submitted)="submit()"
      (closed)="closed.emit()"
    >
      @if (parts().length > 0) {
        <fieldset>
          <legend>Parts used from the van</legend>
          @for (part of parts(); track part) {
            <div class="part">
              <span class="what"
                >{{ words[part] }}
                <span class="soft">{{ technician().van[part] ?? 0 }} on the van</span></span
              >
              <button
                type="button"
                [attr.aria-label]="'One ' + words[part] + ' less'"
                [disabled]="(used()[part] ?? 0) === 0"
                (click)="count(part, -1)"
              >
                <span aria-hidden="true">−</span>
              </button>
              <output [attr.aria-label]="words[part] + ' used'">{{ used()[part] ?? 0 }}</output>
              <button
                type="button"
                [attr.aria-label]="'One ' + words[part] + ' more'"
                [disabled]="total() >= mostParts"
                (click)="count(part, 1)"
              >
                <span aria-hidden="true">+</span>
              </button>
            </div>
          }
        </fieldset>
      }
    </thaw-choice-form>
  `,
  styleUrl: './finish-form.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FinishForm {
  private readonly drafts = inject(Drafts);

  readonly card = input.required<StopCard>();
  readonly technician = input.required<TechnicianDto>();
  readonly isBusy = input(false);
  readonly answered = output<FinishAnswer>();
  readonly closed = output();

  protected readonly choices: readonly Choice<VisitOutcome>[] = OUTCOME_CHOICES.map(
    ({ outcome, label, means }) => ({ value: outcome, words: label, means }),
  );
  protected readonly words = PART_WORDS;
  protected readonly mostParts = MOST_PARTS;
  protected readonly outcome = signal<VisitOutcome | null>(null);
  protected readonly note = signal('');
  protected readonly used = signal<Used>({});
  protected readonly wrong = signal('');

  /** What the van carries, and what this call was thought to need though the van has none. */
  protected readonly parts = computed(() =>
    PARTS.filter(
      (part) => (this.technician().van[part] ?? 0) > 0 || this.card().parts.includes(part),
    ),
  );
  protected readonly total = computed(() =>
    Object.values(this.used()).reduce((sum, count) => sum + count, 0),
  );
  protected readonly submitWords = computed(() => {
    const chosen = OUTCOME_CHOICES.find(({ outcome }) => outcome === this.outcome());
    return chosen ? `Finish: ${chosen.label.toLowerCase()}` : 'Finish';
  });

  constructor() {
    let isRestored = false;
    effect(() => {
      const key = formDraftKey('finish', this.card().stop.id);
      const typed = { outcome: this.outcome(), note: this.note(), used: this.used() };
      if (isRestored) this.drafts.save(key, typed);
      else untracked(() => this.restore(key));
      isRestored = true;
    });
  }

  protected count(part: Part, step: number): void {
    this.used.update((used) => ({ ...used, [part]: Math.max(0, (used[part] ?? 0) + step) }));
  }

  protected submit(): void {
    const outcome = this.outcome();
    if (outcome === null) {
      this.wrong.set('Choose what came of it first.');
      return;
    }
    if (outcome === 'parts-on-order' && this.note().trim() === '') {
      this.wrong.set('Say which part, so that the desk orders the right one.');
      return;
    }
    const used = this.used();
    this.answered.emit({
      outcome,
      note: this.note().trim(),
      partsUsed: PARTS.flatMap((part) => Array<Part>(used[part] ?? 0).fill(part)),
    });
  }

  private restore(key: string): void {
    const draft = this.drafts.load(key, isDraft);
    if (!draft) return;
    this.outcome.set(draft.outcome);
    this.note.set(draft.note);
    this.used.set(draft.used);
  }
}

interface Draft {
  readonly outcome: VisitOutcome | null;
  readonly note: string;
  readonly used: Used;
}

const isDraft = (value: unknown): value is Draft =>
  typeof value === 'object' &&
  value !== null &&
  'note' in value &&
  typeof value.note === 'string' &&
  'outcome' in value &&
  (value.outcome === null || (VISIT_OUTCOMES as readonly unknown[]).includes(value.outcome)) &&
  'used' in value &&
  typeof value.used === 'object' &&
  value.used !== null;
