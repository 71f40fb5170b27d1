import type { CompartmentFacts, CoolingNow, RanBetween } from '@shared/domain/cold-unit';
import type { Span } from '@shared/domain/thaw/uncooled-time';
import { woundClock } from '../calls/wound-clock';
import type { Job } from '../commands/run-command';
import { change, insert, json, select } from '../db/sql';
import { areasOf } from './area-of';
import type { AreaRecord } from './area-record';

interface PlacedCall {
  id: string;
  lon: number;
  lat: number;
  area_id: string | null;
  times_from: 'area' | 'caller';
  power_out_at: Date;
  power_back_at: Date | null;
}

/** One statement winds this many clocks. */
const BATCH = 500;

/**
 * Puts every open call of the storm into the outage area around it, and lets those whose times
 * follow their area follow. In bulk: a county's worth of calls may move at once.
 *
 * @returns how many calls changed
 */
export async function callsFollowAreas(job: Job, stormId: string): Promise<number> {
  const areaAt = await areasOf(job.tx, stormId);
  const calls = await select<PlacedCall>(
    job.sequelize,
    `SELECT id, lon, lat, area_id, times_from, power_out_at, power_back_at
       FROM calls WHERE storm_id = ? AND settled_at IS NULL AND lon IS NOT NULL
      ORDER BY id FOR UPDATE`,
    [stormId],
    job.tx,
  );

  const byArea = new Map<AreaRecord | null, { move: string[]; wind: string[] }>();
  for (const call of calls) {
    const area = areaAt([call.lon, call.lat]);
    const winds = area !== null && call.times_from === 'area' && !hasTimesOf(call, area);
    if (call.area_id === (area?.id ?? null) && !winds) continue;
    const group = byArea.get(area) ?? { move: [], wind: [] };
    byArea.set(area, group);
    (winds ? group.wind : group.move).push(call.id);
  }

  let moved = 0;
  for (const [area, { move, wind }] of byArea) {
    if (move.length > 0)
      await change(
        job.sequelize,
        'UPDATE calls SET area_id = ?, version = version + 1 WHERE id IN (?)',
        [area?.id ?? null, move],
        job.tx,
      );
    if (area && wind.length > 0) {
      await change(
        job.sequelize,
        `UPDATE calls SET area_id = ?, power_out_at = ?, power_back_at = ?, version = version + 1
          WHERE id IN (?)`,
        [area.id, area.outAt, area.backAt, wind],
        job.tx,
      );
      await windAll(job, wind, area.outAt.getTime());
    }
    for (const id of [...move, ...wind]) job.touched.call(id);
    moved += move.length + wind.length;
  }
  return moved;
}

const hasTimesOf = (call: PlacedCall, area: AreaRecord): boolean =>
  call.power_out_at.getTime() === area.outAt.getTime() &&
  call.power_back_at?.getTime() === area.backAt?.getTime();

/** Winds the clocks of many open calls whose power went at one moment. */
async function windAll(job: Job, callIds: readonly string[], lostAt: number): Promise<void> {
  for (let i = 0; i < callIds.length; i += BATCH) {
    const rows = await select<{
      unit_id: string;
      place_no: number;
      kind: string;
      facts: unknown;
      value_cents: number;
      cubic_feet: number | null;
      cooling: CoolingNow;
      ran_between: RanBetween;
      power_on_spans: unknown;
    }>(
      job.sequelize,
      `SELECT k.unit_id, k.place_no, k.kind, k.facts, k.value_cents, u.cubic_feet, u.cooling,
              u.ran_between, c.power_on_spans
         FROM compartments k JOIN cold_units u ON u.id = k.unit_id JOIN calls c ON c.id = u.call_id
        WHERE u.call_id IN (?)`,
      [callIds.slice(i, i + BATCH)],
      job.tx,
    );
    if (rows.length === 0) continue;
    await insert(
      job.sequelize,
      `INSERT INTO compartments
         (unit_id, place_no, kind, facts, value_cents, at_risk_at, earliest_at, likely_at,
          save_by_at, reasons)
       VALUES ? ON DUPLICATE KEY UPDATE at_risk_at = VALUES(at_risk_at),
         earliest_at = VALUES(earliest_at), likely_at = VALUES(likely_at),
         save_by_at = VALUES(save_by_at), reasons = VALUES(reasons)`,
      [
        rows.map((row) => {
          const facts = json<CompartmentFacts>(row.facts);
          const powerOnSpans = json<Span[]>(row.power_on_spans);
          const clock = woundClock(
            { lostAt, restoredAt: null, powerOnSpans },
            {
              cubicFeet: row.cubic_feet,
              cooling: row.cooling,
              ranBetween: row.ran_between,
            },
            facts,
          );
          return [
            row.unit_id,
            row.place_no,
            row.kind,
            JSON.stringify(facts),
            row.value_cents,
            clock.atRiskAt,
            clock.earliestAt,
            clock.likelyAt,
            clock.saveByAt,
            JSON.stringify(clock.reasons),
          ];
        }),
      ],
      job.tx,
    );
  }
}
