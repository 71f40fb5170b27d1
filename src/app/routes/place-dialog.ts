import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  Injector,
  signal,
} from '@angular/core';
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
import { addressWords } from '../intake/address-words';
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
        <p class="what">{{ question.call.name }}, {{ addressWords(question.call.address) }}</p>
        <mat-form-field subscriptSizing="dynamic">
          <mat-label>Technician</mat-label>
          <input
            #field
            matInput
            type="text"
            role="combobox"
            aria-expanded="true"
            aria-autocomplete="list"
            aria-controls="place-technicians"
            [attr.aria-activedescendant]="row() && 'to-' + row()!.technician.id"
            autocomplete="off"
            cdkFocusInitial
            [value]="typed()"
            (input)="type(field.value)"
            (focus)="field.select()"
            (keydown)="press($event)"
          />
        </mat-form-field>
        <ul id="place-technicians" role="listbox" aria-label="Technicians" tabindex="-1">
          @for (one of matching(); track one.technician.id) {
            <!-- The keyboard chooses from the field above, as a combobox does. -->
            <!-- eslint-disable-next-line @angular-eslint/template/click-events-have-key-events -->
            <li
              role="option"
              tabindex="-1"
              [id]="'to-' + one.technician.id"
              [attr.aria-selected]="one === row()"
              [attr.aria-disabled]="lacks(one) !== '' || null"
              (click)="choose(one)"
            >
              {{ one.technician.name }}
              <span class="soft">{{ lacks(one) || loadWords(one) }}</span>
            </li>
          }
        </ul>
        <p class="wrong" role="alert">{{ wrong() }}</p>
        <mat-form-field subscriptSizing="dynamic">
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
    ul {
      block-size: 190px;
      margin: calc(-1 * var(--thaw-gap)) 0 0;
      padding: 0;
      overflow-y: auto;
      scrollbar-width: thin;
      border: 1px solid var(--thaw-rule);
      border-radius: var(--thaw-radius);
      list-style: none;
    }
    li {
      padding: 5px 10px;
      border-inline-start: 4px solid transparent;
      cursor: pointer;
    }
    li[aria-selected='true'] {
      border-color: var(--thaw-accent);
      background: var(--thaw-accent-ground);
    }
    li[aria-disabled] {
      color: var(--thaw-ink-soft);
      cursor: default;
    }
    .wrong {
      color: var(--thaw-danger);
    }
    .wrong:empty {
      display: none;
    }
    @media (height < 620px) {
      ul {
        block-size: 118px;
      }
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PlaceDialog {
  private readonly dialog = inject<MatDialogRef<PlaceDialog, PlaceAnswer>>(MatDialogRef);
  private readonly zone = inject(Zone);
  private readonly injector = inject(Injector);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  protected readonly question = inject<PlaceQuestion>(MAT_DIALOG_DATA);
  protected readonly addressWords = addressWords;

  private readonly chosenId = signal<string | null>(this.question.technicianId);
  protected readonly typed = signal(this.nameOf(this.question.technicianId));
  private readonly tried = signal(false);
  protected readonly row = computed(
    () => this.question.rows.find((row) => row.technician.id === this.chosenId()) ?? null,
  );

  /** Whom the typed letters mean. A name that is chosen lists everybody, so that another can be taken. */
  protected readonly matching = computed(() => {
    const text = this.typed().trim().toLowerCase();
    if (text === '' || this.row()?.technician.name.toLowerCase() === text)
      return this.question.rows;
    return this.question.rows.filter(({ technician }) => {
      const name = technician.name.toLowerCase();
      return [name, ...name.split(' ')].some((part) => part.startsWith(text));
    });
  });
  private readonly able = computed(() => this.matching().filter((row) => this.lacks(row) === ''));
  protected readonly places = computed(() => this.placesOn(this.row()));
  protected readonly position = signal(this.firstPosition());
  protected readonly wrong = computed(() => {
    if (this.row() !== null) return '';
    if (this.typed().trim() !== '' && this.able().length === 0)
      return 'No technician of that name may do it.';
    return this.tried() ? 'Which technician?' : '';
  });

  constructor() {
    effect(() => {
      const row = this.row();
      if (row)
        afterNextRender(
          () =>
            this.host
              .querySelector(`#to-${row.technician.id}`)
              ?.scrollIntoView?.({ block: 'nearest' }),
          { injector: this.injector },
        );
    });
  }

  /** The first who fits what is typed is chosen with it; Enter then puts the call there. */
  protected type(text: string): void {
    this.typed.set(text);
    this.take(text.trim() === '' ? null : (this.able()[0]?.technician.id ?? null));
  }

  protected press(event: KeyboardEvent): void {
    const step = { ArrowDown: 1, ArrowUp: -1 }[event.key];
    if (step === undefined || event.altKey || event.ctrlKey || event.metaKey) return;
    event.preventDefault();
    const able = this.able();
    const at = able.findIndex((row) => row === this.row());
    const next = able[at < 0 ? 0 : Math.min(Math.max(at + step, 0), able.length - 1)];
    if (next) this.choose(next);
  }

  protected choose(row: RouteRow): void {
    if (this.lacks(row) !== '') return;
    this.typed.set(row.technician.name);
    this.take(row.technician.id);
  }

  protected submit(): void {
    this.tried.set(true);
    const row = this.row();
    if (!row || this.lacks(row) !== '') return;
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
