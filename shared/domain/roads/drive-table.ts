import { Climb } from './climb';
import type { Hierarchy } from './hierarchy';
import type { TimedRoads } from './quickest-way';
import { arrivals, departures, withinSegment, type RoadEnd, type RoadPoint } from './road-ends';
import type { SearchArcs } from './search-arcs';
import { ABREAST, quickest, Sweep, sweepAll } from './sweep';

/** Milliseconds and decimetres, row-major: from × number of goals + to; `NO_WAY` where none leads. */
export interface DriveTable {
  readonly ms: Int32Array;
  readonly dm: Int32Array;
}

/**
 * Drives from every point to every goal.
 *
 * What lies above the goals is laid out once, the highest node first, as a small graph of its own; each
 * point then climbs, and its times are swept down through that graph in one pass over flat arrays
 * (Delling, Goldberg & Werneck, "Faster batched shortest paths in road networks", ATMOS 2011).
 */
export function driveTable(
  roads: TimedRoads,
  from: readonly RoadPoint[],
  to: readonly RoadPoint[],
  scratch: Scratch,
): DriveTable {
  const { graph, lanes, search } = roads;
  const table = swept(
    roads,
    search.up,
    from.map((point) => departures(graph, lanes, point)),
    search.down,
    to.map((point) => arrivals(graph, lanes, point)),
    scratch,
  );
  putNeighbours(roads, from, to, table, (row, column) => [row, column]);
  return table;
}

/** The drives back: from every goal to every point, and still one row a point. */
export function driveTableBack(
  roads: TimedRoads,
  points: readonly RoadPoint[],
  goals: readonly RoadPoint[],
  scratch: Scratch,
): DriveTable {
  const { graph, lanes, search } = roads;
  const table = swept(
    roads,
    search.down,
    points.map((point) => arrivals(graph, lanes, point)),
    search.up,
    goals.map((point) => departures(graph, lanes, point)),
    scratch,
  );
  putNeighbours(roads, points, goals, table, (row, column) => [column, row]);
  return table;
}

/** With fewer rows it is quicker to sweep through everything than to lay out a part of it. */
const FEW_ROWS = 4;

function swept(
  { hierarchy }: TimedRoads,
  climbArcs: SearchArcs,
  rows: readonly (readonly RoadEnd[])[],
  sweepArcs: SearchArcs,
  columns: readonly (readonly RoadEnd[])[],
  scratch: Scratch,
): DriveTable {
  const table: DriveTable = {
    ms: new Int32Array(rows.length * columns.length),
    dm: new Int32Array(rows.length * columns.length),
  };
  if (rows.length < FEW_ROWS) {
    rows.forEach((ends, row) => {
      scratch.climb.from(ends, climbArcs);
      sweepAll(sweepArcs, scratch.climb, scratch.all);
      columns.forEach((points, column) => {
        const cell = row * columns.length + column;
        [table.ms[cell], table.dm[cell]] = quickest(points, scratch.all);
      });
    });
    return table;
  }
  const sweep = new Sweep(hierarchy, sweepArcs, columns, scratch.placeOf);
  for (let row = 0; row < rows.length; row += ABREAST) {
    sweep.clear();
    const abreast = rows.slice(row, row + ABREAST);
    abreast.forEach((ends, which) => {
      scratch.climb.from(ends, climbArcs);
      sweep.take(scratch.climb, which);
    });
    sweep.run();
    abreast.forEach((_, which) => sweep.write(which, table, (row + which) * columns.length));
  }
  sweep.end();
  return table;
}

/** Memory that tables are made in; as large as the hierarchy, so it is made once. */
export class Scratch {
  readonly climb: Climb;
  /** Place of a node in the small graph, -1 for one outside it; cleared after use. */
  readonly placeOf: Int32Array;
  /** Milliseconds and decimetres of every node. */
  readonly all: DriveTable;

  constructor(hierarchy: Hierarchy) {
    this.climb = new Climb(hierarchy);
    this.placeOf = new Int32Array(hierarchy.nodeCount).fill(-1);
    this.all = {
      ms: new Int32Array(hierarchy.nodeCount),
      dm: new Int32Array(hierarchy.nodeCount),
    };
  }
}

/** Points on one segment may be reached without leaving it. */
function putNeighbours(
  { graph, lanes }: TimedRoads,
  rows: readonly RoadPoint[],
  columns: readonly RoadPoint[],
  table: DriveTable,
  inOrder: (row: RoadPoint, column: RoadPoint) => readonly [from: RoadPoint, to: RoadPoint],
): void {
  const onSegment = new Map<number, number[]>();
  columns.forEach(({ segment }, column) => {
    const own = onSegment.get(segment);
    if (own) own.push(column);
    else onSegment.set(segment, [column]);
  });
  rows.forEach((point, row) => {
    for (const column of onSegment.get(point.segment) ?? []) {
      const direct = withinSegment(graph, lanes, ...inOrder(point, columns[column]!));
      const cell = row * columns.length + column;
      if (direct.ms >= table.ms[cell]!) continue;
      table.ms[cell] = direct.ms;
      table.dm[cell] = direct.dm;
    }
  });
}
