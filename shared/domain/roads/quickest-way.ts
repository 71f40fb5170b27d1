import { Climb } from './climb';
import { upArcBetween, type Hierarchy } from './hierarchy';
import type { HierarchyTimes } from './hierarchy-times';
import type { LaneTimes } from './lane-times';
import { NO_WAY, type RoadGraph } from './road-graph';
import { arrivals, departures, withinSegment, type RoadEnd, type RoadPoint } from './road-ends';
import type { Searchable } from './search-arcs';

/** Roads under some conditions: all that it takes to answer how long a drive is. */
export interface TimedRoads {
  readonly graph: RoadGraph;
  readonly hierarchy: Hierarchy;
  readonly lanes: LaneTimes;
  readonly times: HierarchyTimes;
  readonly search: Searchable;
}

export interface Way {
  readonly ms: number;
  readonly dm: number;
  /** The lanes driven, the partly driven first and last one included. */
  readonly lanes: readonly number[];
}

/** Finds single drives. Keeps two climbs' worth of memory, so make one and keep it. */
export class WayFinder {
  private readonly there: Climb;
  private readonly back: Climb;

  constructor(private readonly hierarchy: Hierarchy) {
    this.there = new Climb(hierarchy);
    this.back = new Climb(hierarchy);
  }

  /** How long the quickest drive between two points is; `NO_WAY` when there is none. */
  length(
    roads: TimedRoads,
    from: RoadPoint,
    to: RoadPoint,
  ): { readonly ms: number; readonly dm: number } {
    const { graph, lanes, search } = roads;
    const direct = withinSegment(graph, lanes, from, to);
    const meeting = this.meet(departures(graph, lanes, from), arrivals(graph, lanes, to), search);
    if (meeting < 0) return direct;
    const ms = this.there.ms[meeting]! + this.back.ms[meeting]!;
    return direct.ms <= ms ? direct : { ms, dm: this.there.dm[meeting]! + this.back.dm[meeting]! };
  }

  /** The quickest drive between two points; null when no way leads from one to the other. */
  way(roads: TimedRoads, from: RoadPoint, to: RoadPoint): Way | null {
    const { graph, lanes, search } = roads;
    const direct = withinSegment(graph, lanes, from, to);
    const starts = departures(graph, lanes, from);
    const goals = arrivals(graph, lanes, to);
    const meeting = this.meet(starts, goals, search);
    const ms = meeting < 0 ? NO_WAY : this.there.ms[meeting]! + this.back.ms[meeting]!;
    if (direct.ms <= ms) {
      if (direct.ms >= NO_WAY) return null;
      const lane = from.segment * 2 + (from.share <= to.share ? 0 : 1);
      return { ...direct, lanes: direct.ms === 0 && from.share === to.share ? [] : [lane] };
    }
    const first = this.climbed(this.there, meeting);
    const last = this.climbed(this.back, meeting);
    const driven: number[] = [starts[first.end]!.lane];
    for (const arc of first.arcs) unpackUp(arc, roads, driven);
    for (const arc of last.arcs.reverse()) unpackDown(arc, roads, driven);
    driven.push(goals[last.end]!.lane);
    return { ms, dm: this.there.dm[meeting]! + this.back.dm[meeting]!, lanes: driven };
  }

  private meet(
    starts: readonly RoadEnd[],
    goals: readonly RoadEnd[],
    { up, down }: Searchable,
  ): number {
    const { there, back } = this;
    there.from(starts, up);
    back.from(goals, down);
    let best = NO_WAY;
    let meeting = -1;
    for (let i = 0; i < back.count; i++) {
      const v = back.visited[i]!;
      const ms = back.ms[v]! + there.ms[v]!;
      if (ms < best) {
        best = ms;
        meeting = v;
      }
    }
    return meeting;
  }

  /** The end that a climb to a node began at, and the up-arcs from there. */
  private climbed(climb: Climb, top: number): { readonly end: number; readonly arcs: number[] } {
    const arcs: number[] = [];
    let v = top;
    while (climb.by[v]! >= 0) {
      const arc = climb.by[v]!;
      arcs.push(arc);
      v = this.hierarchy.upTail[arc]!;
    }
    return { end: -2 - climb.by[v]!, arcs: arcs.reverse() };
  }
}

/** Adds the lanes of an up-arc, driven from its lower end to its upper one. */
function unpackUp(arc: number, roads: TimedRoads, lanes: number[]): void {
  const { hierarchy, times, graph } = roads;
  const via = times.upVia[arc]!;
  if (via < -1) lanes.push(graph.arcLane[-2 - via]!);
  else {
    unpackDown(via, roads, lanes);
    unpackUp(upArcBetween(hierarchy, hierarchy.upTail[via]!, hierarchy.upHead[arc]!), roads, lanes);
  }
}

/** Adds the lanes of an up-arc, driven from its upper end down to its lower one. */
function unpackDown(arc: number, roads: TimedRoads, lanes: number[]): void {
  const { hierarchy, times, graph } = roads;
  const via = times.downVia[arc]!;
  if (via < -1) lanes.push(graph.arcLane[-2 - via]!);
  else {
    unpackDown(
      upArcBetween(hierarchy, hierarchy.upTail[via]!, hierarchy.upHead[arc]!),
      roads,
      lanes,
    );
    unpackUp(via, roads, lanes);
  }
}
