/** @jest-environment node */
import { MINUTE_MS } from '@shared/domain/instant';
import { aStop, aTechnician, idOf, NOW } from '../core/testing';
import { heldCursor, movedCursor } from './route-cursor';
import { routeRows } from './route-rows';

const stopAt = (n: number, technician: number, minutes: number) =>
  aStop(n, {
    technicianId: idOf(2000 + technician),
    arriveAt: NOW + minutes * MINUTE_MS,
    finishAt: NOW + (minutes + 45) * MINUTE_MS,
  });

function rowsOf(...stops: ReturnType<typeof stopAt>[]) {
  const technicians = new Map([1, 2, 3].map((n) => [idOf(2000 + n), aTechnician(n)]));
  const routes = new Map(
    [...technicians.keys()].map((id) => [id, stops.filter((s) => s.technicianId === id)]),
  );
  return routeRows({
    technicians,
    routes,
    calls: new Map(),
    stopOfCall: new Map(),
    plan: null,
    now: NOW,
    shopMinutes: 15,
  });
}

const rows = rowsOf(stopAt(1, 1, 10), stopAt(2, 1, 90), stopAt(3, 2, 5), stopAt(4, 2, 100));
const on = (technician: number, stop: number | null) => ({
  technicianId: idOf(2000 + technician),
  stopId: stop === null ? null : idOf(3000 + stop),
});

describe('the cursor of the routes', () => {
  it('goes along a route and stays at its ends', () => {
    expect(movedCursor(rows, on(1, null), 'ArrowRight')).toEqual(on(1, 1));
    expect(movedCursor(rows, on(1, 1), 'ArrowRight')).toEqual(on(1, 2));
    expect(movedCursor(rows, on(1, 2), 'ArrowRight')).toEqual(on(1, 2));
    expect(movedCursor(rows, on(1, 1), 'ArrowLeft')).toEqual(on(1, null));
  });

  it('goes down to the stop nearest in time', () => {
    expect(movedCursor(rows, on(1, 2), 'ArrowDown')).toEqual(on(2, 4));
    expect(movedCursor(rows, on(1, 1), 'ArrowDown')).toEqual(on(2, 3));
  });

  it('stays on technicians when it is on one, and where a route is empty', () => {
    expect(movedCursor(rows, on(1, null), 'ArrowDown')).toEqual(on(2, null));
    expect(movedCursor(rows, on(2, 3), 'ArrowDown')).toEqual(on(3, null));
    expect(movedCursor(rows, on(3, null), 'End')).toEqual(on(3, null));
  });

  it('follows its stop to another technician', () => {
    const moved = rowsOf(stopAt(1, 3, 10));
    expect(heldCursor(moved, on(1, 1))).toEqual(on(3, 1));
  });

  it('falls back to the technician when the stop is gone, and to the top when both are', () => {
    expect(heldCursor(rows, on(2, 99))).toEqual(on(2, null));
    expect(heldCursor(rows, { technicianId: idOf(9), stopId: null })).toEqual(on(1, null));
    expect(heldCursor([], on(1, 1))).toBeNull();
  });
});
