import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  ElementRef,
  inject,
  Injector,
  output,
  signal,
  untracked,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { UnitFacts } from '@shared/contract/calls';
import { CAUSES, LIKELIHOOD_WORDS } from '@shared/domain/phone-check/causes';
import { CAUTIONS } from '@shared/domain/phone-check/cautions';
import {
  concludeCall,
  nextOfCall,
  stepsOfCall,
  type UnitStep,
} from '@shared/domain/phone-check/call-check';
import { isAnswerTo, OUTCOME_WORDS } from '@shared/domain/phone-check/phone-check';
import type { Answer, Question } from '@shared/domain/phone-check/question';
import { PART_WORDS } from '@shared/domain/skills';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { Drafts } from '../core/drafts';
import { CallModel } from './call-model';
import { type CheckDraft, checkKey, EMPTY_CHECK, isCheckDraft, timerWords } from './check-draft';
import { UNIT_WORDS } from './compartment-words';
import { SKILL_WORDS } from './queue-words';

/**
 * The phone check of the open call: one question at a time, safety first, answered by a digit or
 * a letter; one unit after the other, and what concerns the whole home once. Answers and running timers survive a reload; the outcome is handed to the conclusion.
 */
@Component({
  selector: 'thaw-phone-check-panel',
  imports: [MatIcon],
  templateUrl: './phone-check-panel.html',
  styleUrls: ['../intake/fields.scss', './phone-check-panel.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { tabindex: '-1', '(keydown)': 'press($event)' },
})
export class PhoneCheckPanel {
  protected readonly call = inject(CallModel);
  private readonly clock = inject(Clock);
  private readonly drafts = inject(Drafts);
  private readonly announce = inject(Announce);
  private readonly injector = inject(Injector);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  /** The check has come to its end and the dispatcher goes on to write it down. */
  readonly finished = output();

  private readonly draft = signal<CheckDraft>(EMPTY_CHECK);
  private readonly draftOf = signal<string | null>(null);
  private readonly second = signal(this.clock.exact());
  private isSending = false;

  protected readonly cautions = CAUTIONS;
  protected readonly likelihoodWords = LIKELIHOOD_WORDS;
  protected readonly causes = CAUSES;
  protected readonly partWords = PART_WORDS;
  protected readonly skillWords = SKILL_WORDS;

  private readonly units = computed(() => this.call.detail()?.units ?? []);
  private readonly asked = computed(() => nextOfCall(this.draft().answers, this.units()));
  /** The units of the call in the order in which they are asked about, and how far each is. */
  protected readonly unitRows = computed(() => {
    const ofUnits = this.conclusion()?.ofUnits ?? [];
    const asked = this.asked()?.unit.id;
    return this.units().map((unit) => {
      const outcome = ofUnits.find((one) => one.unit.id === unit.id)?.outcome ?? null;
      return {
        id: unit.id,
        name: this.nameOf(unit),
        isAsked: unit.id === asked,
        words: outcome === null ? '' : OUTCOME_WORDS[outcome],
      };
    });
  });
  /** Of each unit that was asked about: what it may be. */
  protected readonly found = computed(() =>
    (this.conclusion()?.ofUnits ?? [])
      .filter(({ causes }) => causes.length > 0)
      .map((one) => ({ name: this.nameById(one.unit.id), causes: one.causes })),
  );
  protected readonly unitWords = computed(() => {
    const asked = this.asked()?.unit;
    const unit = this.units().find(({ id }) => id === asked?.id) ?? this.units()[0];
    return unit ? this.nameOf(unit) : '';
  });
  protected readonly isUnsent = computed(() => !this.draft().isSent);
  protected readonly question = computed<Question | null>(() => this.asked()?.question ?? null);
  protected readonly steps = computed(() => stepsOfCall(this.draft().answers, this.units()));
  protected readonly conclusion = computed(() => concludeCall(this.draft().answers, this.units()));
  protected readonly outcomeWords = computed(() => {
    const outcome = this.conclusion()?.outcome ?? null;
    return outcome === null ? '' : OUTCOME_WORDS[outcome];
  });
  /** Nobody answers a check on a call that another dispatcher holds, or that is settled. */
  protected readonly mayAnswer = computed(() => this.call.isMine());

  protected readonly timer = computed(() => {
    const question = this.question();
    if (!question?.timerSeconds) return null;
    const startedAt = this.draft().timers[this.asked()?.key ?? ''] ?? null;
    const totalMs = question.timerSeconds * 1000;
    const leftMs = startedAt === null ? totalMs : startedAt + totalMs - this.second();
    return {
      isRunning: startedAt !== null && leftMs > 0,
      isOver: startedAt !== null && leftMs <= 0,
      words: timerWords(leftMs),
      share: Math.min(Math.max(1 - leftMs / totalMs, 0), 1),
      minutes: question.timerSeconds / 60,
    };
  });

  constructor() {
    // Another call was opened, or its answers came: take what this browser still had unsent.
    effect(() => {
      const detail = this.call.detail();
      if (detail) untracked(() => this.takeAnswers(detail.row.id, detail.phoneCheck.answers));
    });
    const ticking = setInterval(() => {
      const was = this.timer();
      if (!was?.isRunning) return;
      this.second.set(this.clock.exact());
      if (this.timer()?.isOver) this.announce.say('The time is over. Go on with the question.');
    }, 1000);
    inject(DestroyRef).onDestroy(() => clearInterval(ticking));
  }

  /** Brings its top into sight as well: the answers stand below the question. */
  focus(): void {
    const { nativeElement } = this.element;
    nativeElement.focus({ preventScroll: true });
    // Only with its question drawn is it tall enough to come up.
    afterNextRender(() => nativeElement.scrollIntoView?.({ block: 'start' }), {
      injector: this.injector,
    });
  }

  /** What the conclusion form starts from, once the check has ended. */
  readonly result = this.conclusion;

  protected async begin(): Promise<void> {
    if (await this.call.takeClaim()) this.focus();
  }

  protected press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey || isField(event.target)) return;
    const question = this.question();
    const handled = (act: () => void): void => {
      event.preventDefault();
      event.stopPropagation();
      act();
    };
    if (event.key === 'Backspace' && this.steps().length > 0) return handled(() => this.undo());
    if (!this.mayAnswer()) return;
    if (!question) {
      if (event.key === 'Enter' && !isButton(event.target)) handled(() => this.finished.emit());
      return;
    }
    const chosen = answerOfKey(question, event.key);
    if (chosen) return handled(() => this.give(question, chosen.id));
    const timer = this.timer();
    if (event.key === 'Enter' && !isButton(event.target) && timer && !timer.isRunning) {
      return handled(() => this.startTimer());
    }
    // A slip while somebody is being asked must not open something else.
    if (/^[a-z0-9]$/i.test(event.key)) handled(() => undefined);
  }

  protected give(question: Question, answer: string | number): void {
    const asked = this.asked();
    if (asked?.question !== question || !isAnswerTo(question, answer)) return;
    this.change({
      ...this.draft(),
      answers: { ...this.draft().answers, [asked.key]: answer },
      isSent: false,
    });
    this.focus();
    this.speakNext();
    void this.sync();
  }

  protected giveNumber(question: Question, text: string): void {
    if (text.trim() !== '') this.give(question, Number(text));
  }

  /** Takes back the answer to this question, and with it whatever followed from it. */
  protected takeBack({ key }: UnitStep): void {
    const { [key]: _, ...answers } = this.draft().answers;
    this.change({ ...this.draft(), answers, isSent: false });
    this.focus();
    void this.sync();
  }

  protected startTimer(): void {
    const asked = this.asked();
    if (!asked?.question.timerSeconds) return;
    const { question, key } = asked;
    const now = this.clock.exact();
    this.second.set(now);
    this.change({ ...this.draft(), timers: { ...this.draft().timers, [key]: now } });
    this.announce.say(`The timer runs: ${(question.timerSeconds ?? 0) / 60} minutes.`);
  }

  private nameOf({ kind, place }: UnitFacts): string {
    return place ? `${UNIT_WORDS[kind]}, ${place}` : UNIT_WORDS[kind];
  }

  private nameById(unitId: string): string {
    const unit = this.units().find(({ id }) => id === unitId);
    return unit && this.units().length > 1 ? this.nameOf(unit) : '';
  }

  /** Of a call with several units: which one a question was about. */
  protected stepUnit({ unit }: UnitStep): string {
    return this.nameById(unit.id);
  }

  protected answerWords({ question, answer }: UnitStep): string {
    if (typeof answer === 'number') return `${answer} °F`;
    return question.answers.find(({ id }) => id === answer)?.label ?? answer;
  }

  /** Sends the answers; what is given meanwhile goes with the next sending. */
  protected async sync(): Promise<void> {
    if (this.isSending) return;
    this.isSending = true;
    try {
      while (!this.draft().isSent) {
        const { answers } = this.draft();
        const callId = this.draftOf();
        if (!(await this.call.answer(answers))) return;
        if (this.draftOf() !== callId) return;
        if (this.draft().answers === answers) this.change({ ...this.draft(), isSent: true });
      }
    } finally {
      this.isSending = false;
    }
  }

  private undo(): void {
    const last = this.steps().at(-1);
    if (last && this.mayAnswer()) this.takeBack(last);
  }

  private takeAnswers(callId: string, sent: CheckDraft['answers']): void {
    if (this.draftOf() !== callId) {
      const kept = this.drafts.load(checkKey(callId), isCheckDraft) ?? EMPTY_CHECK;
      this.draftOf.set(callId);
      this.second.set(this.clock.exact());
      this.draft.set(kept.isSent ? { ...kept, answers: sent } : kept);
    } else if (this.draft().isSent) {
      this.draft.update((draft) => ({ ...draft, answers: sent }));
    }
  }

  private change(draft: CheckDraft): void {
    this.draft.set(draft);
    const callId = this.draftOf();
    if (callId !== null) this.drafts.save(checkKey(callId), draft);
  }

  private speakNext(): void {
    const danger = this.conclusion()?.danger;
    if (danger) this.announce.warn(`${danger.title}. ${danger.stop[0] ?? ''}`);
  }
}

/** A digit counts the answers from the top; a letter is the answer's own. */
function answerOfKey(question: Question, key: string): Answer | undefined {
  if (/^[1-9]$/.test(key)) return question.answers[Number(key) - 1];
  return question.answers.find((answer) => answer.key === key.toLowerCase());
}

const isField = (target: EventTarget | null): boolean =>
  target instanceof HTMLInputElement ||
  target instanceof HTMLSelectElement ||
  target instanceof HTMLTextAreaElement;

const isButton = (target: EventTarget | null): boolean => target instanceof HTMLButtonElement;
