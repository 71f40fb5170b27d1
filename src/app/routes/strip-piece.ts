import type { CompartmentKind } from '@shared/domain/cold-unit';
import { COMPARTMENT_KINDS } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';
import { stripState, type StripFacts, type StripState } from '../board/cold-strip-scale';
import { type RulerSpan, xOf } from './route-ruler';

/** One kind of contents over the time of a visit. Places are pixels from the stop's left end. */
export interface PieceLane {
  readonly kind: CompartmentKind;
  /** Until here cold, as far as published limits go; from here at risk. */
  readonly riskX: number;
  /** From here past the save-by. */
  readonly lostX: number;
}

/** The sign of the contents that are lost next, at their save-by or at the end towards it. */
export interface PieceSign {
  readonly kind: CompartmentKind;
  readonly state: StripState;
  readonly x: number;
  /** The save-by lies before or after the piece. */
  readonly beyond: 'before' | 'after' | null;
}

/** The piece of a call's cold strip that lies over a visit, on the ruler of the routes. */
export interface StripPiece {
  readonly width: number;
  /** Only what can still be saved now; the next one to be lost first. */
  readonly lanes: readonly PieceLane[];
  readonly sign: PieceSign | null;
}

/** So far a piece may go on after the visit, towards a save-by that is near. */
const MOST_AFTER_PX = 150;
const SIGN_PX = 16;
const HALF_SIGN_PX = SIGN_PX / 2;

export interface PiecePlace {
  readonly x: number;
  readonly width: number;
  /** Where the next stop begins; `null` behind the last one. */
  readonly nextX: number | null;
}

export function stripPiece(
  facts: StripFacts,
  finishAt: Instant,
  now: Instant,
  place: PiecePlace,
  ruler: { readonly span: RulerSpan; readonly pxPerHour: number },
): StripPiece {
  const live = facts.compartments
    .filter((one) => {
      const state = stripState(one, facts.restoredAt, now);
      return one.saveByAt !== null && state !== 'lost' && state !== 'stopped';
    })
    .sort((a, b) => (a.saveByAt ?? 0) - (b.saveByAt ?? 0));
  const [next] = live;
  const far = placeOf(ruler, place.x);
  if (!next) return { width: place.width, lanes: [], sign: null };

  const tickX = far(next.saveByAt ?? 0);
  const room = place.nextX === null ? Infinity : place.nextX - place.x - 3;
  const wish = tickX < place.width + MOST_AFTER_PX ? tickX + HALF_SIGN_PX : place.width;
  const width = Math.max(place.width, Math.min(wish, room));
  const firstOfKind = COMPARTMENT_KINDS.flatMap(
    (kind) => live.find((one) => one.kind === kind) ?? [],
  );
  const lanes = [next, ...firstOfKind.filter((one) => one.kind !== next.kind)].map((one) => ({
    kind: one.kind,
    riskX: inside(far(one.atRiskAt), width),
    lostX: inside(far(one.saveByAt ?? 0), width),
  }));
  const isMissed = finishAt >= (next.saveByAt ?? 0);
  const beyond = tickX < 0 ? 'before' : tickX > width ? 'after' : null;
  return {
    width,
    lanes,
    sign: {
      kind: next.kind,
      state: isMissed ? 'lost' : stripState(next, facts.restoredAt, now),
      x: Math.min(Math.max(tickX, HALF_SIGN_PX), width - HALF_SIGN_PX),
      beyond,
    },
  };
}

const inside = (x: number, width: number): number => Math.min(Math.max(x, 0), width);

/** A moment in pixels from the stop's left end; it may lie outside of the ruler. */
function placeOf(
  { span, pxPerHour }: { readonly span: RulerSpan; readonly pxPerHour: number },
  left: number,
): (at: Instant) => number {
  const one = xOf(span.from, span, pxPerHour);
  return (at) => one + ((at - span.from) / 3_600_000) * pxPerHour - left;
}
