import type { Instant } from '@shared/domain/instant';
import { COMPARTMENT_WORDS } from './compartment-words';
import type { StripLane } from './cold-strip-scale';
import { fromNowWords } from './time-words';

/**
 * What a strip says to someone who does not see it.
 *
 * @param clock tells a moment as the region's time, "02:40" or "Thu 19:20"
 */
export function stripWords(
  lanes: readonly StripLane[],
  now: Instant,
  clock: (at: Instant) => string,
): string {
  if (lanes.length === 0) return 'No compartment is known.';
  return lanes.map((lane) => laneWords(lane, now, clock)).join(' ');
}

export function laneWords(lane: StripLane, now: Instant, clock: (at: Instant) => string): string {
  const { name } = COMPARTMENT_WORDS[lane.kind];
  const what = lane.count > 1 ? `${name} (${lane.count}, the most pressing)` : name;
  return `${what}: ${stateWords(lane, now, clock)}.`;
}

function stateWords(lane: StripLane, now: Instant, clock: (at: Instant) => string): string {
  const { saveByAt, atRiskAt, state, kind } = lane;
  if (state === 'stopped') return 'cooling came back before its save-by';
  if (saveByAt === null) {
    const risk = state === 'at-risk' ? 'at risk' : `at risk from ${clock(atRiskAt)}`;
    return `${risk}; no published hour, ask a pharmacist`;
  }
  const when = `${clock(saveByAt)}, ${fromNowWords(saveByAt, now)}`;
  if (state === 'lost') {
    return kind === 'medicine'
      ? `replace, its limit passed at ${when}`
      : `passed its save-by at ${when}`;
  }
  const likely = likelyWords(lane, now, clock);
  if (state === 'at-risk') return `at risk, ${likely}save by ${when}`;
  return `at risk from ${clock(atRiskAt)}, ${likely}save by ${when}`;
}

/** Never that contents are safe until then: from here they are likely warm, by measured warming. */
function likelyWords(
  { kind, likelyAt }: StripLane,
  now: Instant,
  clock: (at: Instant) => string,
): string {
  if (likelyAt === null) return '';
  const what = kind === 'freezer' ? 'thawing' : 'warm';
  return likelyAt <= now ? `likely ${what} by now, ` : `likely ${what} from ${clock(likelyAt)}, `;
}
