import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { MatAutocompleteModule } from '@angular/material/autocomplete';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogRef,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { CallRow } from '@shared/contract/calls';
import { missingSkills } from '@shared/domain/route-rules';
import { Zone } from '../core/zone';
import type { RouteRow } from './route-rows';
import { isFirmStop } from './stop-words';
import { skillWords } from './why-unplanned';

export interface PlaceQuestion {
  /** "Move call 214", "Add call 214 to a route". */
  readonly title: string;
  readonly call: CallRow;
  readonly rows: readonly RouteRow[];
  /** The one proposed first: where the stop is now, or where the cursor stands. */
  readonly technicianId: string | null;
}

export interface PlaceAnswer {
  readonly technicianId: string;
  /** From 0, counted without the stop that is placed. */
  readonly position: number;
}

interface Place {
  readonly position: number;
  readonly words: string;
}

/** Asks for a technician, by the first letters of the name, and a place on the route. */
@Component({
  selector: 'thaw-place-dialog',
  imports: [
    MatAutocompleteModule,
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatFormFieldModule,
    MatInput,
    MatSelectModule,
  ],
  template: `
    <h2 mat-dialog-title>{{ question.title }}</h2>
    <form (submit)="$event.preventDefault(); submit()" novalidate>
      <mat-dialog-content>
        <p class="what">{{ question.call.name }}, {{ question.call.address.text }}</p>
        <mat-form-field>
          <mat-label>Technician</mat-label>
          <input
            #field
            matInput
            type="text"
            autocomplete="off"
            cdkFocusInitial
            [value]="typed()"
            [matAutocomplete]="list"
            (input)="type(field.value)"
            (focus)="field.select()"
          />
          <mat-autocomplete
            #list="matAutocomplete"
            autoActiveFirstOption
            (optionSelected)="choose($event.option.id.replace('to-', ''))"
          >
            @for (row of matching(); track row.technician.id) {
              <mat-option
                [id]="'to-' + row.technician.id"
                [value]="row.technician.name"
                [disabled]="lacks(row) !== ''"
              >
                {{ row.technician.name }}
                <span class="soft">{{ lacks(row) || loadWords(row) }}</span>
              </mat-option>
            }
          </mat-autocomplete>
          @if (wrong()) {
            <mat-hint class="wrong">{{ wrong() }}</mat-hint>
          }
        </mat-form-field>
        <mat-form-field>
          <mat-label>Place on the route</mat-label>
          <mat-select [value]="position()" (valueChange)="position.set($event)">
            @for (place of places(); track place.position) {
              <mat-option [value]="place.position">{{ place.words }}</mat-option>
            }
          </mat-select>
        </mat-form-field>
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" type="submit">Put it there</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: calc(1.5 * var(--thaw-gap));
      inline-size: min(460px, 80vw);
    }
    .what,
    .soft {
      color: var(--thaw-ink-soft);
    }
    .soft {
      margin-inline-start: var(--thaw-gap);
      font-size: var(--thaw-text-s);
    }
    .wrong {
      color: var(--thaw-danger);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PlaceDialog {
  private readonly dialog = inject<MatDialogRef<PlaceDialog, PlaceAnswer>>(MatDialogRef);
  private readonly zone = inject(Zone);
  protected readonly question = inject<PlaceQuestion>(MAT_DIALOG_DATA);

  private readonly chosenId = signal<string | null>(this.question.technicianId);
  protected readonly typed = signal(this.nameOf(this.question.technicianId));
  protected readonly tried = signal(false);
  private readonly row = computed(
    () => this.question.rows.find((row) => row.technician.id === this.chosenId()) ?? null,
  );

  protected readonly matching = computed(() => {
    const text = this.typed().trim().toLowerCase();
    // A name that is already chosen lists everybody, so that another can be taken; but itself
    // first, since Enter takes the first.
    const chosen = this.row();
    if (chosen?.technician.name.toLowerCase() === text) {
      return [chosen, ...this.question.rows.filter((row) => row !== chosen)];
    }
    if (text === '') return this.question.rows;
    return this.question.rows.filter(({ technician }) =>
      technician.name
        .toLowerCase()
        .split(' ')
        .some((part) => part.startsWith(text) || technician.name.toLowerCase().startsWith(text)),
    );
  });
  protected readonly places = computed(() => this.placesOn(this.row()));
  protected readonly position = signal(this.firstPosition());
  protected readonly wrong = computed(() => {
    if (!this.tried() || this.row() !== null) return '';
    return this.typed().trim() === '' ? 'Which technician?' : 'No such technician who may do it.';
  });

  protected type(text: string): void {
    this.typed.set(text);
    const exact = this.question.rows.find(
      ({ technician }) => technician.name.toLowerCase() === text.trim().toLowerCase(),
    );
    this.take(exact?.technician.id ?? null);
  }

  protected choose(technicianId: string): void {
    this.typed.set(this.nameOf(technicianId));
    this.take(technicianId);
  }

  protected submit(): void {
    this.tried.set(true);
    const row = this.row() ?? this.onlyMatch();
    if (!row || this.lacks(row) !== '') return;
    if (row.technician.id !== this.chosenId()) this.take(row.technician.id);
    this.dialog.close({ technicianId: row.technician.id, position: this.position() });
  }

  protected lacks(row: RouteRow): string {
    const missing = missingSkills(this.question.call.skills, row.technician.skills);
    return missing.length === 0 ? '' : `lacks ${skillWords(missing)}`;
  }

  protected loadWords({ stops, isOnShift }: RouteRow): string {
    const count = stops.length === 1 ? '1 stop' : `${stops.length} stops`;
    return isOnShift ? count : `${count}, not on shift`;
  }

  private take(technicianId: string | null): void {
    if (technicianId === this.chosenId()) return;
    this.chosenId.set(technicianId);
    this.position.set(this.firstPosition());
  }

  private onlyMatch(): RouteRow | null {
    const able = this.matching().filter((row) => this.lacks(row) === '');
    return able.length === 1 ? (able[0] ?? null) : null;
  }

  /** Where it stands now, or else behind all others: that moves nobody's promise. */
  private firstPosition(): number {
    const row = this.row();
    if (!row) return 0;
    const at = row.stops.findIndex(({ stop }) => stop.callId === this.question.call.id);
    const places = this.placesOn(row);
    return places.some(({ position }) => position === at) ? at : (places.at(-1)?.position ?? 0);
  }

  /** Nobody is put before a stop that the technician has accepted. */
  private placesOn(row: RouteRow | null): Place[] {
    if (!row) return [];
    const others = row.stops.filter(({ stop }) => stop.callId !== this.question.call.id);
    const firm = others.findLastIndex(({ stop }) => isFirmStop(stop)) + 1;
    const places: Place[] = [];
    for (let position = firm; position <= others.length; position++) {
      const before = others[position - 1];
      const isLast = position === others.length;
      const after = before
        ? `After call ${before.number}, done ${this.zone.clockTime(before.finishAt)}`
        : 'First';
      places.push({ position, words: isLast && before ? `${after} (last)` : after });
    }
    return places;
  }

  private nameOf(id: string | null): string {
    return this.question.rows.find((row) => row.technician.id === id)?.technician.name ?? '';
  }
}
