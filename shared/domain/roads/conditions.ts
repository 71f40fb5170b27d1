import type { Instant } from '../instant';
import type { LonLat } from '../travel/great-circle';
import type { RoadClass } from './road-class';

/** What a storm does to a road: nobody passes (closed, flooded), or everybody passes slowly. */
export const STORM_ROAD_KINDS = ['closed', 'flooded', 'slow'] as const;
export type StormRoadKind = (typeof STORM_ROAD_KINDS)[number];

/**
 * Where it is. A line takes the roads that run along it and those that it is drawn across; an area, a
 * ring whose last point need not repeat the first, takes every stretch of road inside it.
 */
export type StormRoadShape =
  | { readonly type: 'line'; readonly points: readonly LonLat[] }
  | { readonly type: 'area'; readonly ring: readonly LonLat[] };

export interface StormRoad {
  readonly id: string;
  readonly kind: StormRoadKind;
  readonly shape: StormRoadShape;
  readonly from: Instant;
  /** Null while nobody knows when it ends. */
  readonly until: Instant | null;
  /** Of a slow road: the share of its usual speed that is left, above 0 and up to 1. */
  readonly speedShare?: number;
}

/** Shares of the usual speed, above 0; they multiply. 1 changes nothing; ferries keep their times. */
export interface RoadFactors {
  readonly timeOfDay: number;
  readonly storm: number;
  /** Corrections by class, from measured drives; a class that is left out counts 1. */
  readonly byClass: Readonly<Partial<Record<RoadClass, number>>>;
  /** Whether ferries run; left out, they do. */
  readonly ferriesRun?: boolean;
  /** Whether fords can be passed; left out, they can. */
  readonly fordsPassable?: boolean;
}

/** The roads at one moment: the storm roads in force then, and how fast the rest is. */
export interface RoadConditions {
  readonly roads: readonly StormRoad[];
  readonly factors: RoadFactors;
}

export const USUAL_FACTORS: RoadFactors = { timeOfDay: 1, storm: 1, byClass: {} };
/** Every road open, every class at its own speed. */
export const USUAL_CONDITIONS: RoadConditions = { roads: [], factors: USUAL_FACTORS };

/** The conditions at a moment: of all storm roads those that hold then. */
export const conditionsAt = (
  roads: readonly StormRoad[],
  factors: RoadFactors,
  at: Instant,
): RoadConditions => ({
  roads: roads.filter(({ from, until }) => from <= at && (until === null || at < until)),
  factors,
});

/**
 * The same text for conditions that give the same times, whatever the order or the ids of their roads,
 * so that times can be kept under it.
 */
export function conditionsKey({ roads, factors }: RoadConditions): string {
  const shapes = roads.map(({ kind, shape, speedShare }) =>
    JSON.stringify([
      kind === 'slow' ? (speedShare ?? 1) : 0,
      shape.type,
      shape.type === 'line' ? shape.points : shape.ring,
    ]),
  );
  const byClass = Object.entries(factors.byClass)
    .filter(([, share]) => share !== 1)
    .sort(([a], [b]) => (a < b ? -1 : 1));
  return JSON.stringify([
    factors.timeOfDay * factors.storm,
    byClass,
    factors.ferriesRun ?? true,
    factors.fordsPassable ?? true,
    [...new Set(shapes)].sort(),
  ]);
}
