import { conditionsKey, type RoadConditions } from '@shared/domain/roads/conditions';
import {
  driveTable,
  driveTableBack,
  Scratch,
  type DriveTable,
} from '@shared/domain/roads/drive-table';
import { withWaysDown, type Hierarchy } from '@shared/domain/roads/hierarchy';
import { emptyTimes, workIn } from '@shared/domain/roads/hierarchy-times';
import { KeptDrives } from '@shared/domain/roads/kept-drives';
import { laneTimes, type LaneTimes } from '@shared/domain/roads/lane-times';
import { lineOfWay } from '@shared/domain/roads/line-of-way';
import { WayFinder, type TimedRoads } from '@shared/domain/roads/quickest-way';
import { NO_WAY } from '@shared/domain/roads/road-graph';
import { searchArcs } from '@shared/domain/roads/search-arcs';
import { stormCover } from '@shared/domain/roads/storm-cover';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { roadsIn, type RegionRoads } from '../region/road-file';
import { RoadSnap } from '../region/road-snap';
import type { RoadFan, RoadLeg, RoadMatrix } from './ports';
import { addApproaches, withApproach, type PlacedPoint } from './roads-approach';

/** What conditions make of the roads; its arrays lie in memory that threads share. */
export type RoadTimes = Pick<TimedRoads, 'lanes' | 'times' | 'search'>;

const shared = (length: number): Int32Array => new Int32Array(new SharedArrayBuffer(length * 4));

/** Sets of conditions whose times are kept: those followed, those before, and a question's own. */
const KEPT_TIMES = 3;

/** Points whose road is kept. */
const MOST_BESIDE = 20_000;

interface Timed {
  readonly roads: TimedRoads;
  readonly kept: KeptDrives;
}

/** Answers all questions about the roads of one region, in the thread that made it. */
export class RoadsEngine {
  readonly roads: RegionRoads;
  private readonly hierarchy: Hierarchy;
  private readonly finder: WayFinder;
  private ownSnap: RoadSnap | null = null;
  private ownScratch: Scratch | null = null;
  private readonly timed = new Map<string, Timed>();
  private readonly beside = new Map<string, PlacedPoint>();

  constructor(file: SharedArrayBuffer) {
    this.roads = roadsIn(file);
    this.hierarchy = withWaysDown(this.roads.stored);
    this.finder = new WayFinder(this.hierarchy);
  }

  /** The index of all roads takes a moment to make, and not every thread needs it. */
  get snap(): RoadSnap {
    return (this.ownSnap ??= new RoadSnap(this.roads.graph));
  }

  private get scratch(): Scratch {
    return (this.ownScratch ??= new Scratch(this.hierarchy));
  }

  times(conditions: RoadConditions): RoadTimes {
    const { lanes, times, search } = this.under(conditions).roads;
    return { lanes, times, search };
  }

  /** Takes over times that another thread has worked out. */
  withTimes(given: RoadTimes): TimedRoads {
    return { graph: this.roads.graph, hierarchy: this.hierarchy, ...given };
  }

  matrix(points: readonly LonLat[], conditions: RoadConditions): RoadMatrix {
    const { kept } = this.under(conditions);
    const placed = points.map((point) => this.placed(point));
    return inSeconds(addApproaches(kept.table(placed), placed, placed));
  }

  fan(point: LonLat, others: readonly LonLat[], conditions: RoadConditions): RoadFan {
    const { roads } = this.under(conditions);
    const from = [this.placed(point)];
    const to = others.map((other) => this.placed(other));
    return {
      there: inSeconds(addApproaches(driveTable(roads, from, to, this.scratch), from, to)),
      back: inSeconds(addApproaches(driveTableBack(roads, from, to, this.scratch), from, to, true)),
    };
  }

  path(stops: readonly LonLat[], conditions: RoadConditions): (RoadLeg | null)[] {
    const { roads } = this.under(conditions);
    const points = stops.map((stop) => this.placed(stop));
    return points.slice(1).map((to, i) => {
      const from = points[i]!;
      const way = this.finder.way(roads, from, to);
      if (!way) return null;
      const { ms, dm } = withApproach(from, to, way);
      const line = lineOfWay(roads.graph, way.lanes, from, to);
      return { line, seconds: ms / 1000, metres: dm / 10 };
    });
  }

  /** One drive under times taken over; `NO_WAY` where none leads. */
  drive(roads: TimedRoads, from: LonLat, to: LonLat): { readonly ms: number; readonly dm: number } {
    const [start, end] = [this.placed(from), this.placed(to)];
    return withApproach(start, end, this.finder.length(roads, start, end));
  }

  /** Calls stay where they are, and finding the road beside one takes longer than a drive. */
  private placed(point: LonLat): PlacedPoint {
    const key = `${point[0]} ${point[1]}`;
    const known = this.beside.get(key);
    if (known) return known;
    if (this.beside.size >= MOST_BESIDE) this.beside.clear();
    const found = { ...this.snap.nearest(point), asked: point };
    this.beside.set(key, found);
    return found;
  }

  private under(conditions: RoadConditions): Timed {
    const key = conditionsKey(conditions);
    const known = this.timed.get(key);
    if (known) {
      // The newest are at the end.
      this.timed.delete(key);
      this.timed.set(key, known);
      return known;
    }
    const { graph } = this.roads;
    const lanes = laneTimes(graph, conditions.factors, stormCover(graph, conditions.roads));
    const times = emptyTimes(this.hierarchy.upHead.length, shared);
    workIn(this.hierarchy, graph, lanes.laneMs, times);
    const search = searchArcs(this.hierarchy, times, shared);
    const roads = this.withTimes({ lanes: inSharedMemory(lanes), times, search });
    const timed = { roads, kept: new KeptDrives(roads, this.scratch) };
    this.timed.set(key, timed);
    if (this.timed.size > KEPT_TIMES) this.timed.delete(this.timed.keys().next().value!);
    return timed;
  }
}

function inSharedMemory({ laneMs, openMs, cuts }: LaneTimes): LaneTimes {
  const copy = (array: Int32Array): Int32Array => {
    const fresh = shared(array.length);
    fresh.set(array);
    return fresh;
  };
  return { laneMs: copy(laneMs), openMs: copy(openMs), cuts };
}

function inSeconds({ ms, dm }: DriveTable): RoadMatrix {
  const table = (from: Int32Array, unit: number): Float64Array => {
    const to = new Float64Array(new SharedArrayBuffer(from.length * 8));
    for (let i = 0; i < from.length; i++) to[i] = ms[i]! >= NO_WAY ? Infinity : from[i]! / unit;
    return to;
  };
  return { seconds: table(ms, 1000), metres: table(dm, 10) };
}
