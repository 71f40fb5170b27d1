import type { BuiltRoads, SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import type { LaneTimes } from '@shared/domain/roads/lane-times';
import type { RoadPoint } from '@shared/domain/roads/road-ends';

/**
 * Quickest drives by Dijkstra's method over lanes: a state is "at the end of this lane", so a turn is a
 * pair of lanes and needs no copies of junctions. It works on the map's own segments and shares nothing
 * with the hierarchy but the times of the lanes.
 */
export class RoadOracle {
  private readonly leaving: number[][];
  private readonly numberInGraph: Map<number, number>;

  constructor(
    private readonly map: SegmentsAndTurns,
    private readonly built: BuiltRoads,
    private readonly times: LaneTimes,
  ) {
    this.numberInGraph = new Map(Array.from(built.kept, (raw, own) => [raw, own]));
    this.leaving = Array.from({ length: map.junctions }, () => []);
    map.segments.forEach((_, raw) => {
      for (const lane of [raw * 2, raw * 2 + 1])
        if (this.isDriven(lane)) this.leaving[this.begin(lane)]!.push(lane);
    });
  }

  /** Milliseconds from a point of the graph to others; Infinity where no way leads. */
  from(start: RoadPoint, goals: readonly RoadPoint[]): number[] {
    const raw = this.built.kept[start.segment]!;
    const best = new Map<number, number>();
    const queue: [ms: number, lane: number][] = [];
    const offer = (lane: number, ms: number): void => {
      if (ms >= (best.get(lane) ?? Infinity)) return;
      best.set(lane, ms);
      push(queue, [ms, lane]);
    };
    for (const lane of [raw * 2, raw * 2 + 1])
      if (this.isDriven(lane) && this.isFree(lane, this.behind(lane, start.share), 1))
        offer(lane, this.whole(lane) - this.upTo(lane, start.share));
    for (let next = pop(queue); next; next = pop(queue)) {
      const [ms, lane] = next;
      if (ms > best.get(lane)!) continue;
      for (const onward of this.turns(lane))
        if (this.isFree(onward, 0, 1)) offer(onward, ms + this.whole(onward));
    }
    return goals.map((goal) => this.at(goal, best, start));
  }

  private at(goal: RoadPoint, best: ReadonlyMap<number, number>, start: RoadPoint): number {
    const raw = this.built.kept[goal.segment]!;
    let least = Infinity;
    for (const lane of [raw * 2, raw * 2 + 1]) {
      const share = this.behind(lane, goal.share);
      if (!this.isDriven(lane)) continue;
      if (start.segment === goal.segment) {
        const begin = this.behind(lane, start.share);
        if (begin === share) least = Math.min(least, 0);
        else if (begin < share && this.isFree(lane, begin, share))
          least = Math.min(least, this.upTo(lane, goal.share) - this.upTo(lane, start.share));
      }
      if (!this.isFree(lane, 0, share)) continue;
      for (const [before, ms] of best)
        if (this.turns(before).includes(lane))
          least = Math.min(least, ms + this.upTo(lane, goal.share));
    }
    return least;
  }

  private turns(lane: number): number[] {
    const banned = this.map.bannedTurns.get(lane);
    return this.leaving[this.end(lane)]!.filter((next) => !banned?.has(next));
  }

  private isDriven(lane: number): boolean {
    const own = this.own(lane);
    return own >= 0 && this.built.graph.laneHead[own]! >= 0;
  }

  private own(lane: number): number {
    const segment = this.numberInGraph.get(lane >> 1);
    return segment === undefined ? -1 : segment * 2 + (lane & 1);
  }

  private isFree(lane: number, from: number, to: number): boolean {
    const cut = this.times.cuts.get(this.numberInGraph.get(lane >> 1)!);
    if (!cut) return true;
    const [begin, end] = lane % 2 === 0 ? cut : [1 - cut[1], 1 - cut[0]];
    return to < begin || from > end;
  }

  private readonly behind = (lane: number, share: number): number =>
    lane % 2 === 0 ? share : 1 - share;
  private readonly begin = (lane: number): number =>
    this.map.segments[lane >> 1]![lane % 2 === 0 ? 'from' : 'to'];
  private readonly end = (lane: number): number =>
    this.map.segments[lane >> 1]![lane % 2 === 0 ? 'to' : 'from'];
  private readonly whole = (lane: number): number => this.times.openMs[this.own(lane)]!;
  private readonly upTo = (lane: number, share: number): number =>
    Math.round(this.whole(lane) * this.behind(lane, share));
}

type Entry = [ms: number, lane: number];

function push(heap: Entry[], entry: Entry): void {
  let at = heap.push(entry) - 1;
  while (at > 0) {
    const parent = (at - 1) >> 1;
    if (heap[parent]![0] <= entry[0]) break;
    heap[at] = heap[parent]!;
    at = parent;
  }
  heap[at] = entry;
}

function pop(heap: Entry[]): Entry | undefined {
  const least = heap[0];
  const last = heap.pop();
  if (heap.length === 0 || last === undefined) return least;
  let at = 0;
  for (let child = 1; child < heap.length; child = at * 2 + 1) {
    if (child + 1 < heap.length && heap[child + 1]![0] < heap[child]![0]) child++;
    if (heap[child]![0] >= last[0]) break;
    heap[at] = heap[child]!;
    at = child;
  }
  heap[at] = last;
  return least;
}
