import { basename } from 'node:path';
import { setImmediate } from 'node:timers/promises';
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
import { straightLineTravel, type TravelTimes } from '@shared/domain/travel/travel-times';
import { readRoadFile } from '../region/road-file';
import type { NearestRoad, RoadFan, RoadLeg, RoadMatrix, RoadsPort } from './ports';
import { RoadsEngine, type RoadTimes } from './roads-engine';
import { NO_ROADS, straightFan, straightLegs, straightMatrix } from './roads-straight';
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

/** Single drives that are kept: all those of a storm's routes many times over. */
const MOST_DRIVES = 20_000;

interface Opened {
  /** The region's folder, without its path. */
  readonly key: string;
  readonly name: string;
  readonly file: SharedArrayBuffer;
  readonly engine: RoadsEngine;
}

/**
 * The roads as the server asks them: tables and lines from the thread, single drives and the nearest road
 * in this one, on the same memory.
 */
export class RoadsClient implements RoadsPort {
  private opened: Opened | null = null;
  private timed: TimedRoads | null = null;
  private conditions = USUAL_CONDITIONS;
  /** Single drives under these conditions: every change of a route asks for most of them again. */
  private drives = new Map<string, { readonly ms: number; readonly dm: number }>();
  /** What was asked for last, and is in force once its times are worked out. */
  private wanted: { readonly opened: Opened | null; readonly conditions: RoadConditions } = {
    opened: null,
    conditions: USUAL_CONDITIONS,
  };

  constructor(private readonly worker: RoadsWorker) {}

  get source(): string {
    return this.opened ? `Roads of ${this.opened.name}` : NO_ROADS.source;
  }

  get followed(): RoadConditions {
    return this.conditions;
  }

  async switchTo(region: { readonly folder: string; readonly name: string }): Promise<void> {
    const file = await readRoadFile(region.folder);
    const opened = file && {
      key: basename(region.folder),
      name: region.name,
      file,
      engine: new RoadsEngine(file),
    };
    // Made now, or the first command that asks for a drive would wait for it; others go first.
    await setImmediate();
    void opened?.engine.snap;
    await this.become({ opened, conditions: this.wanted.conditions });
  }

  async follow(conditions: RoadConditions): Promise<void> {
    const isInForce =
      this.wanted.opened === this.opened && this.wanted.conditions === this.conditions;
    if (isInForce && conditionsKey(conditions) === conditionsKey(this.conditions)) return;
    await this.become({ opened: this.wanted.opened, conditions });
  }

  private async become(wanted: RoadsClient['wanted']): Promise<void> {
    this.wanted = wanted;
    const { opened, conditions } = wanted;
    const answer = opened && (await this.ask(opened, { kind: 'times' }, conditions));
    // Something else has been asked for meanwhile.
    if (this.wanted !== wanted) return;
    this.opened = opened;
    this.conditions = conditions;
    this.drives = new Map();
    this.timed =
      opened && opened.engine.withTimes(answer?.kind === 'times' ? answer.times : wrongAnswer());
  }

  async matrix(points: readonly LonLat[], conditions = this.conditions): Promise<RoadMatrix> {
    if (!this.opened) return straightMatrix(points);
    const answer = await this.ask(this.opened, { kind: 'matrix', points }, conditions);
    return answer.kind === 'matrix' ? answer.matrix : wrongAnswer();
  }

  async oneToMany(
    point: LonLat,
    others: readonly LonLat[],
    conditions = this.conditions,
  ): Promise<RoadFan> {
    if (!this.opened) return straightFan(point, others);
    const answer = await this.ask(this.opened, { kind: 'fan', point, others }, conditions);
    return answer.kind === 'fan' ? answer.fan : wrongAnswer();
  }

  async path(
    stops: readonly LonLat[],
    conditions = this.conditions,
  ): Promise<readonly (RoadLeg | null)[]> {
    if (!this.opened) return straightLegs(stops);
    const answer = await this.ask(this.opened, { kind: 'path', stops }, conditions);
    return answer.kind === 'path' ? answer.legs : wrongAnswer();
  }

  nearest(point: LonLat): NearestRoad | null {
    if (!this.opened) return null;
    const { roads, snap } = this.opened.engine;
    const { segment, at, metres } = snap.nearest(point);
    const flags = roads.graph.segmentFlags[segment]!;
    const name = roads.names[roads.graph.segmentName[segment]!] ?? '';
    return {
      at,
      metres,
      name: name === '' ? null : name,
      roadClass: ROAD_CLASSES[roads.graph.segmentClass[segment]!]!,
      isBridge: (flags & SEGMENT_FLAGS.bridge) !== 0,
      isFord: (flags & SEGMENT_FLAGS.ford) !== 0,
      line: lineOf(roads.graph, segment),
    };
  }

  travel(stopSeconds: number): TravelTimes {
    const { opened, timed, drives } = this;
    if (!opened || !timed) return straightLineTravel({ stopSeconds });
    return roadTravel(this.source, stopSeconds, (from, to) => {
      const key = `${from[0]} ${from[1]} ${to[0]} ${to[1]}`;
      const known = drives.get(key);
      if (known) return known;
      if (drives.size >= MOST_DRIVES) drives.clear();
      const drive = opened.engine.drive(timed, from, to);
      drives.set(key, drive);
      return drive;
    });
  }

  private ask(
    { key, file }: Opened,
    question: RoadsQuestion,
    conditions: RoadConditions,
  ): Promise<RoadsResponse> {
    return this.worker.run({ name: key, file, conditions, question });
  }
}

function wrongAnswer(): never {
  throw new Error('The thread of the roads has answered another question.');
}
