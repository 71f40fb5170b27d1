import { type CdkDragEnd, CdkDrag } from '@angular/cdk/drag-drop';
import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  ElementRef,
  inject,
  Injector,
  input,
  output,
  signal,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { Instant } from '@shared/domain/instant';
import { MINUTE_MS } from '@shared/domain/instant';
import { CompartmentGlyph } from '../board/compartment-glyph';
import { SKILL_WORDS } from '../board/queue-words';
import { whenWords } from '../board/time-words';
import { ago, clockTime, dayTime, duration, Zone } from '../core/zone';
import type { PlaceAnswer } from './place-dialog';
import { heldCursor, isCursorMove, movedCursor, type RouteCursor } from './route-cursor';
import type { ProposedView, RouteRow, StopView } from './route-rows';
import {
  blockOf,
  type BlockPlace,
  type HourTick,
  placeAt,
  type RulerSpan,
  ticksOf,
  timeAt,
  widthOf,
  xOf,
} from './route-ruler';
import { verdictShort, verdictWords } from './save-verdict';
import { isFirmStop, STOP_STATE_WORDS } from './stop-words';

/** Room for "21 min", and for the number alone. */
const DRIVE_WORDS_PX = 44;
const DRIVE_NUMBER_PX = 18;
/** An hour's label closer than this to the label of now would lie under it. */
const LABEL_PX = 52;

/**
 * All routes under each other on one ruler of time. Every stop is a block in its place, with the
 * drive before it, its state as a shape and a word, and whether it comes before the next save-by.
 */
@Component({
  selector: 'thaw-route-board',
  imports: [CdkDrag, CompartmentGlyph, MatIcon],
  templateUrl: './route-board.html',
  styleUrl: './route-board.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RouteBoard {
  private readonly zone = inject(Zone);
  private readonly injector = inject(Injector);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;

  readonly rows = input.required<readonly RouteRow[]>();
  readonly span = input.required<RulerSpan>();
  readonly pxPerHour = input.required<number>();
  readonly now = input.required<Instant>();
  readonly cursor = input.required<RouteCursor | null>();
  /** Whether each row has a second lane with the proposal. */
  readonly hasProposal = input(false);

  readonly cursorMoved = output<RouteCursor>();
  /** Dragged there; the same as answering the dialog. */
  readonly dropped = output<PlaceAnswer & { readonly view: StopView }>();
  /** Enter or a double click on a stop. */
  readonly opened = output<StopView>();

  protected readonly stateWords = STOP_STATE_WORDS;
  protected readonly isFirm = isFirmStop;
  protected readonly held = computed(() => heldCursor(this.rows(), this.cursor()));
  protected readonly hovered = signal<string | null>(null);
  protected readonly width = computed(() => widthOf(this.span(), this.pxPerHour()));
  protected readonly nowX = computed(() => xOf(this.now(), this.span(), this.pxPerHour()));
  protected readonly ticks = computed(() =>
    ticksOf(this.span(), this.pxPerHour(), this.zone.name()),
  );
  protected readonly labels = computed(() =>
    this.ticks().filter(
      ({ x, isLabelled }) => isLabelled && x > LABEL_PX / 2 && Math.abs(x - this.nowX()) > LABEL_PX,
    ),
  );

  /** Puts the keyboard on the cursor and brings it into sight. */
  focus(): void {
    afterNextRender(
      () => this.host.querySelector<HTMLElement>('[data-cursor][tabindex="0"]')?.focus(),
      { injector: this.injector },
    );
  }

  /** Moves the ruler so that now stands near its left end. */
  showNow(): void {
    this.host.querySelector('.scroll')?.scrollTo({ left: Math.max(0, this.nowX() - 90) });
  }

  protected press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey || !isCursorMove(event.key)) return;
    const next = movedCursor(this.rows(), this.cursor(), event.key);
    if (!next) return;
    event.preventDefault();
    this.cursorMoved.emit(next);
    this.focus();
  }

  protected isCursor(technicianId: string, stopId: string | null): boolean {
    const held = this.held();
    return held?.technicianId === technicianId && held.stopId === stopId;
  }

  protected block(stop: StopView | ProposedView): BlockPlace {
    return blockOf(stop, this.span(), this.pxPerHour());
  }

  /** The shifts of a technician, as bands on the ruler. */
  protected bands(row: RouteRow): { readonly x: number; readonly width: number }[] {
    const { from, to } = this.span();
    return row.technician.shifts
      .filter((shift) => shift.endsAt > from && shift.startsAt < to)
      .map((shift) => {
        const x = xOf(shift.startsAt, this.span(), this.pxPerHour());
        return { x, width: xOf(shift.endsAt, this.span(), this.pxPerHour()) - x };
      });
  }

  /** From the end of a visit to the save-by that it is about, whichever comes first. */
  protected tether(view: StopView): { readonly from: number; readonly to: number } | null {
    const saveByAt = view.verdict?.next?.saveByAt;
    if (saveByAt === undefined) return null;
    const end = xOf(view.finishAt, this.span(), this.pxPerHour());
    const tick = xOf(saveByAt, this.span(), this.pxPerHour());
    return { from: end, to: tick };
  }

  protected driveWords(stop: StopView | ProposedView, place: BlockPlace): string {
    const width = place.x - place.driveX;
    const minutes = Math.round(stop.driveMinutes);
    if (width < DRIVE_NUMBER_PX) return '';
    return width < DRIVE_WORDS_PX ? String(minutes) : `${minutes} min`;
  }

  protected hourWords(at: Instant): string {
    return clockTime(at, this.zone.name());
  }

  /** Midnight is called by the day that begins. */
  protected tickWords({ at, isMidnight }: HourTick): string {
    return isMidnight ? (dayTime(at, this.zone.name()).split(' ')[0] ?? '') : this.hourWords(at);
  }

  protected short(view: StopView | ProposedView): string {
    return view.verdict ? verdictShort(view.verdict) : '';
  }

  protected shiftWords({ technician }: RouteRow): string {
    const shift = technician.shifts
      .filter(({ endsAt }) => endsAt > this.now())
      .sort((a, b) => a.startsAt - b.startsAt)[0];
    if (!shift) return 'no shift';
    const zone = this.zone.name();
    return `${whenWords(shift.startsAt, this.now(), zone)}–${clockTime(shift.endsAt, zone)}`;
  }

  protected seenWords({ technician }: RouteRow): string {
    const { position } = technician;
    return position ? `seen ${ago(position.at, this.now())}` : 'not seen yet';
  }

  protected loadWords({ stops, driveMinutes }: RouteRow): string {
    if (stops.length === 0) return 'no stops';
    const count = stops.length === 1 ? '1 stop' : `${stops.length} stops`;
    return `${count}, ${duration(driveMinutes * MINUTE_MS)} driving`;
  }

  protected skillWords({ technician }: RouteRow): string {
    return technician.skills.map((skill) => SKILL_WORDS[skill]).join(', ');
  }

  protected words(view: StopView): string {
    const { stop, call } = view;
    const zone = this.zone.name();
    const parts = [
      `Call ${view.number}`,
      STOP_STATE_WORDS[stop.state].word + (stop.locked ? ', locked' : ''),
      `arrives ${whenWords(view.arriveAt, this.now(), zone)}, done ${clockTime(view.finishAt, zone)}`,
      stop.isUnreachable
        ? 'no open road leads there'
        : `${Math.round(view.driveMinutes)} minutes of driving`,
      call?.address.text ?? '',
      view.verdict ? verdictWords(view.verdict) : '',
    ];
    return parts.filter(Boolean).join('. ');
  }

  protected drop(event: CdkDragEnd, view: StopView): void {
    event.source.reset();
    const { x, y } = event.dropPoint;
    const lane = document
      .elementsFromPoint(x, y)
      .map((element) => element.closest<HTMLElement>('[data-lane]'))
      .find((element) => element !== null);
    const row = this.rows().find(({ technician }) => technician.id === lane?.dataset['lane']);
    if (!lane || !row) return;
    // The left end of the block means the arrival, not the place where it was gripped.
    const blockLeft = event.source.element.nativeElement.getBoundingClientRect().left;
    const left = blockLeft + event.distance.x - lane.getBoundingClientRect().left;
    const others = row.stops.filter((one) => one.stop.id !== view.stop.id);
    this.dropped.emit({
      view,
      technicianId: row.technician.id,
      position: placeAt(timeAt(left, this.span(), this.pxPerHour()), others),
    });
  }
}
