import { type CdkDragEnd, CdkDrag } from '@angular/cdk/drag-drop';
import { ChangeDetectionStrategy, Component, computed, inject, input, output } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { type Instant, MINUTE_MS } from '@shared/domain/instant';
import { stripFactsOf } from '../board/cold-strip-scale';
import { whenWords } from '../board/time-words';
import { clockTime, duration, Zone } from '../core/zone';
import { drivePieces, type Halt } from './route-halts';
import { blockOf, type RulerSpan, xOf } from './route-ruler';
import type { ProposedView, RouteRow, StopView } from './route-rows';
import { verdictShort, verdictWords } from './save-verdict';
import { isFirmStop, STOP_STATE_WORDS } from './stop-words';
import { stripPiece, type StripPiece } from './strip-piece';
import { StripPieceView } from './strip-piece-view';

/** Room for "21 min", and for the number alone. */
const DRIVE_WORDS_PX = 44;
const DRIVE_NUMBER_PX = 18;
/** A halt is never drawn narrower than its sign. */
const LEAST_HALT_PX = 18;

/**
 * One technician's route on the ruler: above, the road with its drives, visits and halts; below the road
 * the pieces of the calls' cold strips that lie over the visits.
 */
@Component({
  selector: 'thaw-route-lane',
  imports: [CdkDrag, MatIcon, StripPieceView],
  templateUrl: './route-lane.html',
  styleUrl: './route-lane.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class]': 'filled()' },
})
export class RouteLane {
  private readonly zone = inject(Zone);

  readonly row = input.required<RouteRow>();
  readonly span = input.required<RulerSpan>();
  readonly pxPerHour = input.required<number>();
  readonly now = input.required<Instant>();
  /** The stop that the cursor stands on. */
  readonly atStop = input<string | null>(null);

  readonly chosen = output<StopView>();
  readonly opened = output<StopView>();
  readonly dropped = output<{ readonly event: CdkDragEnd; readonly view: StopView }>();

  protected readonly stateWords = STOP_STATE_WORDS;
  protected readonly isFirm = isFirmStop;

  private readonly ruler = computed(() => ({ span: this.span(), pxPerHour: this.pxPerHour() }));
  protected readonly nowX = computed(() => this.x(this.now()));

  /** Whether the lane holds stops in force, a proposal alone, both, or nothing. */
  protected readonly filled = computed(() => filledBy(this.row()));

  /** The shifts, as bands on the ruler. */
  protected readonly bands = computed(() => {
    const { from, to } = this.span();
    return this.row()
      .technician.shifts.filter((shift) => shift.endsAt > from && shift.startsAt < to)
      .map((shift) => this.stretch(shift.startsAt, shift.endsAt));
  });

  protected readonly blocks = computed(() => {
    const { stops } = this.row();
    return stops.map((view, index) => {
      const place = blockOf(view, this.span(), this.pxPerHour());
      return {
        view,
        place,
        piece: this.piece(view, place, stops[index + 1]),
        spare: view.verdict ? verdictShort(view.verdict) : '',
        words: this.stopWords(view),
        promise: view.call?.window && this.stretch(view.call.window.from, view.call.window.to),
      };
    });
  });

  protected readonly proposed = computed(() => {
    const { proposed } = this.row();
    return proposed.map((view, index) => {
      const place = blockOf(view, this.span(), this.pxPerHour());
      return {
        view,
        place,
        piece: this.piece(view, place, proposed[index + 1]),
        spare: view.verdict ? verdictShort(view.verdict) : '',
        words: `Call ${view.number}: ${view.because}`,
      };
    });
  });

  protected readonly drives = computed(() => {
    const { stops, halts } = this.row();
    return stops.flatMap((view, index) => {
      const after = stops[index - 1]?.finishAt ?? -Infinity;
      return drivePieces(view, halts, after).map(({ from, to }) => {
        // A visit that ends late takes from the drive; the minutes stay as they are planned.
        const place = this.stretch(Math.min(Math.max(from, after), to), to);
        return { ...place, words: driveWords((to - from) / MINUTE_MS, place.width) };
      });
    });
  });

  /** Of the routes in force, and of a proposal beside them or in their place. */
  protected readonly halts = computed(() => {
    const { halts, proposedHalts } = this.row();
    const isAlone = this.filled() === 'alone';
    return [
      ...(isAlone ? [] : halts).map((halt) => ({ ...this.haltPlace(halt), isBeside: false })),
      ...proposedHalts.map((halt) => ({ ...this.haltPlace(halt), isBeside: !isAlone })),
    ];
  });

  /** What of the route lies behind the end of the shift that it began in. */
  protected readonly overtime = computed(() => {
    const { stops, proposed, technician } = this.row();
    const last = stops.at(-1) ?? proposed.at(-1);
    if (!last) return null;
    const shift = technician.shifts.findLast(({ startsAt }) => startsAt <= last.arriveAt);
    const over = shift ? last.finishAt - shift.endsAt : 0;
    if (!shift || over < MINUTE_MS) return null;
    const place = this.stretch(shift.endsAt, last.finishAt);
    return { ...place, words: `overtime ${duration(over)}` };
  });

  /** What an empty lane says, from where it begins to be true. */
  protected readonly rest = computed(() => {
    if (this.filled() !== 'bare') return null;
    const shift = this.row()
      .technician.shifts.filter(({ endsAt }) => endsAt > this.now())
      .sort((a, b) => a.startsAt - b.startsAt)[0];
    const x = this.x(Math.max(this.now(), shift?.startsAt ?? 0)) + 8;
    return { x, words: shift ? 'no stops' : 'no shift from here on' };
  });

  private x(at: Instant): number {
    return xOf(at, this.span(), this.pxPerHour());
  }

  private stretch(from: Instant, to: Instant): { readonly x: number; readonly width: number } {
    const x = this.x(from);
    return { x, width: this.x(to) - x };
  }

  private piece(
    view: StopView | ProposedView,
    place: { readonly x: number; readonly width: number },
    next: { readonly arriveAt: Instant } | undefined,
  ): StripPiece | null {
    if (!view.call) return null;
    const nextX = next ? this.x(next.arriveAt) : null;
    const at = { x: place.x, width: place.width, nextX };
    return stripPiece(stripFactsOf(view.call), view.finishAt, this.now(), at, this.ruler());
  }

  private haltPlace(halt: Halt) {
    const { x, width } = this.stretch(halt.startAt, halt.finishAt);
    const zone = this.zone.name();
    const what = halt.kind === 'break' ? 'Break' : 'At the store for parts, about';
    return {
      kind: halt.kind,
      x,
      width: Math.max(width, LEAST_HALT_PX),
      words: `${what} ${clockTime(halt.startAt, zone)} to ${clockTime(halt.finishAt, zone)}`,
    };
  }

  private stopWords(view: StopView): string {
    const { stop, call } = view;
    const zone = this.zone.name();
    const parts = [
      `Call ${view.number}`,
      STOP_STATE_WORDS[stop.state].word + (stop.locked ? ', locked' : ''),
      `arrives ${whenWords(view.arriveAt, this.now(), zone)}, done ${clockTime(view.finishAt, zone)}`,
      view.late?.words ?? '',
      stop.isUnreachable
        ? 'no open road leads there'
        : `${Math.round(view.driveMinutes)} minutes of driving`,
      stop.fetches ? 'by the store first' : '',
      call?.address.text ?? '',
      view.verdict ? verdictWords(view.verdict) : '',
    ];
    return parts.filter(Boolean).join('. ');
  }
}

/** Whether a lane holds stops in force, a proposal alone, both, or nothing. */
export function filledBy({ stops, proposed }: RouteRow): 'stops' | 'alone' | 'both' | 'bare' {
  if (stops.length > 0) return proposed.length > 0 ? 'both' : 'stops';
  return proposed.length > 0 ? 'alone' : 'bare';
}

function driveWords(minutes: number, width: number): string {
  const whole = Math.round(minutes);
  if (width < DRIVE_NUMBER_PX) return '';
  return width < DRIVE_WORDS_PX ? String(whole) : `${whole} min`;
}
