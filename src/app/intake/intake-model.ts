import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { CallRow, HouseholdFound, UnitFacts } from '@shared/contract/calls';
import { thawClock } from '@shared/domain/thaw/thaw-clock';
import { coolingLoss, type UnitKind } from '@shared/domain/cold-unit';
import { DEFAULT_VALUES } from '@shared/domain/food-value';
import type { Instant } from '@shared/domain/instant';
import { formatPhone } from '@shared/domain/phone-number';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Drafts } from '../core/drafts';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import type { StripFacts } from '../board/cold-strip-scale';
import { areaCodeOf, isAreaCodeAssumed, phoneOf } from '../ui/phone-entry';
import { areaAt } from './area-at';
import { checkIntake, errorsOfPointers, type IntakeErrors, type IntakeField } from './intake-check';
import {
  blankDraft,
  type IntakeDraft,
  type IntakeTimes,
  isIntakeDraft,
  isWorthKeeping,
  newUnit,
  timesInForce,
  wholeDraft,
} from './intake-draft';
import { readTimeEntry } from './time-entry';

const DRAFT_KEY = 'intake';

const keptDraft = (kept: IntakeDraft | null): IntakeDraft =>
  kept === null ? blankDraft(newId) : wholeDraft(kept);

/** What became of an attempt to save. */
export type SaveResult = { readonly callId: string } | null;

/** The call being taken: its draft, what is known of the household, and the attempts to save it. */
@Injectable()
export class IntakeModel {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly drafts = inject(Drafts);
  private readonly session = inject(Session);

  private readonly draftNow = signal<IntakeDraft>(
    keptDraft(this.drafts.load(DRAFT_KEY, isIntakeDraft)),
  );
  private readonly found = signal<HouseholdFound | null>(null);
  private readonly looking = signal(false);
  private readonly tried = signal(false);
  private readonly left = signal<ReadonlySet<IntakeField>>(new Set());
  private readonly refused = signal<IntakeErrors>({});
  private readonly trouble = signal<ProblemError | null>(null);
  private readonly busy = signal(false);
  private readonly openAlready = signal<CallRow | null>(null);
  private lookups = 0;

  readonly draft = this.draftNow.asReadonly();
  readonly household = this.found.asReadonly();
  readonly isLookingUp = this.looking.asReadonly();
  readonly isSaving = this.busy.asReadonly();
  /** Why the last attempt came to nothing; the draft is still whole. */
  readonly problem = this.trouble.asReadonly();
  /** Without a storm nothing can be saved; what is typed is kept until there is one. */
  readonly hasStorm = computed(() => this.session.storm()?.state === 'open');
  readonly isWorthKeeping = computed(() => isWorthKeeping(this.draftNow()));

  readonly area = computed(() => {
    const point = this.draftNow().address.lonLat;
    return point ? areaAt(point, [...this.board.areas().values()]) : null;
  });
  readonly times = computed<IntakeTimes>(() => timesInForce(this.draftNow().times, this.area()));

  /** The company's own, for callers who leave it out. */
  private readonly areaCode = computed(() => areaCodeOf(this.session.settings()?.companyPhone));
  /** The number with the area code that nobody typed, to be read back to the caller; '' otherwise. */
  readonly completedPhone = computed(() => {
    const typed = this.draftNow().phone;
    if (!isAreaCodeAssumed(typed, this.areaCode())) return '';
    return formatPhone(phoneOf(typed, this.areaCode()) ?? '');
  });

  private readonly checked = computed(() =>
    checkIntake(
      { ...this.draftNow(), times: this.times() },
      this.clock.now(),
      this.session.zone(),
      this.areaCode(),
    ),
  );
  readonly isReady = computed(() => this.checked().ready);

  /** Complaints beside their fields: all of them only after an attempt to save. */
  readonly errors = computed<IntakeErrors>(() => {
    const checked = this.checked();
    const own: IntakeErrors = checked.ready ? {} : checked.errors;
    const shown = Object.entries(own).filter(
      ([field]) => this.tried() || this.isLeftUnfinished(field as IntakeField),
    );
    return { ...this.refused(), ...Object.fromEntries(shown) };
  });

  /** The call that this household already has, to be opened instead of taking a second one. */
  readonly sameCall = computed(() => this.openAlready() ?? this.found()?.openCall ?? null);

  /** The strip as it will be; `null` until there is a unit and a time. */
  readonly preview = computed<StripFacts | null>(() => {
    const { units, powerOnSpans } = this.draftNow();
    const lostAt = this.times().outAt;
    if (lostAt === null || units.length === 0) return null;
    const times = { lostAt, restoredAt: null, powerOnSpans };
    return {
      lostAt,
      restoredAt: null,
      compartments: units.flatMap((unit) =>
        unit.compartments.map((facts) => {
          const clock = thawClock(facts, coolingLoss(times, unit.ranBetween), unit);
          const { atRiskAt, likelyAt, saveByAt } = clock;
          return { kind: facts.kind, valueCents: facts.valueCents, atRiskAt, likelyAt, saveByAt };
        }),
      ),
    };
  });

  constructor() {
    effect(() => {
      const draft = this.draftNow();
      if (isWorthKeeping(draft)) this.drafts.save(DRAFT_KEY, draft);
      else this.drafts.clear(DRAFT_KEY);
    });
    const phone = computed(() => phoneOf(this.draftNow().phone, this.areaCode()));
    effect(() => {
      const number = phone();
      untracked(() => void this.lookUp(number));
    });
  }

  change(part: Partial<IntakeDraft>, field?: IntakeField): void {
    this.draftNow.update((draft) => ({ ...draft, ...part }));
    if (field) this.refused.update(({ [field]: _, ...others }) => others);
  }

  /** The person has gone on from a field; from now on it may say what is wrong with it. */
  leave(field: IntakeField): void {
    this.left.update((left) => new Set(left).add(field));
  }

  addUnit(kind: UnitKind): UnitFacts {
    const unit = newUnit(kind, newId(), this.session.settings() ?? DEFAULT_VALUES);
    this.change({ units: [...this.draftNow().units, unit] }, 'units');
    return unit;
  }

  typeTime(which: 'out' | 'back', text: string): void {
    const before = this.times();
    const entry = readTimeEntry(text, this.clock.exact(), this.session.zone());
    const at: Instant | null = entry.kind === 'moment' ? entry.at : null;
    const times: IntakeTimes = {
      ...before,
      from: 'caller',
      ...(which === 'out'
        ? { outText: text, outAt: at }
        : { backText: text, backAt: at, stillOut: false }),
    };
    this.change({ times }, which);
  }

  setStillOut(stillOut: boolean): void {
    const times = {
      ...this.times(),
      from: 'caller' as const,
      stillOut,
      backText: '',
      backAt: null,
    };
    this.change({ times }, 'back');
  }

  /** Forgets what was typed and follows the outage area again. */
  followArea(): void {
    this.change({ times: { ...this.draftNow().times, from: 'area' } }, 'out');
  }

  startOver(): void {
    this.draftNow.set(blankDraft(newId));
    this.tried.set(false);
    this.left.set(new Set());
    this.refused.set({});
    this.trouble.set(null);
    this.openAlready.set(null);
  }

  /**
   * Sends the call. The draft stays until the server has it, and every attempt at the same call
   * carries the same ids, so that pressing again after a lost answer makes no second call.
   */
  async save(): Promise<SaveResult> {
    this.tried.set(true);
    this.refused.set({});
    const checked = this.checked();
    const stormId = this.session.storm()?.id;
    if (!checked.ready || !stormId || this.busy()) return null;
    this.busy.set(true);
    this.trouble.set(null);
    try {
      const detail = await this.api.call('takeCall', { params: { stormId }, body: checked.body });
      this.board.takeReply({ kind: 'calls', calls: [detail.row] });
      this.startOver();
      return { callId: detail.row.id };
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      return this.afterRefusal(error);
    } finally {
      this.busy.set(false);
    }
  }

  /** A field that is still empty may just come later; one that was begun and left is complained of. */
  private isLeftUnfinished(field: IntakeField): boolean {
    const { phone, times } = this.draftNow();
    const begun: Partial<Record<IntakeField, string>> = {
      phone,
      out: times.outText,
      back: times.backText,
    };
    return this.left().has(field) && (begun[field] ?? '').trim() !== '';
  }

  private afterRefusal(error: ProblemError): SaveResult {
    const current = rowOf(error.current);
    if (error.code === 'household-has-open-call' && current) {
      // Our own first attempt got through, and only its answer was lost.
      if (current.id === this.draftNow().callId) {
        this.startOver();
        return { callId: current.id };
      }
      this.openAlready.set(current);
    }
    // The call was changed after an attempt whose answer never came: it is another command now.
    if (error.code === 'command-id-reused') this.change({ commandId: newId() });
    this.refused.set(errorsOfPointers(error.fieldErrors));
    this.trouble.set(error);
    return null;
  }

  private async lookUp(phone: string | null): Promise<void> {
    const lookup = ++this.lookups;
    this.found.set(null);
    this.openAlready.set(null);
    const stormId = this.session.storm()?.id;
    if (!phone || !stormId) {
      this.looking.set(false);
      return;
    }
    this.looking.set(true);
    try {
      const found = await this.api.call('findHousehold', { params: { stormId }, query: { phone } });
      if (lookup !== this.lookups) return;
      this.found.set(found);
      this.fillIn(found);
    } catch (error) {
      // Intake works without it; the server recognises the household again when the call is saved.
      if (!(error instanceof ProblemError)) throw error;
    } finally {
      if (lookup === this.lookups) this.looking.set(false);
    }
  }

  /** Fills only what is still empty: what the caller has just said counts more than what we knew. */
  private fillIn({ household }: HouseholdFound): void {
    if (!household) return;
    const draft = this.draftNow();
    this.change({
      phone: formatPhone(household.phone),
      name: draft.name === '' ? household.name : draft.name,
      address: draft.address.text === '' ? household.address : draft.address,
      language: household.language,
      mayText: household.mayText && !household.optedOut,
    });
  }
}

/** The server sends the row as it is; anything else is treated as nothing. */
const rowOf = (current: unknown): CallRow | null =>
  typeof current === 'object' && current !== null && 'id' in current && 'number' in current
    ? (current as CallRow)
    : null;
