import {
  ChangeDetectionStrategy,
  Component,
  computed,
  ElementRef,
  inject,
  input,
  output,
} from '@angular/core';
import type { CompartmentFacts, UnitFacts } from '@shared/contract/calls';
import type { CompartmentKind, MedicineKind } from '@shared/domain/cold-unit';
import { DEFAULT_VALUES, USUAL_CUBIC_FEET } from '@shared/domain/food-value';
import { CompartmentGlyph } from '../board/compartment-glyph';
import { COMPARTMENT_WORDS, UNIT_WORDS } from '../board/compartment-words';
import { Session } from '../core/session';
import { Choices } from './choices';
import { FoundEntry } from './found-entry';
import { changeCompartment, withMedicine, withUsualValues } from './intake-draft';
import {
  COLD_AT_LOSS_CHOICES,
  COOLING_CHOICES,
  DOOR_CHOICES,
  FILL_CHOICES,
  type Medicine,
  MEDICINE_CHOICES,
  RAN_CHOICES,
  START_CHOICES,
} from './unit-words';

/** What is known of one cold unit and its compartments. */
@Component({
  selector: 'thaw-unit-card',
  imports: [Choices, CompartmentGlyph, FoundEntry],
  templateUrl: './unit-card.html',
  styleUrls: ['./fields.scss', './unit-card.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UnitCard {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  private readonly session = inject(Session);

  readonly unit = input.required<UnitFacts>();
  /** The power came back for a while and went again: what did the unit do then? */
  readonly powerWasBack = input(false);
  readonly changed = output<UnitFacts>();
  readonly removed = output();

  protected readonly words = COMPARTMENT_WORDS;
  protected readonly fills = FILL_CHOICES;
  protected readonly doors = DOOR_CHOICES;
  protected readonly medicines = MEDICINE_CHOICES;
  protected readonly coldAtLoss = COLD_AT_LOSS_CHOICES;
  protected readonly starts = START_CHOICES;
  protected readonly cooling = COOLING_CHOICES;
  protected readonly ranBetween = RAN_CHOICES;
  protected readonly usualSize = computed(() => String(USUAL_CUBIC_FEET[this.unit().kind]));
  private readonly values = computed(() => this.session.settings() ?? DEFAULT_VALUES);

  protected readonly title = computed(() => UNIT_WORDS[this.unit().kind]);
  /** Medicine is asked for wherever food is kept cold; a medicine fridge has it anyway. */
  protected readonly mayHoldMedicine = computed(() => this.unit().kind !== 'medicine-fridge');
  protected readonly holdsMedicine = computed(() =>
    this.unit().compartments.some(({ kind }) => kind === 'medicine'),
  );

  /** Puts the cursor on the first thing to be asked about this unit. */
  focusFirst(): void {
    this.element.nativeElement.querySelector<HTMLElement>('input:checked, input, select')?.focus();
  }

  protected set(kind: CompartmentKind, part: Partial<CompartmentFacts>): void {
    this.change(changeCompartment(this.unit(), kind, part));
  }

  protected setUnit(part: Partial<UnitFacts>): void {
    this.change({ ...this.unit(), ...part });
  }

  protected keepMedicine(kept: boolean): void {
    this.changed.emit(withMedicine(this.unit(), kept, this.values()));
  }

  /** What it is worth follows its size and fill until somebody says what it is worth. */
  private change(next: UnitFacts): void {
    this.changed.emit(withUsualValues(this.unit(), next, this.values()));
  }

  protected setMedicine(medicine: Medicine, part: Partial<Medicine>): void {
    this.set('medicine', { medicine: { ...medicine, ...part } });
  }

  protected setMedicineKind(medicine: Medicine, kind: string): void {
    this.setMedicine(medicine, { kind: kind as MedicineKind });
  }

  protected setValue(kind: CompartmentKind, dollars: string): void {
    const cents = Math.round(Number(dollars) * 100);
    if (Number.isFinite(cents) && cents >= 0) this.set(kind, { valueCents: cents });
  }

  /** An empty or unreadable number means that nobody knows. */
  protected numberOrNull(text: string): number | null {
    const number = Number(text);
    return text.trim() === '' || !Number.isFinite(number) ? null : number;
  }

  protected positiveOrNull(text: string): number | null {
    const number = this.numberOrNull(text);
    return number !== null && number > 0 ? number : null;
  }
}
