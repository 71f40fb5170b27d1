import type { RoadClass } from '@shared/domain/roads/road-class';
import { CLASS_SPEED_KMH } from '@shared/domain/roads/road-class';
import { greatCircleKm, type LonLat } from '@shared/domain/travel/great-circle';
import type { Context } from '../context';
import { insert, select } from '../db/sql';
import { readSettings } from '../office/settings';
import type { RoadsPort } from '../workers/ports';
import { conditionsThen, factorsAt } from './road-conditions';

/** Drives at a time; the rest waits for the next look. */
const BATCH = 20;
/** The class of road is asked for at least this often along a way, in kilometres. */
const STEP_KM = 0.15;

interface Drive {
  id: string;
  storm_id: string;
  technician_id: string;
  travel_at: Date;
  arrived_at: Date;
  from_lon: number | null;
  from_lat: number | null;
  lon: number | null;
  lat: number | null;
  corrected: number;
}

/**
 * Sets each drive that has ended beside what the roads said of its way at the time, and keeps both, so that
 * speeds can be learned from them. One whose beginning nobody saw is kept as well: it is counted, and tells
 * nothing.
 */
export async function measureDrives(context: Context): Promise<void> {
  const { sequelize, roads } = context;
  if (!roads) return;
  const drives = await select<Drive>(
    sequelize,
    `SELECT s.id, s.storm_id, s.technician_id, s.travel_at, s.arrived_at,
            s.travel_from_lon AS from_lon, s.travel_from_lat AS from_lat, c.lon, c.lat,
            -- Whoever corrects an arrival by hand stops on the way or turns aside.
            EXISTS (SELECT 1 FROM audit_entries e WHERE e.entity_id = s.id
                     AND e.command = 'tellEta' AND e.at >= s.travel_at) AS corrected
       FROM stops s JOIN calls c ON c.id = s.call_id LEFT JOIN drives d ON d.stop_id = s.id
      WHERE s.arrived_at IS NOT NULL AND s.travel_at IS NOT NULL AND d.stop_id IS NULL
      ORDER BY s.arrived_at, s.id LIMIT ?`,
    [BATCH],
  );
  for (const one of drives) {
    const expected = await expectedSeconds(context, roads, one);
    await insert(
      sequelize,
      `INSERT IGNORE INTO drives
         (stop_id, storm_id, technician_id, started_at, arrived_at, has_start, paused, expected)
       VALUES (?, ?, ?, ?, ?, ?, ?, ?)`,
      [
        one.id,
        one.storm_id,
        one.technician_id,
        one.travel_at,
        one.arrived_at,
        one.from_lon !== null,
        Boolean(one.corrected),
        JSON.stringify(expected),
      ],
    );
  }
}

/** Seconds by class of road, at the settings' speeds of that hour and without corrections; empty when unknown. */
async function expectedSeconds(
  { sequelize, region }: Context,
  roads: RoadsPort,
  drive: Drive,
): Promise<Readonly<Partial<Record<RoadClass, number>>>> {
  const { from_lon, from_lat, lon, lat } = drive;
  if (from_lon === null || from_lat === null || lon === null || lat === null) return {};
  const at = drive.travel_at.getTime();
  const factors = factorsAt(await readSettings(sequelize), {}, at, region.dto.timeZone);
  const conditions = await conditionsThen(drive.storm_id, factors, at);
  const [leg] = await roads.path(
    [
      [from_lon, from_lat],
      [lon, lat],
    ],
    conditions,
  );
  return leg ? byClass(leg.line, leg.seconds, roads) : {};
}

/**
 * Divides the seconds of a way among the classes of its roads, by length over the class's speed. The line
 * itself does not say its classes; the road nearest to each piece of it does.
 */
export function byClass(
  line: readonly LonLat[],
  seconds: number,
  roads: Pick<RoadsPort, 'nearest'>,
): Partial<Record<RoadClass, number>> {
  const weights = new Map<RoadClass, number>();
  let all = 0;
  for (let i = 1; i < line.length; i++) {
    const [a, b] = [line[i - 1]!, line[i]!];
    const km = greatCircleKm(a, b);
    const pieces = Math.max(1, Math.ceil(km / STEP_KM));
    for (let k = 0; k < pieces; k++) {
      const share = (k + 0.5) / pieces;
      const roadClass = roads.nearest([
        a[0] + (b[0] - a[0]) * share,
        a[1] + (b[1] - a[1]) * share,
      ])?.roadClass;
      if (!roadClass) continue;
      const weight = km / pieces / CLASS_SPEED_KMH[roadClass];
      weights.set(roadClass, (weights.get(roadClass) ?? 0) + weight);
      all += weight;
    }
  }
  return Object.fromEntries(
    [...weights].map(([name, weight]) => [name, Math.round((weight / all) * seconds * 10) / 10]),
  );
}
