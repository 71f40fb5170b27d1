import {
  USUAL_CONDITIONS,
  type RoadConditions,
  type StormRoad,
} from '@shared/domain/roads/conditions';
import { greatCircleKm, type LonLat } from '@shared/domain/travel/great-circle';
import type { RoadFan, RoadLeg, RoadsPort } from '../../server/workers/ports';

/** East of here is an island. */
export const SHORE = -47.6;
/** The ways across, by the names that tests give them. */
export const BRIDGES: Readonly<Record<'south' | 'north', LonLat>> = {
  south: [SHORE, 36.4],
  north: [SHORE, 36.55],
};
/** A stretch of road over a bridge, as a dispatcher would close it. */
export const over = (bridge: keyof typeof BRIDGES) => ({
  type: 'line' as const,
  points: [-0.004, 0.004].map((d): [number, number] => [
    BRIDGES[bridge][0] + d,
    BRIDGES[bridge][1],
  ]),
});

const KMH = 40;

/**
 * Roads that can be worked out in one's head: everywhere straight, and two bridges to an island. It answers
 * what the road graph answers, so that a test of what follows from a closed road need not make a graph.
 */
export function twoBridges(): RoadsPort & { asked: number } {
  let followed: RoadConditions = USUAL_CONDITIONS;
  const port = {
    asked: 0,
    source: 'Two bridges',
    switchTo: () => Promise.resolve(),
    get followed() {
      return followed;
    },
    follow: (conditions: RoadConditions) => {
      followed = conditions;
      return Promise.resolve();
    },
    matrix: (points: readonly LonLat[], conditions = followed) => {
      const ways = points.flatMap((a) => points.map((b) => wayOf(a, b, conditions)));
      return Promise.resolve({
        seconds: Float64Array.from(ways, (way) => secondsOf(way, conditions)),
        metres: Float64Array.from(ways, metresOf),
      });
    },
    oneToMany: (point: LonLat, others: readonly LonLat[], conditions = followed) => {
      port.asked += 1;
      const fan = (ways: readonly Way[]): RoadFan['there'] => ({
        seconds: Float64Array.from(ways, (way) => secondsOf(way, conditions)),
        metres: Float64Array.from(ways, metresOf),
      });
      return Promise.resolve({
        there: fan(others.map((other) => wayOf(point, other, conditions))),
        back: fan(others.map((other) => wayOf(other, point, conditions))),
      });
    },
    path: (stops: readonly LonLat[], conditions = followed) =>
      Promise.resolve(
        stops.slice(1).map((to, i): RoadLeg | null => {
          const line = wayOf(stops[i]!, to, conditions);
          if (!line) return null;
          return { line, seconds: secondsOf(line, conditions), metres: metresOf(line) };
        }),
      ),
    nearest: (at: LonLat) => ({
      at,
      metres: 5,
      name: 'Causeway',
      roadClass: 'residential' as const,
      isBridge: false,
      isFord: false,
      line: [at, [at[0] + 0.001, at[1]] as const],
    }),
    travel: (stopSeconds: number) => ({
      source: 'Two bridges',
      distanceKm: (from: LonLat, to: LonLat) => metresOf(wayOf(from, to, followed)) / 1000,
      matrix: (points: readonly LonLat[]) =>
        Float64Array.from(
          points.flatMap((a, i) =>
            points.map((b, j) =>
              i === j ? 0 : secondsOf(wayOf(a, b, followed), followed) + stopSeconds,
            ),
          ),
        ),
    }),
  };
  return port;
}

/** `null` where no way leads. */
type Way = readonly LonLat[] | null;

function wayOf(from: LonLat, to: LonLat, { roads }: RoadConditions): Way {
  if (from[0] > SHORE === to[0] > SHORE) return [from, to];
  const ways = Object.values(BRIDGES)
    .filter((bridge) => !roads.some((road) => isBlocked(road, bridge)))
    .map((bridge) => [from, bridge, to] as const);
  return ways.sort((a, b) => metresOf(a) - metresOf(b))[0] ?? null;
}

const isBlocked = ({ kind, shape }: StormRoad, bridge: LonLat): boolean =>
  kind !== 'slow' &&
  shape.type === 'line' &&
  shape.points.some((point) => greatCircleKm(point, bridge) < 0.5);

const metresOf = (way: Way): number =>
  way ? way.slice(1).reduce((sum, to, i) => sum + greatCircleKm(way[i]!, to) * 1000, 0) : Infinity;

const secondsOf = (way: Way, { factors }: RoadConditions): number =>
  (metresOf(way) * 3.6) / (KMH * factors.timeOfDay * factors.storm * byClass(factors));

const byClass = ({ byClass: classes }: RoadConditions['factors']): number =>
  classes.residential ?? 1;
