import type { LanePath, Segment } from './build-graph';

/**
 * What somebody at the end of a lane may do next, where that depends on how they came there. A **state**
 * is a junction together with as much of the past as some rule asks for:
 *
 * - the last lanes, as far as a path that nobody may drive begins with them;
 * - where roads are for visits only: whether the drive has not touched them (`through`), has entered them
 *   from outside and so must end there (`guest`), or began among them and may still leave (`host`).
 */
export interface DriveStates {
  readonly count: number;
  readonly arcs: readonly StateArc[];
  /** The state of somebody who began on a lane, at its end; -1 for a lane that is not driven. */
  readonly startOf: Int32Array;
}

export interface StateArc {
  readonly tail: number;
  readonly head: number;
  readonly lane: number;
}

type Part = 0 | 1 | 2;
const THROUGH = 0;
const GUEST = 1;
const HOST = 2;

export interface DrivenMap {
  readonly junctions: number;
  readonly segments: readonly Segment[];
  readonly bannedPaths: readonly LanePath[];
}

/**
 * All states that a drive can come into, and the lanes that lead from one to another.
 *
 * @param isDriven says for each lane whether it is used at all
 * @param isForVisits says for each lane whether drives may only begin or end there
 */
export function driveStates(
  map: DrivenMap,
  isDriven: (lane: number) => boolean,
  isForVisits: (lane: number) => boolean,
): DriveStates {
  const { junctions, segments } = map;
  const past = new Past(map.bannedPaths);
  const lanes = segments.length * 2;
  const leaving: number[][] = Array.from({ length: junctions }, () => []);
  const endOf = (lane: number): number => segments[lane >> 1]![lane % 2 === 0 ? 'to' : 'from'];
  for (let lane = 0; lane < lanes; lane++) if (isDriven(lane)) leaving[endOf(lane ^ 1)]!.push(lane);

  const plain = new Int32Array(junctions * 3).fill(-1);
  const special = new Map<string, number>();
  const states: { readonly junction: number; readonly path: LanePath; readonly part: Part }[] = [];
  const numberOf = (junction: number, path: LanePath, part: Part): number => {
    const at = junction * 3 + part;
    const key = path.length === 0 ? '' : `${path.join()} ${part}`;
    const known = path.length === 0 ? plain[at]! : (special.get(key) ?? -1);
    if (known >= 0) return known;
    const fresh = states.push({ junction, path, part }) - 1;
    if (path.length === 0) plain[at] = fresh;
    else special.set(key, fresh);
    return fresh;
  };

  const startOf = new Int32Array(lanes).fill(-1);
  for (let lane = 0; lane < lanes; lane++)
    if (isDriven(lane))
      startOf[lane] = numberOf(
        endOf(lane),
        past.after([], lane) ?? [],
        isForVisits(lane) ? HOST : THROUGH,
      );
  const arcs: StateArc[] = [];
  // States that are found on the way are looked at in their turn.
  for (let tail = 0; tail < states.length; tail++) {
    const { junction, path, part } = states[tail]!;
    for (const lane of leaving[junction]!) {
      const next = past.after(path, lane);
      if (next === null || (part === GUEST && !isForVisits(lane))) continue;
      const nextPart = !isForVisits(lane) ? THROUGH : part === HOST ? HOST : GUEST;
      arcs.push({ tail, head: numberOf(endOf(lane), next, nextPart), lane });
    }
  }
  return { count: states.length, arcs, startOf };
}

const NOTHING: LanePath = [];

/** Follows which banned paths a drive has begun on (Aho & Corasick, "Efficient string matching", CACM 18, 1975). */
class Past {
  private readonly whole = new Set<string>();
  private readonly begun = new Set<string>();
  private readonly first = new Set<number>();

  constructor(paths: readonly LanePath[]) {
    for (const path of paths) {
      this.whole.add(path.join());
      for (let length = 1; length < path.length; length++)
        this.begun.add(path.slice(0, length).join());
      if (path.length > 1) this.first.add(path[0]!);
    }
  }

  /** What is still of interest after one more lane; `null` when nobody may drive it after those. */
  after(path: LanePath, lane: number): LanePath | null {
    if (path.length === 0) return this.first.has(lane) ? [lane] : NOTHING;
    const driven = [...path, lane];
    let rest: LanePath = NOTHING;
    for (let from = 0; from < driven.length; from++) {
      const tail = driven.slice(from);
      if (this.whole.has(tail.join())) return null;
      if (rest.length === 0 && this.begun.has(tail.join())) rest = tail;
    }
    return rest;
  }
}
