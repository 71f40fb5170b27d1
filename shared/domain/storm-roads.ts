import type { Instant } from './instant';
import type { StormRoad, StormRoadKind, StormRoadShape } from './roads/conditions';
import { greatCircleKm, type LonLat } from './travel/great-circle';

/** `reported`: a technician said so from the road and a dispatcher has not looked at it yet. */
export const STORM_ROAD_STATES = ['reported', 'confirmed', 'lifted'] as const;
export type StormRoadState = (typeof STORM_ROAD_STATES)[number];

export interface StormRoadSpan {
  readonly startsAt: Instant;
  /** `null`: until further notice. */
  readonly endsAt: Instant | null;
}

export interface StormRoadFacts extends StormRoadSpan {
  readonly kind: StormRoadKind;
  readonly shape: StormRoadShape;
  /** Of the usual speed, for a slow road; `null` for one that nobody passes. */
  readonly speedShare: number | null;
}

export interface StandingStormRoad extends StormRoadFacts {
  readonly id: string;
  readonly state: StormRoadState;
}

/** Slower than the first is better called closed, and faster than the second is no news: our bounds. */
export const LEAST_SPEED_SHARE = 0.1;
export const MOST_SPEED_SHARE = 0.9;
/** A stretch that is longer was picked by mistake, most likely: our bound. */
export const LONGEST_STRETCH_KM = 60;

export const blocksRoad = (kind: StormRoadKind): boolean => kind !== 'slow';

/** Whether the span holds the moment: its beginning does, its end no more. */
export const isDuring = ({ startsAt, endsAt }: StormRoadSpan, at: Instant): boolean =>
  startsAt <= at && (endsAt === null || at < endsAt);

/** What drivers meet at a moment: what a dispatcher has confirmed and its span holds. */
export const inForceAt = <R extends StandingStormRoad>(roads: readonly R[], at: Instant): R[] =>
  roads.filter((road) => road.state === 'confirmed' && isDuring(road, at));

/** As the road graph takes them: spans as they are, so that it may look ahead. */
export const forTheGraph = ({
  id,
  kind,
  shape,
  startsAt,
  endsAt,
  speedShare,
}: StandingStormRoad): StormRoad => ({
  id,
  kind,
  shape,
  from: startsAt,
  until: endsAt,
  ...(speedShare === null ? {} : { speedShare }),
});

/** When what is in force changes next by itself; `null` when it stays as it is. */
export function nextChangeAfter(roads: readonly StandingStormRoad[], at: Instant): Instant | null {
  let next: Instant | null = null;
  for (const { state, startsAt, endsAt } of roads) {
    if (state !== 'confirmed' || (endsAt !== null && endsAt <= startsAt)) continue;
    for (const moment of [startsAt, endsAt])
      if (moment !== null && moment > at && (next === null || moment < next)) next = moment;
  }
  return next;
}

/**
 * Names what is in force, so that two moments can be compared without looking at the roads: the same
 * text means the same conditions.
 */
export const inForceKey = (
  roads: readonly (StandingStormRoad & { readonly version: number })[],
  at: Instant,
): string =>
  inForceAt(roads, at)
    .map(({ id, version }) => `${id}.${version}`)
    .sort()
    .join(' ');

/** What is wrong with a storm road, as a sentence for the one who wrote it; `null` when nothing is. */
export function stormRoadFault(road: StormRoadFacts): string | null {
  const { kind, shape, speedShare, startsAt, endsAt } = road;
  if (endsAt !== null && endsAt <= startsAt) return 'It ends before it begins.';
  if (kind === 'slow') {
    if (speedShare === null) return 'How slow is it? Say what share of the usual speed is left.';
    if (!(speedShare >= LEAST_SPEED_SHARE && speedShare <= MOST_SPEED_SHARE))
      return 'Between 10 and 90 percent of the usual speed. If nobody gets through, call it closed.';
  } else if (speedShare !== null) return 'A road that nobody passes has no speed.';
  if (shape.type === 'line') {
    const km = lengthKm(shape.points);
    if (km === 0) return 'The stretch has no length. Pick two places on the road.';
    if (km > LONGEST_STRETCH_KM)
      return `The stretch is longer than ${LONGEST_STRETCH_KM} km. Pick its ends closer together.`;
  }
  return null;
}

/** Along a line, in kilometres. */
export function lengthKm(points: readonly LonLat[]): number {
  let km = 0;
  for (let i = 1; i < points.length; i++) km += greatCircleKm(points[i - 1]!, points[i]!);
  return km;
}
