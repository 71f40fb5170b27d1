import type { CdkDragEnd } from '@angular/cdk/drag-drop';
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
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { Instant } from '@shared/domain/instant';
import { MINUTE_MS } from '@shared/domain/instant';
import { SKILL_WORDS } from '../board/queue-words';
import { whenWords } from '../board/time-words';
import { ago, clockTime, dayTime, duration, Zone } from '../core/zone';
import type { PlaceAnswer } from './place-dialog';
import { heldCursor, isCursorMove, movedCursor, type RouteCursor } from './route-cursor';
import { filledBy, RouteLane } from './route-lane';
import type { RouteRow, StopView } from './route-rows';
import {
  type HourTick,
  placeAt,
  type RulerSpan,
  ticksOf,
  timeAt,
  widthOf,
  xOf,
} from './route-ruler';

/** An hour's label closer than this to the label of now would lie under it. */
const LABEL_PX = 52;
/** What has been stays in sight this far. */
const BEFORE_NOW_PX = 48;

/** All routes under each other on one ruler of time, with a cursor that moves over their stops. */
@Component({
  selector: 'thaw-route-board',
  imports: [MatIcon, RouteLane],
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

  readonly cursorMoved = output<RouteCursor>();
  /** Dragged there; the same as answering the dialog. */
  readonly dropped = output<PlaceAnswer & { readonly view: StopView }>();
  /** A double click on a stop. */
  readonly opened = output<StopView>();

  protected readonly filled = filledBy;
  protected readonly held = computed(() => heldCursor(this.rows(), this.cursor()));
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

  constructor() {
    afterNextRender(() => this.showNow());
  }

  /** Changes the zoom around the left edge of what is in sight. */
  keepLeftEdge(zoom: () => void): void {
    const scroll = this.host.querySelector('.scroll');
    const hours = (scroll?.scrollLeft ?? 0) / this.pxPerHour();
    zoom();
    afterNextRender(
      () => {
        if (scroll) scroll.scrollLeft = hours * this.pxPerHour();
      },
      { injector: this.injector },
    );
  }

  /** Puts the keyboard on the cursor and brings it into sight. */
  focus(): void {
    afterNextRender(
      () => this.host.querySelector<HTMLElement>('[data-cursor][tabindex="0"]')?.focus(),
      { injector: this.injector },
    );
  }

  /** Moves the ruler so that now stands near its left end. */
  showNow(): void {
    const scroll = this.host.querySelector('.scroll');
    if (scroll) scroll.scrollLeft = Math.max(0, this.nowX() - BEFORE_NOW_PX);
  }

  protected press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey || !isCursorMove(event.key)) return;
    const next = movedCursor(this.rows(), this.cursor(), event.key);
    if (!next) return;
    event.preventDefault();
    this.cursorMoved.emit(next);
    this.focus();
  }

  /** The stop under the cursor on this route, `null` on its technician; else undefined. */
  protected cursorStop(technicianId: string): string | null | undefined {
    const held = this.held();
    return held?.technicianId === technicianId ? held.stopId : undefined;
  }

  protected hourWords(at: Instant): string {
    return clockTime(at, this.zone.name());
  }

  /** Midnight is called by the day that begins. */
  protected tickWords({ at, isMidnight }: HourTick): string {
    return isMidnight ? (dayTime(at, this.zone.name()).split(' ')[0] ?? '') : this.hourWords(at);
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
    // The lane says it.
    if (stops.length === 0) return '';
    const count = stops.length === 1 ? '1 stop' : `${stops.length} stops`;
    return `${count}, ${duration(driveMinutes * MINUTE_MS)} driving`;
  }

  protected skillWords({ technician }: RouteRow): string {
    return technician.skills.map((skill) => SKILL_WORDS[skill]).join(', ');
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
