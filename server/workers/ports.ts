import type { RoadConditions } from '@shared/domain/roads/conditions';
import type { RoadClass } from '@shared/domain/roads/road-class';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { TravelTimes } from '@shared/domain/travel/travel-times';
import type { ForecastRequest, ForecastResponse } from './forecast-client';
import type { PlannerRequest, PlannerResponse } from './planner-client';
import type { PocketsRequest, PocketsResponse } from './pockets-client';
import type { RunOptions } from './worker-client';

/** What looks ahead; a test may answer in its own thread. */
export interface ForecastPort {
  run(request: ForecastRequest, options?: RunOptions): Promise<ForecastResponse>;
}

/** What commands see of the planner; a test may answer in its own thread. */
export interface PlannerPort {
  run(request: PlannerRequest, options?: RunOptions): Promise<PlannerResponse>;
}

/** What queries see of the pockets. */
export interface PocketsPort {
  run(request: PocketsRequest, options?: RunOptions): Promise<PocketsResponse>;
}

/** Drives between every two of some points, row-major: from × points.length + to. */
export interface RoadMatrix {
  /** Seconds behind the wheel, to the millisecond; Infinity where no way leads. */
  readonly seconds: Float64Array;
  /** Metres of that quickest way; Infinity where no way leads. */
  readonly metres: Float64Array;
}

/** Drives from one point to others and back, in the others' order; Infinity where no way leads. */
export interface RoadFan {
  readonly there: { readonly seconds: Float64Array; readonly metres: Float64Array };
  readonly back: { readonly seconds: Float64Array; readonly metres: Float64Array };
}

/** One drive along the roads, from the road beside its start to the road beside its end. */
export interface RoadLeg {
  readonly line: readonly LonLat[];
  readonly seconds: number;
  readonly metres: number;
}

export interface NearestRoad {
  /** The point of the road's line that is nearest. */
  readonly at: LonLat;
  /** How far that is from the point asked for. */
  readonly metres: number;
  /** Null for a road without a name. */
  readonly name: string | null;
  readonly roadClass: RoadClass;
  readonly isBridge: boolean;
  readonly isFord: boolean;
  /** The whole stretch between two junctions, in the direction in which it was mapped. */
  readonly line: readonly LonLat[];
}

/**
 * Travel along the roads of the region. Times are driving times: what parking and the walk to the door
 * take is added by whoever plans. Points are taken to the nearest road that is joined to the rest.
 *
 * Every question may bring conditions of its own, and is answered under exactly those; without them it
 * is answered under the ones that are followed, and while new ones are worked into the times, under
 * the ones before. A region without a single road is answered by straight lines, and `source` says so.
 */
export interface RoadsPort {
  /** Where the times come from, in words for the screen: "Roads of Skerry County". */
  readonly source: string;
  /** Takes over the roads of another region; until it resolves answers are of the one before. */
  switchTo(region: { readonly folder: string; readonly name: string }): Promise<void>;
  /** The conditions that answers follow now. */
  readonly followed: RoadConditions;
  /** Works conditions into the times; once it resolves every answer follows them. The latest wins. */
  follow(conditions: RoadConditions): Promise<void>;
  matrix(points: readonly LonLat[], conditions?: RoadConditions): Promise<RoadMatrix>;
  oneToMany(
    point: LonLat,
    others: readonly LonLat[],
    conditions?: RoadConditions,
  ): Promise<RoadFan>;
  /** One leg between each stop and the next; null for a leg that no way leads along. */
  path(stops: readonly LonLat[], conditions?: RoadConditions): Promise<readonly (RoadLeg | null)[]>;
  /** The nearest road; null when the region has none. */
  nearest(point: LonLat): NearestRoad | null;
  /**
   * The same drives for commands, at once and in their own thread, under the conditions followed: meant
   * for the few drives of a route, each well under a millisecond, not for tables.
   *
   * @param stopSeconds is added to every drive for parking and the walk to the door
   */
  travel(stopSeconds: number): TravelTimes;
}
