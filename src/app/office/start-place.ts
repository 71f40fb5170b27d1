import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  effect,
  inject,
  input,
  output,
  signal,
  untracked,
} from '@angular/core';
import { MatAutocompleteModule } from '@angular/material/autocomplete';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { FormControl, ReactiveFormsModule } from '@angular/forms';
import type { AddressSuggestion } from '@shared/contract/calls';
import type { LonLat } from '@shared/contract/common';
import { Api } from '../core/api';
import { ProblemError } from '../core/problem-error';
import { readCoordinates } from '../intake/coordinates';

const DEBOUNCE_MS = 150;

/** A place of the company, such as where a technician's day begins: an address of the region, or latitude and longitude. */
@Component({
  selector: 'thaw-start-place',
  imports: [MatAutocompleteModule, MatFormFieldModule, MatInput, ReactiveFormsModule],
  template: `
    <mat-form-field>
      <mat-label>{{ label() }}</mat-label>
      <input
        #field
        matInput
        autocomplete="off"
        spellcheck="false"
        [formControl]="control"
        [matAutocomplete]="list"
        (input)="type(field.value)"
      />
      <mat-autocomplete
        #list="matAutocomplete"
        autoActiveFirstOption
        [displayWith]="labelOf"
        (optionSelected)="pick($event.option.value)"
      >
        @for (suggestion of suggestions(); track $index) {
          <mat-option [value]="suggestion">{{ suggestion.label }}</mat-option>
        }
      </mat-autocomplete>
      <mat-hint>{{ hint() }}</mat-hint>
      @if (error(); as words) {
        <mat-error>{{ words }}</mat-error>
      }
    </mat-form-field>
  `,
  styles: 'mat-form-field { inline-size: 100%; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StartPlace {
  private readonly api = inject(Api);

  readonly label = input('Starts from');
  readonly point = input.required<LonLat | null>();
  readonly error = input<string | null>(null);
  readonly changed = output<LonLat | null>();

  protected readonly control = new FormControl<AddressSuggestion | string>('', {
    nonNullable: true,
  });
  protected readonly hint = signal('An address, or latitude, longitude.');
  protected readonly suggestions = signal<readonly AddressSuggestion[]>([]);

  private timer: ReturnType<typeof setTimeout> | undefined;
  private asked = 0;
  /** The point that the text already names. */
  private named: LonLat | null = null;

  constructor() {
    effect(() => {
      const point = this.point();
      untracked(() => {
        if (point && !isSame(point, this.named)) void this.name(point);
      });
    });
    effect(() => {
      const words = this.error();
      this.control.setErrors(words === null ? null : { words });
      if (words !== null) this.control.markAsTouched();
    });
    inject(DestroyRef).onDestroy(() => clearTimeout(this.timer));
  }

  protected readonly labelOf = (value: AddressSuggestion | string | null): string =>
    typeof value === 'string' ? value : (value?.label ?? '');

  protected type(text: string): void {
    this.suggestions.set([]);
    clearTimeout(this.timer);
    this.asked++;
    const point = readCoordinates(text);
    this.set(point, point ? 'A point on the map.' : 'Choose one of the addresses.');
    if (!point && text.trim().length >= 3) {
      this.timer = setTimeout(() => void this.suggest(text), DEBOUNCE_MS);
    }
  }

  protected pick(suggestion: AddressSuggestion): void {
    this.set(suggestion.lonLat, 'On the map.');
  }

  private set(point: LonLat | null, hint: string): void {
    this.named = point;
    this.hint.set(hint);
    this.changed.emit(point);
  }

  private async suggest(text: string): Promise<void> {
    const asked = ++this.asked;
    try {
      const { suggestions } = await this.api.call('suggestAddresses', { query: { text } });
      if (asked !== this.asked) return;
      this.suggestions.set(suggestions.slice(0, 8));
      if (suggestions.length === 0) this.hint.set('No address of the region fits.');
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (asked === this.asked) this.hint.set('No suggestions now; latitude, longitude works.');
    }
  }

  /** A point that is known has only its coordinates; the nearest house says more. */
  private async name(point: LonLat): Promise<void> {
    this.named = point;
    this.control.setValue(coordinatesOf(point));
    try {
      const [lon, lat] = point.map(String) as [string, string];
      const { suggestion } = await this.api.call('nearestAddress', { query: { lon, lat } });
      if (suggestion && isSame(point, this.named)) this.hint.set(`Near ${suggestion.label}.`);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error; // The coordinates stay as its name.
    }
  }
}

const isSame = (a: LonLat, b: LonLat | null): boolean => a[0] === b?.[0] && a[1] === b[1];
const coordinatesOf = ([lon, lat]: LonLat): string => `${lat.toFixed(5)}, ${lon.toFixed(5)}`;
