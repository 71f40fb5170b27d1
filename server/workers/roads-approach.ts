import { greatCircleKm, type LonLat } from '@shared/domain/travel/great-circle';
import { DEFAULT_TRAVEL } from '@shared/domain/travel/travel-times';
import type { DriveTable } from '@shared/domain/roads/drive-table';
import { NO_WAY } from '@shared/domain/roads/road-graph';
import type { SnappedPoint } from '../region/road-snap';

/** A point with the road that it was taken to. */
export interface PlacedPoint extends SnappedPoint {
  readonly asked: LonLat;
}

/** A door is this far from its road at most without anybody driving there: our estimate. */
const DRIVEWAY_METRES = 200;

/**
 * What it takes to get from a point to its road where that is farther than a driveway: roads that the map
 * does not have, or a place outside the region. Counted like any drive of which no road is known.
 */
export function approach(point: PlacedPoint): { readonly ms: number; readonly dm: number } {
  return straight(Math.max(0, point.metres - DRIVEWAY_METRES));
}

const straight = (metres: number): { readonly ms: number; readonly dm: number } => {
  const driven = metres * DEFAULT_TRAVEL.circuity;
  return {
    ms: Math.round((driven * 3600) / DEFAULT_TRAVEL.speedKmh),
    dm: Math.round(driven * 10),
  };
};

/** A drive with the ways to its roads; two places far from any road may be close to each other. */
export function withApproach(
  from: PlacedPoint,
  to: PlacedPoint,
  { ms, dm }: { readonly ms: number; readonly dm: number },
): { readonly ms: number; readonly dm: number } {
  if (ms >= NO_WAY) return { ms, dm };
  const [first, last] = [approach(from), approach(to)];
  const byRoad = { ms: first.ms + ms + last.ms, dm: first.dm + dm + last.dm };
  if (first.ms === 0 || last.ms === 0) return byRoad;
  const direct = straight(greatCircleKm(from.asked, to.asked) * 1000);
  return direct.ms < byRoad.ms ? direct : byRoad;
}

/** Adds the ways to the roads to a table, in place. Drives go from rows to columns, or back. */
export function addApproaches(
  table: DriveTable,
  rows: readonly PlacedPoint[],
  columns: readonly PlacedPoint[],
  isBack = false,
): DriveTable {
  const isOff = (point: PlacedPoint): boolean => point.metres > DRIVEWAY_METRES;
  const offColumns = columns.map(isOff);
  const anyColumn = offColumns.some(Boolean);
  rows.forEach((row, r) => {
    const isRowOff = isOff(row);
    if (!isRowOff && !anyColumn) return;
    columns.forEach((column, c) => {
      if (!isRowOff && !offColumns[c]) return;
      const cell = r * columns.length + c;
      const drive = { ms: table.ms[cell]!, dm: table.dm[cell]! };
      const whole = isBack ? withApproach(column, row, drive) : withApproach(row, column, drive);
      table.ms[cell] = whole.ms;
      table.dm[cell] = whole.dm;
    });
  });
  return table;
}
