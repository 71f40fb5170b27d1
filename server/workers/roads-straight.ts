import type { LonLat } from '@shared/domain/travel/great-circle';
import { DEFAULT_TRAVEL, straightLineTravel } from '@shared/domain/travel/travel-times';
import type { RoadFan, RoadLeg, RoadMatrix } from './ports';

/** What is answered for a region that has no roads: the straight line, driving time only. */
export const NO_ROADS = straightLineTravel({ stopSeconds: 0 });

const secondsFor = (km: number): number => (km * 3600) / DEFAULT_TRAVEL.speedKmh;

export function straightMatrix(points: readonly LonLat[]): RoadMatrix {
  const km = points.flatMap((from) => points.map((to) => NO_ROADS.distanceKm(from, to)));
  return {
    seconds: Float64Array.from(km, secondsFor),
    metres: Float64Array.from(km, (one) => one * 1000),
  };
}

export function straightFan(point: LonLat, others: readonly LonLat[]): RoadFan {
  const km = others.map((other) => NO_ROADS.distanceKm(point, other));
  const drives = {
    seconds: Float64Array.from(km, secondsFor),
    metres: Float64Array.from(km, (one) => one * 1000),
  };
  return { there: drives, back: drives };
}

export const straightLegs = (stops: readonly LonLat[]): RoadLeg[] =>
  stops.slice(1).map((to, i) => {
    const km = NO_ROADS.distanceKm(stops[i]!, to);
    return { line: [stops[i]!, to], seconds: secondsFor(km), metres: km * 1000 };
  });
