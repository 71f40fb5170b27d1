import {
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  input,
  output,
  signal,
} from '@angular/core';
import type { CompartmentFacts } from '@shared/contract/calls';
import type { InspectionFinding } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';
import { Clock } from '../core/clock';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { FINDING_CHOICES, foundWords } from './found-words';
import { readTimeEntry } from './time-entry';

/**
 * What was found in a compartment or done for it, and when: a reading, a look inside, ice. Nobody is
 * told to open a door for it.
 */
@Component({
  selector: 'thaw-found-entry',
  templateUrl: './found-entry.html',
  styleUrls: ['./fields.scss', './found-entry.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FoundEntry {
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);
  private readonly zone = inject(Zone);

  readonly compartment = input.required<CompartmentFacts>();
  /** Inside volume of the unit, for dry ice. */
  readonly cubicFeet = input.required<number | null>();
  readonly changed = output<Partial<CompartmentFacts>>();

  protected readonly findings = FINDING_CHOICES;
  protected readonly error = signal('');
  protected readonly isFrozen = computed(() => {
    const { kind, medicine } = this.compartment();
    return kind === 'freezer' || medicine?.kind === 'frozen-milk';
  });
  protected readonly isFood = computed(() => this.compartment().kind !== 'commercial-stock');
  protected readonly said = computed(() =>
    foundWords(this.compartment(), (at) => this.zone.dayTime(at)),
  );

  protected addReading(field: HTMLInputElement, when: string): void {
    const temperatureF = Number(field.value);
    if (field.value.trim() === '' || !(temperatureF >= -60 && temperatureF <= 150)) {
      this.error.set('A temperature from −60 to 150 °F is needed.');
      return;
    }
    const readings = this.compartment().readings;
    if (this.add(when, (at) => ({ readings: [...readings, { at, temperatureF }] })))
      field.value = '';
  }

  protected addLook(finding: string, when: string): void {
    if (finding === '') return;
    const look = { finding: finding as InspectionFinding };
    const { inspections } = this.compartment();
    this.add(when, (at) => ({ inspections: [...inspections, { at, ...look }] }));
  }

  protected addIce(when: string): void {
    this.add(when, (at) => ({ ice: [...this.compartment().ice, { at }] }));
  }

  protected addDryIce(field: HTMLInputElement, feet: string, when: string): void {
    const ice = { pounds: Number(field.value), cubicFeet: Number(feet) };
    if (!(ice.pounds > 0 && ice.cubicFeet > 0)) {
      this.error.set('Dry ice needs its pounds and the cubic feet that it is in.');
      return;
    }
    const { dryIce } = this.compartment();
    if (this.add(when, (at) => ({ dryIce: [...dryIce, { at, ...ice }] }))) field.value = '';
  }

  /** Takes the last thing back that was added here or before. */
  protected takeBack(): void {
    const { readings, inspections, dryIce, ice } = this.compartment();
    const last = Math.max(...[...readings, ...inspections, ...dryIce, ...ice].map(({ at }) => at));
    const kept = <T extends { readonly at: Instant }>(all: readonly T[]): T[] =>
      all.filter(({ at }) => at !== last);
    this.changed.emit({
      readings: kept(readings),
      inspections: kept(inspections),
      dryIce: kept(dryIce),
      ice: kept(ice),
    });
  }

  private add(when: string, change: (at: Instant) => Partial<CompartmentFacts>): boolean {
    const now = this.clock.exact();
    const entry = readTimeEntry(when === '' ? 'now' : when, now, this.session.zone());
    if (entry.kind !== 'moment') {
      this.error.set(entry.kind === 'unreadable' ? entry.why : 'When was that?');
      return false;
    }
    this.error.set('');
    this.changed.emit(change(entry.at));
    return true;
  }
}
