import type { CallRow } from '@shared/contract/calls';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import { type Instant, MINUTE_MS } from '@shared/domain/instant';
import type { RankedCall } from '../core/ranking';
import { stripState } from '../board/cold-strip-scale';
import { toWorld } from './world';

/** How soon something is lost; a mark's size and fill say it. */
export type Press = 'now' | 'soon' | 'later' | 'none';

/** Common practice, no source: what a dispatcher acts on this minute, and in this part of a shift. */
const NOW_MINUTES = 60;
const SOON_MINUTES = 4 * 60;

/** What is drawn of a call. */
export interface DrawnMark {
  readonly call: Pick<CallRow, 'number' | 'danger'>;
  readonly x: number;
  readonly y: number;
  /** The compartment that presses most; shape and letter are its. */
  readonly kind: CompartmentKind;
  readonly press: Press;
  /** A technician has the call on a route. */
  readonly isOnRoute: boolean;
}

/** One call on the map, in the order of the queue. */
export interface CallMark extends DrawnMark {
  readonly call: CallRow;
}

/** `null` for a call that nobody knows the place of. */
export function callMark({ call, urgency }: RankedCall, now: Instant): CallMark | null {
  const { lonLat } = call.address;
  if (!lonLat) return null;
  return {
    call,
    ...toWorld(lonLat),
    kind: urgency.lane === 1 ? 'medicine' : pressingKind(call, now),
    press: pressOf(urgency),
    isOnRoute: call.technicianId !== null,
  };
}

export function pressOf({
  lane,
  slackMinutes,
}: Pick<RankedCall['urgency'], 'lane' | 'slackMinutes'>): Press {
  if (lane === 4) return 'none';
  const slack = slackMinutes ?? Infinity;
  if (slack < NOW_MINUTES) return 'now';
  // Medicine at risk is somebody's phone call, however long its limit still is.
  return slack < SOON_MINUTES || lane === 1 ? 'soon' : 'later';
}

/** The kind of what is lost next; of the first compartment when nothing can be saved any more. */
function pressingKind(call: CallRow, now: Instant): CompartmentKind {
  let first: CompartmentKind = 'fresh-food';
  let next: CompartmentKind | null = null;
  let nextAt = Infinity;
  for (const unit of [...call.units].reverse()) {
    for (const compartment of [...unit.compartments].reverse()) {
      const { kind, saveByAt, valueCents } = compartment;
      first = kind;
      const state = stripState(compartment, call.restoredAt, now);
      const isLive = state === 'still-safe' || state === 'at-risk';
      if (!isLive || (valueCents === 0 && kind !== 'medicine')) continue;
      if (next === null || (saveByAt ?? Infinity) <= nextAt) {
        next = kind;
        nextAt = saveByAt ?? Infinity;
      }
    }
  }
  return next ?? first;
}

/**
 * Makes the marks of the queue. A mark is kept for as long as its row and the minute stay the same,
 * so that a change costs what changed.
 */
export class CallMarks {
  private known = new WeakMap<RankedCall, CallMark>();
  private minute = NaN;

  of(ranked: readonly RankedCall[], now: Instant): CallMark[] {
    const minute = Math.floor(now / MINUTE_MS);
    if (minute !== this.minute) {
      this.known = new WeakMap();
      this.minute = minute;
    }
    const marks: CallMark[] = [];
    for (const one of ranked) {
      const mark = this.known.get(one) ?? callMark(one, now);
      if (!mark) continue;
      this.known.set(one, mark);
      marks.push(mark);
    }
    return marks;
  }
}
