import type { CallRow } from '@shared/contract/calls';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';
import { lanesByKind, type StripState, stripFactsOf } from '../board/cold-strip-scale';

/** The sign of a call in a list: its most pressing compartment and how that one is. */
export function markFace(
  call: CallRow,
  now: Instant,
): { readonly kind: CompartmentKind; readonly state: StripState } {
  const lanes = lanesByKind(stripFactsOf(call), now);
  const live = lanes.filter(({ state }) => state === 'at-risk' || state === 'still-safe');
  const pressing = (live.length > 0 ? live : lanes).reduce<(typeof lanes)[number] | null>(
    (next, lane) =>
      next && (next.saveByAt ?? Infinity) <= (lane.saveByAt ?? Infinity) ? next : lane,
    null,
  );
  return { kind: pressing?.kind ?? 'fresh-food', state: pressing?.state ?? 'lost' };
}
