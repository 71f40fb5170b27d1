import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  inject,
  linkedSignal,
  output,
  signal,
  viewChild,
} from '@angular/core';
import type { CallDetail, UnitFacts } from '@shared/contract/calls';
import type { UnitKind } from '@shared/domain/cold-unit';
import { UNIT_KINDS } from '@shared/domain/cold-unit';
import { DEFAULT_VALUES } from '@shared/domain/food-value';
import type { Instant } from '@shared/domain/instant';
import type { Span } from '@shared/domain/thaw/uncooled-time';
import { newId } from '../core/api';
import { Clock } from '../core/clock';
import { Session } from '../core/session';
import { AddressField } from '../intake/address-field';
import { changeUnit, newUnit } from '../intake/intake-draft';
import { PowerSpans } from '../intake/power-spans';
import { readTimeEntry } from '../intake/time-entry';
import { TimeField } from '../intake/time-field';
import { UnitCard } from '../intake/unit-card';
import { CallModel } from './call-model';
import { UNIT_WORDS } from './compartment-words';

/** Corrects a call and adds what is found out later: readings, a look inside, dry ice. */
@Component({
  selector: 'thaw-amend-form',
  imports: [AddressField, PowerSpans, TimeField, UnitCard],
  templateUrl: './amend-form.html',
  styleUrls: ['../intake/fields.scss', './amend-form.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AmendForm {
  protected readonly call = inject(CallModel);
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);

  readonly closed = output();

  /**
   * What is edited. It starts from the call as it was when the form was opened and keeps what was
   * typed when the call changes meanwhile.
   */
  protected readonly edited = linkedSignal<CallDetail | null, Edited | null>({
    source: () => this.call.detail(),
    computation: (detail, previous) => previous?.value ?? (detail ? startFrom(detail) : null),
  });
  protected readonly error = signal('');
  protected readonly isSaving = signal(false);

  protected readonly unitKinds = UNIT_KINDS.map((kind) => ({ kind, name: UNIT_WORDS[kind] }));
  protected readonly unitWords = UNIT_WORDS;

  private readonly nameField = viewChild<ElementRef<HTMLInputElement>>('name');

  constructor() {
    afterNextRender(() => this.nameField()?.nativeElement.focus());
  }

  protected set(part: Partial<Edited>): void {
    this.edited.update((edited) => (edited ? { ...edited, ...part } : null));
  }

  protected setUnit(id: string, next: UnitFacts): void {
    this.set({ units: changeUnit(this.edited()?.units ?? [], id, () => next) });
  }

  protected addUnit(kind: string): void {
    if (kind === '') return;
    const unit = newUnit(kind as UnitKind, newId(), this.session.settings() ?? DEFAULT_VALUES);
    this.set({ units: [...(this.edited()?.units ?? []), unit] });
  }

  protected removeUnit(id: string): void {
    this.set({ units: (this.edited()?.units ?? []).filter((unit) => unit.id !== id) });
  }

  protected typeTime(which: 'out' | 'back', text: string): void {
    const entry = readTimeEntry(text, this.clock.exact(), this.session.zone());
    const at = entry.kind === 'moment' ? entry.at : null;
    const trouble = entry.kind === 'unreadable' ? entry.why : '';
    this.error.set('');
    if (which === 'out')
      this.set({ outText: text, outAt: at, outTrouble: trouble, timesTouched: true });
    else
      this.set({
        ...{ backText: text, backAt: at, backTrouble: trouble },
        ...{ timesTouched: true, stillOut: false },
      });
  }

  protected async save(): Promise<void> {
    if (this.isSaving()) return;
    this.isSaving.set(true);
    try {
      const callId = this.call.row()?.id;
      await this.call.whenIdle();
      if (this.call.row()?.id !== callId) return;
      // What is typed while it is being saved is saved after it.
      let saved: Edited | null = null;
      while (saved !== this.edited()) {
        saved = this.edited();
        if (!saved || !(await this.saveNow(saved))) return;
      }
      this.closed.emit();
    } finally {
      this.isSaving.set(false);
    }
  }

  private async saveNow(edited: Edited): Promise<boolean> {
    const problem = problemIn(edited);
    this.error.set(problem);
    if (problem !== '' || edited.outAt === null) return false;
    return this.call.amend({
      name: edited.name.trim(),
      address: { ...edited.address, text: edited.address.text.trim() },
      mayText: edited.mayText,
      language: edited.language,
      units: [...edited.units],
      powerOnSpans: [...edited.powerOnSpans],
      householdAtRisk: edited.householdAtRisk,
      ...(edited.timesTouched
        ? {
            powerOutAt: edited.outAt,
            powerBackAt: edited.stillOut ? null : edited.backAt,
            timesFrom: 'caller' as const,
          }
        : {}),
    });
  }
}

interface Edited {
  readonly name: string;
  readonly address: CallDetail['row']['address'];
  readonly mayText: boolean;
  readonly language: 'en' | 'es';
  readonly outText: string;
  readonly backText: string;
  /** Why a text cannot be read; '' when it can. */
  readonly outTrouble: string;
  readonly backTrouble: string;
  readonly outAt: Instant | null;
  readonly backAt: Instant | null;
  readonly stillOut: boolean;
  /** Times that nobody touched keep following the outage area. */
  readonly timesTouched: boolean;
  readonly powerOnSpans: readonly Span[];
  readonly householdAtRisk: boolean;
  readonly units: readonly UnitFacts[];
}

const startFrom = (detail: CallDetail): Edited => ({
  name: detail.row.name,
  address: detail.row.address,
  mayText: detail.mayText,
  language: detail.language,
  outText: '',
  backText: '',
  outTrouble: '',
  backTrouble: '',
  outAt: detail.powerOutAt,
  backAt: detail.powerBackAt,
  stillOut: detail.powerBackAt === null,
  timesTouched: false,
  powerOnSpans: detail.powerOnSpans,
  householdAtRisk: detail.row.householdAtRisk,
  units: detail.units,
});

function problemIn(edited: Edited): string {
  const { name, address, units, outAt, backAt, stillOut } = edited;
  if (name.trim() === '') return 'A name is needed.';
  if (address.text.trim() === '') return 'An address is needed.';
  if (units.length === 0) return 'A call has at least one unit.';
  if (edited.outTrouble) return `Power went: ${edited.outTrouble}`;
  if (!stillOut && edited.backTrouble) return `Came back: ${edited.backTrouble}`;
  if (outAt === null) return 'When did the power go?';
  if (!stillOut && backAt === null) return 'When did it come back? Or tick "still out".';
  if (!stillOut && backAt !== null && backAt < outAt) return 'It came back before it went.';
  return '';
}
