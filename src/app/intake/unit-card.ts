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
import { CompartmentGlyph } from '../board/compartment-glyph';
import { COMPARTMENT_WORDS, UNIT_WORDS } from '../board/compartment-words';
import { Choices } from './choices';
import { changeCompartment, withMedicine } from './intake-draft';
import {
  COLD_AT_LOSS_CHOICES,
  DOOR_CHOICES,
  FILL_CHOICES,
  type Medicine,
  MEDICINE_CHOICES,
  START_CHOICES,
} from './unit-words';

/** What is known of one cold unit and its compartments. */
@Component({
  selector: 'thaw-unit-card',
  imports: [Choices, CompartmentGlyph],
  templateUrl: './unit-card.html',
  styleUrls: ['./fields.scss', './unit-card.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UnitCard {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  readonly unit = input.required<UnitFacts>();
  readonly changed = output<UnitFacts>();
  readonly removed = output();

  protected readonly words = COMPARTMENT_WORDS;
  protected readonly fills = FILL_CHOICES;
  protected readonly doors = DOOR_CHOICES;
  protected readonly medicines = MEDICINE_CHOICES;
  protected readonly coldAtLoss = COLD_AT_LOSS_CHOICES;
  protected readonly starts = START_CHOICES;

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
    this.changed.emit(changeCompartment(this.unit(), kind, part));
  }

  protected setUnit(part: Partial<UnitFacts>): void {
    this.changed.emit({ ...this.unit(), ...part });
  }

  protected keepMedicine(kept: boolean): void {
    this.changed.emit(withMedicine(this.unit(), kept));
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
