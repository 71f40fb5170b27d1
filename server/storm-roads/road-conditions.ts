import { createHash } from 'node:crypto';
import { DateTime } from 'luxon';
import type { Transaction } from 'sequelize';
import type { Settings } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import {
  conditionsAt,
  conditionsKey,
  type RoadConditions,
  type RoadFactors,
} from '@shared/domain/roads/conditions';
import { drivingHoursAt } from '@shared/domain/roads/driving-hours';
import { forTheGraph, type StandingStormRoad } from '@shared/domain/storm-roads';
import { StormRoadRecord } from './storm-road-record';

/** The storm roads that a dispatcher has confirmed, of a storm. */
export async function confirmedRoads(
  stormId: string,
  tx?: Transaction,
): Promise<StandingStormRoad[]> {
  const records = await StormRoadRecord.findAll({
    where: { stormId, state: 'confirmed' },
    order: [['id', 'ASC']],
    ...(tx ? { transaction: tx } : {}),
  });
  return records.map((record) => record.toDomain());
}

/** The roads as they were at a moment that is past: what has been lifted since held then. */
export async function conditionsThen(
  stormId: string,
  factors: RoadFactors,
  at: Instant,
): Promise<RoadConditions> {
  const records = await StormRoadRecord.findAll({ where: { stormId }, order: [['id', 'ASC']] });
  const held = records.filter(
    ({ state, liftedAt }) => state === 'confirmed' || (liftedAt?.getTime() ?? 0) > at,
  );
  return conditionsAt(
    held.map((record) => forTheGraph(record.toDomain())),
    factors,
    at,
  );
}

/** How fast the roads are at a moment, by the settings. @param zone IANA name of the region's zone */
export function factorsAt(
  settings: Settings,
  byClass: RoadFactors['byClass'],
  at: Instant,
  zone: string,
): RoadFactors {
  const wall = DateTime.fromMillis(at, { zone });
  const percent = {
    morning: settings.morningPercent,
    day: settings.dayPercent,
    evening: settings.eveningPercent,
    night: settings.nightPercent,
  }[drivingHoursAt(wall.hour * 60 + wall.minute)];
  return { timeOfDay: percent / 100, storm: settings.stormPercent / 100, byClass };
}

/** Names conditions in a column's width, together with the region whose roads they are about. */
export const shortKey = (conditions: RoadConditions, regionId: string): string =>
  createHash('sha256')
    .update(`${regionId} ${conditionsKey(conditions)}`)
    .digest('hex');
