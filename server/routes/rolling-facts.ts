import { createHash } from 'node:crypto';
import type { Sequelize, Transaction } from 'sequelize';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import { select } from '../db/sql';

/** Vans move and visits drag on without anybody's saying so: routes are looked at again after so long. */
export const LOOK_AGAIN_MS = 5 * MINUTE_MS;

/** What routes depend on, as counts and versions by kind: the same texts make the same plan. */
export type RollingFacts = Readonly<Record<keyof typeof CAUSES_OF_CHANGE, string>>;

/** What to say about a change of each kind, the most telling first. */
export const CAUSES_OF_CHANGE = {
  calls: 'a call came in or changed',
  stops: 'a stop went on, was late or was moved',
  technicians: 'a technician or a shift changed',
  roads: 'the roads changed',
  settings: 'the settings changed',
  time: 'time went on',
} as const;

export async function rollingFacts(
  sequelize: Sequelize,
  stormId: string,
  now: Instant,
  tx?: Transaction,
): Promise<RollingFacts> {
  const [row] = await select<Record<string, string | number | null>>(
    sequelize,
    `SELECT
       (SELECT CONCAT_WS(' ', COUNT(*), SUM(version), SUM(cut_off)) FROM calls WHERE storm_id = s.id
           AND state IN ('waiting','planned','offered','accepted','travelling','on-site')) AS calls,
       (SELECT CONCAT_WS(' ', COUNT(*), SUM(version)) FROM stops WHERE storm_id = s.id) AS stops,
       (SELECT CONCAT_WS(' ', COUNT(*), SUM(version)) FROM technicians) AS technicians,
       (SELECT CONCAT_WS(' ', COUNT(*), SUM(starts_at <= ?)) FROM shifts WHERE ends_at > ?) AS shifts,
       (SELECT version FROM settings WHERE id = 1) AS settings,
       s.roads_key, s.plan_epoch
     FROM storms s WHERE s.id = ?`,
    [new Date(now), new Date(now), stormId],
    tx,
  );
  const text = (...names: string[]): string => names.map((name) => String(row?.[name])).join('/');
  return {
    calls: text('calls'),
    stops: text('stops', 'plan_epoch'),
    technicians: text('technicians', 'shifts'),
    roads: text('roads_key'),
    settings: text('settings'),
    time: String(Math.floor(now / LOOK_AGAIN_MS)),
  };
}

export const keyOf = (facts: RollingFacts): string =>
  createHash('sha256').update(JSON.stringify(facts)).digest('hex');

/** What is different, in words. */
export function whatChanged(before: RollingFacts | null, now: RollingFacts): string {
  const kinds = Object.keys(CAUSES_OF_CHANGE) as (keyof typeof CAUSES_OF_CHANGE)[];
  const changed = before ? kinds.filter((kind) => before[kind] !== now[kind]) : [];
  const [first] = changed;
  return first === undefined ? 'the first look' : CAUSES_OF_CHANGE[first];
}
