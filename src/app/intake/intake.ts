import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  ElementRef,
  inject,
  Injector,
  output,
  viewChild,
  viewChildren,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { UnitFacts } from '@shared/contract/calls';
import { UNIT_KINDS, type UnitKind } from '@shared/domain/cold-unit';
import { ColdRuler } from '../board/cold-ruler';
import { ColdStrip } from '../board/cold-strip';
import { stripState } from '../board/cold-strip-scale';
import { UNIT_WORDS } from '../board/compartment-words';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { money, Zone } from '../core/zone';
import { groupedPhone } from '../ui/phone-entry';
import { AddressField } from './address-field';
import { changeUnit } from './intake-draft';
import { IntakeModel } from './intake-model';
import { PinRequest } from './pin-request';
import { PowerSpans } from './power-spans';
import { TimeField } from './time-field';
import { UnitCard } from './unit-card';

/** Takes a call by keyboard alone. What was typed is kept until the server has it. */
@Component({
  selector: 'thaw-intake',
  imports: [AddressField, ColdRuler, ColdStrip, MatIcon, PowerSpans, TimeField, UnitCard],
  templateUrl: './intake.html',
  styleUrls: ['./fields.scss', './intake.scss'],
  providers: [IntakeModel],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Intake {
  protected readonly model = inject(IntakeModel);
  protected readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);
  private readonly pins = inject(PinRequest);
  private readonly injector = inject(Injector);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  /** A call was taken, or the one that the household already has was chosen. */
  readonly opened = output<string>();
  readonly closed = output();

  protected readonly unitKinds = UNIT_KINDS.map((kind) => ({ kind, name: UNIT_WORDS[kind] }));

  private readonly phoneField = viewChild.required<ElementRef<HTMLInputElement>>('phone');
  private readonly addressField = viewChild.required(AddressField);
  private readonly unitCards = viewChildren(UnitCard);

  /** What is still to be saved, in money and in words. */
  protected readonly savable = computed(() => {
    const facts = this.model.preview();
    if (!facts) return null;
    const now = this.clock.now();
    const units = this.model.draft().units.flatMap((unit) => unit.compartments);
    const live = facts.compartments
      .map((compartment, i) => ({ ...compartment, cents: units[i]?.valueCents ?? 0 }))
      .filter((compartment) => stripState(compartment, null, now) !== 'lost');
    if (live.length === 0) return 'Every published limit has passed: an ordinary repair.';
    const cents = live.reduce((sum, one) => sum + one.cents, 0);
    return `About ${money(cents)} can still be saved.`;
  });

  /** What is known of the number, in a sentence. */
  protected readonly knownWords = computed(() => {
    const completed = this.model.completedPhone();
    const read = completed ? `Taken as ${completed}: say it back. ` : '';
    const found = this.model.household();
    if (!found) return read;
    if (!found.household) return `${read}Not known yet.`;
    const calls = `${found.earlierCalls} ${found.earlierCalls === 1 ? 'call' : 'calls'} before`;
    const texts = found.household.optedOut ? '; wants no texts' : '';
    return `Known: ${found.household.name}, ${calls}${texts}.`;
  });

  /** What the outage area around the address says of the times. */
  protected readonly areaWords = computed(() => {
    const area = this.model.area();
    if (!area) return '';
    if (this.model.times().from === 'area') return `Times of outage area ${area.name}.`;
    const back = area.backAt === null ? 'still out' : `back ${this.zone.dayTime(area.backAt)}`;
    return `Outage area ${area.name}: out ${this.zone.dayTime(area.outAt)}, ${back}.`;
  });

  constructor() {
    afterNextRender(() => this.phoneField().nativeElement.focus());
    inject(Keys).register(
      [
        { keys: 'Ctrl+Enter', does: 'Save the call', scope: 'Intake', run: () => void this.save() },
        {
          keys: 'Alt+m',
          does: 'Show the place on the map',
          scope: 'Intake',
          run: () => this.askMap(),
        },
        {
          keys: 'Alt+o',
          does: 'Open the call that the household already has',
          scope: 'Intake',
          when: () => this.model.sameCall() !== null,
          run: () => this.openSame(),
        },
        {
          keys: 'Escape',
          does: 'Put the call aside; its draft is kept',
          scope: 'Intake',
          inFields: true,
          run: () => this.putAside(),
        },
      ],
      inject(DestroyRef),
    );
  }

  protected typePhone(field: HTMLInputElement): void {
    // Formatting moves the cursor to the end, so it waits until the cursor is there.
    const isAtEnd = field.selectionStart === field.value.length;
    const isDeleting = field.value.length < this.model.draft().phone.length;
    const text = isAtEnd && !isDeleting ? groupedPhone(field.value) : field.value;
    field.value = text;
    this.model.change({ phone: text }, 'phone');
  }

  /** Six chips are one stop of the Tab key: digits add, arrows move. */
  protected pressChip(event: KeyboardEvent, toolbar: HTMLElement): void {
    const kind = UNIT_KINDS[Number(event.key) - 1];
    if (/^[1-6]$/.test(event.key) && kind && !event.ctrlKey && !event.altKey) {
      event.preventDefault();
      event.stopPropagation();
      this.addUnit(kind);
      return;
    }
    const step = { ArrowRight: 1, ArrowLeft: -1 }[event.key];
    if (step === undefined) return;
    event.preventDefault();
    const chips = [...toolbar.querySelectorAll('button')];
    const at = chips.indexOf(event.target as HTMLButtonElement);
    chips[(at + step + chips.length) % chips.length]?.focus();
  }

  protected addUnit(kind: UnitKind): void {
    this.model.addUnit(kind);
    this.announce.say(`${UNIT_WORDS[kind]} added.`);
  }

  protected goToUnits(): void {
    this.unitCards().at(-1)?.focusFirst();
  }

  protected setUnit(id: string, next: UnitFacts): void {
    this.model.change({ units: changeUnit(this.model.draft().units, id, () => next) });
  }

  protected removeUnit(id: string): void {
    this.model.change({ units: this.model.draft().units.filter((unit) => unit.id !== id) });
  }

  protected async save(): Promise<void> {
    const result = await this.model.save();
    if (result) {
      this.announce.say('The call is saved.');
      this.opened.emit(result.callId);
      return;
    }
    afterNextRender(() => this.focusFirstError(), { injector: this.injector });
  }

  protected openSame(): void {
    const call = this.model.sameCall();
    if (!call) return;
    this.opened.emit(call.id);
  }

  private putAside(): void {
    // While the map is asked for a place, Escape only takes that question back.
    if (this.pins.wanted()) this.pins.cancel();
    else this.closed.emit();
  }

  protected throwAway(): void {
    this.model.startOver();
    this.phoneField().nativeElement.focus();
  }

  private askMap(): void {
    void this.addressField().askMap();
  }

  private focusFirstError(): void {
    this.element.nativeElement.querySelector<HTMLElement>('[aria-invalid=true]')?.focus();
  }
}
