import type { RouteRow } from './route-rows';

/** Where the cursor of the routes stands: on a technician, or on one of the stops. */
export interface RouteCursor {
  readonly technicianId: string;
  readonly stopId: string | null;
}

const MOVES = [
  'ArrowLeft',
  'ArrowRight',
  'ArrowUp',
  'ArrowDown',
  'Home',
  'End',
  'PageUp',
  'PageDown',
] as const;
export type CursorMove = (typeof MOVES)[number];

export const isCursorMove = (key: string): key is CursorMove =>
  (MOVES as readonly string[]).includes(key);

const PAGE_ROWS = 8;

/** The cursor after a key: along the route, or to the stop nearest in time on another one. */
export function movedCursor(
  rows: readonly RouteRow[],
  cursor: RouteCursor | null,
  key: CursorMove,
): RouteCursor | null {
  const known = heldCursor(rows, cursor);
  const rowAt = rows.findIndex((row) => row.technician.id === known?.technicianId);
  const row = rows[rowAt];
  if (!known || !row) return null;
  const stopAt = row.stops.findIndex(({ stop }) => stop.id === known.stopId);
  switch (key) {
    case 'ArrowLeft':
      return at(row, Math.max(stopAt - 1, -1));
    case 'ArrowRight':
      return at(row, Math.min(stopAt + 1, row.stops.length - 1));
    case 'Home':
      return at(row, -1);
    case 'End':
      return at(row, row.stops.length - 1);
    case 'ArrowUp':
      return across(rows, rowAt, stopAt, -1);
    case 'ArrowDown':
      return across(rows, rowAt, stopAt, 1);
    case 'PageUp':
      return across(rows, rowAt, stopAt, -PAGE_ROWS);
    case 'PageDown':
      return across(rows, rowAt, stopAt, PAGE_ROWS);
  }
}

/**
 * The cursor as it still holds: on its stop wherever that has gone, else on its technician, else
 * at the top. So no announcement moves the cursor from under somebody's hands.
 */
export function heldCursor(
  rows: readonly RouteRow[],
  cursor: RouteCursor | null,
): RouteCursor | null {
  const [first] = rows;
  if (!first) return null;
  if (cursor?.stopId != null) {
    const row = rows.find(({ stops }) => stops.some(({ stop }) => stop.id === cursor.stopId));
    if (row) return { technicianId: row.technician.id, stopId: cursor.stopId };
  }
  const own = rows.find((row) => row.technician.id === cursor?.technicianId);
  return { technicianId: (own ?? first).technician.id, stopId: null };
}

const at = (row: RouteRow, index: number): RouteCursor => ({
  technicianId: row.technician.id,
  stopId: row.stops[index]?.stop.id ?? null,
});

function across(
  rows: readonly RouteRow[],
  rowAt: number,
  stopAt: number,
  step: number,
): RouteCursor | null {
  const target = rows[Math.min(Math.max(rowAt + step, 0), rows.length - 1)];
  const from = rows[rowAt]?.stops[stopAt];
  if (!target) return null;
  // From a technician to a technician; from a stop to a stop while there is one.
  if (!from || target.stops.length === 0) return at(target, -1);
  const distances = target.stops.map((view) => Math.abs(view.arriveAt - from.arriveAt));
  return at(target, distances.indexOf(Math.min(...distances)));
}
