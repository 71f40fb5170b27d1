import {
  conditionsKey,
  USUAL_CONDITIONS,
  type RoadConditions,
} from '@shared/domain/roads/conditions';
import { ROAD_CLASSES } from '@shared/domain/roads/road-class';
import type { TimedRoads } from '@shared/domain/roads/quickest-way';
import { SEGMENT_FLAGS } from '@shared/domain/roads/road-graph';
import { lineOf } from '@shared/domain/roads/storm-cover';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { roadTravel } from '@shared/domain/travel/road-travel';
import type { TravelTimes } from '@shared/domain/travel/travel-times';
import type { NearestRoad, RoadFan, RoadLeg, RoadMatrix, RoadsPort } from './ports';
import { RoadsEngine, type RoadTimes } from './roads-engine';
import { WorkerClient, type WorkerClientOptions } from './worker-client';

export type RoadsQuestion =
  | { readonly kind: 'times' }
  | { readonly kind: 'matrix'; readonly points: readonly LonLat[] }
  | { readonly kind: 'fan'; readonly point: LonLat; readonly others: readonly LonLat[] }
  | { readonly kind: 'path'; readonly stops: readonly LonLat[] };

export interface RoadsRequest {
  /** The region's folder, which has a hash in its name. */
  readonly name: string;
  /** Shared and not copied, so it may go along with every question: a new thread needs it. */
  readonly file: SharedArrayBuffer;
  readonly conditions: RoadConditions;
  readonly question: RoadsQuestion;
}

export type RoadsResponse =
  | { readonly kind: 'times'; readonly times: RoadTimes }
  | { readonly kind: 'matrix'; readonly matrix: RoadMatrix }
  | { readonly kind: 'fan'; readonly fan: RoadFan }
  | { readonly kind: 'path'; readonly legs: readonly (RoadLeg | null)[] };

export type RoadsWorker = Pick<WorkerClient<RoadsRequest, RoadsResponse>, 'run'>;

export function createRoadsWorker(
  scriptPath: string,
  options: Partial<WorkerClientOptions> = {},
): WorkerClient<RoadsRequest, RoadsResponse> {
  return new WorkerClient({
    name: 'roads',
    timeoutMs: 60_000,
    queue: 'in-order',
    ...options,
    scriptPath,
  });
}

/** The roads of one region. */
export interface RegionRoadsFile {
  /** The region's folder, without its path. */
  readonly key: string;
  readonly regionName: string;
  readonly file: SharedArrayBuffer;
}

/**
 * The roads as the server asks them: tables and lines from the thread, single drives and the nearest road
 * in this one, on the same memory.
 */
export class RoadsClient implements RoadsPort {
  private constructor(
    private readonly region: RegionRoadsFile,
    private readonly worker: RoadsWorker,
    private readonly engine: RoadsEngine,
    private inForce: { readonly conditions: RoadConditions; readonly roads: TimedRoads },
  ) {}

  private asked = 0;
  private answered = 0;

  /** Opens a region's roads under the usual conditions. */
  static async open(region: RegionRoadsFile, worker: RoadsWorker): Promise<RoadsClient> {
    const engine = new RoadsEngine(region.file);
    const times = await timesFrom(worker, region, USUAL_CONDITIONS);
    return new RoadsClient(region, worker, engine, {
      conditions: USUAL_CONDITIONS,
      roads: engine.withTimes(times),
    });
  }

  get source(): string {
    return `Roads of ${this.region.regionName}`;
  }

  get followed(): RoadConditions {
    return this.inForce.conditions;
  }

  async follow(conditions: RoadConditions): Promise<void> {
    const order = ++this.asked;
    if (conditionsKey(conditions) === conditionsKey(this.followed)) {
      this.answered = order;
      return;
    }
    const times = await timesFrom(this.worker, this.region, conditions);
    // Conditions that were asked for later count, whatever is answered first.
    if (order < this.answered) return;
    this.answered = order;
    this.inForce = { conditions, roads: this.engine.withTimes(times) };
  }

  async matrix(points: readonly LonLat[], conditions = this.followed): Promise<RoadMatrix> {
    const answer = await this.ask({ kind: 'matrix', points }, conditions);
    return answer.kind === 'matrix' ? answer.matrix : wrongAnswer();
  }

  async oneToMany(
    point: LonLat,
    others: readonly LonLat[],
    conditions = this.followed,
  ): Promise<RoadFan> {
    const answer = await this.ask({ kind: 'fan', point, others }, conditions);
    return answer.kind === 'fan' ? answer.fan : wrongAnswer();
  }

  async path(
    stops: readonly LonLat[],
    conditions = this.followed,
  ): Promise<readonly (RoadLeg | null)[]> {
    const answer = await this.ask({ kind: 'path', stops }, conditions);
    return answer.kind === 'path' ? answer.legs : wrongAnswer();
  }

  nearest(point: LonLat): NearestRoad {
    const { graph, names } = this.engine.roads;
    const { segment, at, metres } = this.engine.snap.nearest(point);
    const flags = graph.segmentFlags[segment]!;
    const name = names[graph.segmentName[segment]!] ?? '';
    return {
      at,
      metres,
      name: name === '' ? null : name,
      roadClass: ROAD_CLASSES[graph.segmentClass[segment]!]!,
      isBridge: (flags & SEGMENT_FLAGS.bridge) !== 0,
      isFord: (flags & SEGMENT_FLAGS.ford) !== 0,
      line: lineOf(graph, segment),
    };
  }

  travel(stopSeconds: number): TravelTimes {
    const { roads } = this.inForce;
    return roadTravel(this.source, stopSeconds, (from, to) => this.engine.drive(roads, from, to));
  }

  private ask(question: RoadsQuestion, conditions: RoadConditions): Promise<RoadsResponse> {
    const { key, file } = this.region;
    return this.worker.run({ name: key, file, conditions, question });
  }
}

async function timesFrom(
  worker: RoadsWorker,
  { key, file }: RegionRoadsFile,
  conditions: RoadConditions,
): Promise<RoadTimes> {
  const answer = await worker.run({ name: key, file, conditions, question: { kind: 'times' } });
  return answer.kind === 'times' ? answer.times : wrongAnswer();
}

function wrongAnswer(): never {
  throw new Error('The thread of the roads has answered another question.');
}
