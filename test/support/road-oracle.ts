import type { BuiltRoads, SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import type { LaneTimes } from '@shared/domain/roads/lane-times';
import type { RoadPoint } from '@shared/domain/roads/road-ends';

/** At the end of a lane: the lanes driven so far, as many as rules ask for, and whether it may leave roads for visits. */
interface State {
  readonly driven: readonly number[];
  /** On roads for visits since the beginning, or through them to an end among them; neither outside. */
  readonly visit: 'began' | 'came' | 'none';
}

/**
 * Quickest drives by Dijkstra's method over lanes: a state is "at the end of this lane, after those", so
 * what is banned needs no copies of junctions. It works on the map's own segments and shares nothing with
 * the hierarchy but the times of the lanes and which of them are for visits.
 */
export class RoadOracle {
  private readonly leaving: number[][];
  private readonly numberInGraph: Map<number, number>;
  private readonly banned: ReadonlySet<string>;
  /** Lanes that a rule may ask for before the next one. */
  private readonly longest: number;

  constructor(
    private readonly map: SegmentsAndTurns,
    private readonly built: BuiltRoads,
    private readonly times: LaneTimes,
  ) {
    this.numberInGraph = new Map(Array.from(built.kept, (raw, own) => [raw, own]));
    this.banned = new Set(map.bannedPaths.map((path) => path.join()));
    this.longest = Math.max(1, ...map.bannedPaths.map((path) => path.length - 1));
    this.leaving = Array.from({ length: map.junctions }, () => []);
    map.segments.forEach((_, raw) => {
      for (const lane of [raw * 2, raw * 2 + 1])
        if (this.isDriven(lane)) this.leaving[this.begin(lane)]!.push(lane);
    });
  }

  /** Milliseconds from a point of the graph to others; Infinity where no way leads. */
  from(start: RoadPoint, goals: readonly RoadPoint[]): number[] {
    const raw = this.built.kept[start.segment]!;
    const best = new Map<string, { readonly state: State; readonly ms: number }>();
    /** When a lane can be entered, at the earliest. */
    const entered = new Map<number, number>();
    const queue: Entry[] = [];
    const offer = (state: State, ms: number): void => {
      const key = `${state.driven.join()} ${state.visit}`;
      if (ms >= (best.get(key)?.ms ?? Infinity)) return;
      best.set(key, { state, ms });
      push(queue, [ms, key]);
    };
    for (const lane of [raw * 2, raw * 2 + 1])
      if (this.isDriven(lane) && this.isFree(lane, this.behind(lane, start.share), 1))
        offer(
          { driven: [lane], visit: this.built.isForVisits(lane) ? 'began' : 'none' },
          this.whole(lane) - this.upTo(lane, start.share),
        );
    for (let next = pop(queue); next; next = pop(queue)) {
      const [ms, key] = next;
      const { state, ms: least } = best.get(key)!;
      if (ms > least) continue;
      for (const onward of this.onward(state)) {
        const lane = onward.driven.at(-1)!;
        entered.set(lane, Math.min(ms, entered.get(lane) ?? Infinity));
        if (this.isFree(lane, 0, 1)) offer(onward, ms + this.whole(lane));
      }
    }
    return goals.map((goal) => this.at(goal, entered, start));
  }

  private at(goal: RoadPoint, entered: ReadonlyMap<number, number>, start: RoadPoint): number {
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
      least = Math.min(least, (entered.get(lane) ?? Infinity) + this.upTo(lane, goal.share));
    }
    return least;
  }

  private onward({ driven, visit }: State): State[] {
    return this.leaving[this.end(driven.at(-1)!)]!.flatMap((lane): State[] => {
      const all = [...driven, lane];
      const isForVisits = this.built.isForVisits(lane);
      if (this.isBanned(all) || (visit === 'came' && !isForVisits)) return [];
      const next = !isForVisits ? 'none' : visit === 'began' ? 'began' : 'came';
      return [{ driven: all.slice(-this.longest), visit: next }];
    });
  }

  private isBanned(driven: readonly number[]): boolean {
    return driven.some((_, from) => this.banned.has(driven.slice(from).join()));
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

type Entry = [ms: number, key: string];

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
