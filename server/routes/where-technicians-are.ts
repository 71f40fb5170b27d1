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
  const { positionLon, positionLat, positionAt } = technician;
  const sightings: Sighting[] = shifts
    .filter((shift) => shift.startsAt <= now)
    .map((shift) => ({ at: home, seenAt: shift.startsAt }));
  if (lastDoor) sightings.push(lastDoor);
  if (positionLon != null && positionLat != null && positionAt)
    sightings.push({ at: [positionLon, positionLat], seenAt: positionAt.getTime() });
  return lastSeen(home, sightings);
}
