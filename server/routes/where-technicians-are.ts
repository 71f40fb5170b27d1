import type { Sequelize, Transaction } from 'sequelize';
import type { Instant } from '@shared/domain/instant';
import { lastSeen, type Sighting, type WorkShift } from '@shared/domain/route-rules';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { select } from '../db/sql';

export interface Whereabouts {
  readonly startLon: number;
  readonly startLat: number;
  readonly positionLon?: number | null;
  readonly positionLat?: number | null;
  readonly positionAt?: Date | null;
}

/** The door of the last visit that each technician ended, and when. */
export async function lastDoors(
  sequelize: Sequelize,
  technicianIds: readonly string[],
  tx: Transaction,
): Promise<Map<string, Sighting>> {
  if (technicianIds.length === 0) return new Map();
  const rows = await select<{ technician_id: string; lon: number; lat: number; ended_at: Date }>(
    sequelize,
    `SELECT technician_id, lon, lat, ended_at FROM (
       SELECT s.technician_id, c.lon, c.lat, s.ended_at,
              ROW_NUMBER() OVER (PARTITION BY s.technician_id ORDER BY s.ended_at DESC) AS back
         FROM stops s JOIN calls c ON c.id = s.call_id
        WHERE s.technician_id IN (?) AND s.state = 'done' AND c.lon IS NOT NULL) AS doors
      WHERE back = 1`,
    [[...technicianIds]],
    tx,
  );
  return new Map(
    rows.map((row) => [
      row.technician_id,
      { at: [row.lon, row.lat], seenAt: row.ended_at.getTime() },
    ]),
  );
}

/** Where a technician is, as far as anybody knows: the newest of position, last door, shift's start. */
export function whereIs(
  technician: Whereabouts,
  lastDoor: Sighting | undefined,
  shifts: readonly WorkShift[],
  now: Instant,
): LonLat {
  const home: LonLat = [technician.startLon, technician.startLat];
  return lastSeen(home, sightingsOf(technician, lastDoor, shifts, now));
}

/** Positions and doors; a shift's start only says where the van ought to have been. */
function seenAt(technician: Whereabouts, lastDoor: Sighting | undefined): Sighting[] {
  const { positionLon, positionLat, positionAt } = technician;
  const sightings = lastDoor ? [lastDoor] : [];
  if (positionLon != null && positionLat != null && positionAt)
    sightings.push({ at: [positionLon, positionLat], seenAt: positionAt.getTime() });
  return sightings;
}

function sightingsOf(
  technician: Whereabouts,
  lastDoor: Sighting | undefined,
  shifts: readonly WorkShift[],
  now: Instant,
): Sighting[] {
  const home: LonLat = [technician.startLon, technician.startLat];
  const begun = shifts
    .filter((shift) => shift.startsAt <= now)
    .map((shift) => ({ at: home, seenAt: shift.startsAt }));
  return [...begun, ...seenAt(technician, lastDoor)];
}

/** The newest sighting of a van; `null` when nobody has seen it. */
export const newestSighting = (
  technician: Whereabouts,
  lastDoor: Sighting | undefined,
): Sighting | null =>
  seenAt(technician, lastDoor).reduce<Sighting | null>(
    (newest, one) => (newest === null || one.seenAt >= newest.seenAt ? one : newest),
    null,
  );
