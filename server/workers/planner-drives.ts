import { NO_WAY_SECONDS } from '@shared/domain/planner/problem';
import { doorToDoor } from '@shared/domain/travel/road-travel';
import { DEFAULT_TRAVEL, straightLineTravel } from '@shared/domain/travel/travel-times';
import type { PlannerRequest } from './planner-client';

export interface PlannerDrives {
  /** Whole seconds from door to door, row-major; `NO_WAY_SECONDS` where no way leads. */
  readonly matrix: Float64Array;
  distanceKm(from: number, to: number): number;
  /** Where the drives come from, in words for the screen. */
  readonly source: string;
}

/**
 * The drives of a planning problem: along roads where the request brings them, else straight lines.
 *
 * A stop that was accepted or locked stays on its route whether a road leads there or not; its drives
 * then count as straight lines, for its technician may know a way and the stops after it need times.
 */
export function plannerDrives({ points, problem, travel, roads }: PlannerRequest): PlannerDrives {
  const straight = straightLineTravel(travel);
  if (!roads) {
    return {
      matrix: straight.matrix(points),
      distanceKm: (from, to) => straight.distanceKm(points[from]!, points[to]!),
      source: straight.source,
    };
  }
  const size = points.length;
  const matrix = doorToDoor(
    points,
    roads.seconds,
    travel?.stopSeconds ?? DEFAULT_TRAVEL.stopSeconds,
  );
  const held = heldPlaces(problem);
  for (let cell = 0; cell < matrix.length; cell++) {
    if (matrix[cell]! < NO_WAY_SECONDS) continue;
    const [from, to] = [Math.floor(cell / size), cell % size];
    matrix[cell] =
      held.has(from) || held.has(to)
        ? straight.matrix([points[from]!, points[to]!])[1]!
        : NO_WAY_SECONDS;
  }
  return {
    matrix,
    distanceKm: (from, to) => {
      const metres = roads.metres[from * size + to]!;
      return Number.isFinite(metres)
        ? metres / 1000
        : straight.distanceKm(points[from]!, points[to]!);
    },
    source: roads.source,
  };
}

function heldPlaces({ technicians, jobs }: PlannerRequest['problem']): ReadonlySet<number> {
  const held = new Set(technicians.flatMap(({ frozen }) => frozen));
  return new Set(jobs.flatMap(({ id, loc }) => (held.has(id) ? loc : [])));
}
