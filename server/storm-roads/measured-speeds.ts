import type { Sequelize } from 'sequelize';
import type { MeasuredSpeedsDto, Settings } from '@shared/contract/office';
import { driveFault, learnedSpeeds, type MeasuredDrive } from '@shared/domain/roads/learned-speeds';
import type { RoadFactors } from '@shared/domain/roads/conditions';
import { CLASS_SPEED_KMH, ROAD_CLASSES } from '@shared/domain/roads/road-class';
import { DEFAULT_TRAVEL } from '@shared/domain/travel/travel-times';
import { json, select } from '../db/sql';
import { readSettings } from '../office/settings';

/** Older drives tell of other storms: our bound on how many count. */
const MOST_DRIVES = 2000;

/** The drives that count, newest first. */
async function measuredDrives(
  sequelize: Sequelize,
  since: Settings['measuredFrom'],
): Promise<MeasuredDrive[]> {
  const rows = await select<{
    started_at: Date;
    arrived_at: Date;
    has_start: number;
    paused: number;
    expected: unknown;
  }>(
    sequelize,
    `SELECT started_at, arrived_at, has_start, paused, expected FROM drives
      WHERE started_at >= ? ORDER BY started_at DESC, stop_id LIMIT ?`,
    [new Date(since ?? 0), MOST_DRIVES],
  );
  return rows.map((row) => ({
    startedAt: row.started_at.getTime(),
    // Who arrives says so at the door; parking and the walk to it are no driving.
    arrivedAt: row.arrived_at.getTime() - DEFAULT_TRAVEL.stopSeconds * 1000,
    hasStart: Boolean(row.has_start),
    isPaused: Boolean(row.paused),
    expectedSeconds: json<Record<string, number>>(row.expected),
  }));
}

/** What the drives say, for the manager to look at before and after switching it on. */
export async function measuredSpeeds(sequelize: Sequelize): Promise<MeasuredSpeedsDto> {
  const settings = await readSettings(sequelize);
  const drives = await measuredDrives(sequelize, settings.measuredFrom);
  const learned = learnedSpeeds(drives);
  const faults = new Map<string, number>();
  for (const drive of drives) {
    const why = driveFault(drive);
    if (why !== null) faults.set(why, (faults.get(why) ?? 0) + 1);
  }
  return {
    since: settings.measuredFrom,
    isUsed: settings.usesMeasuredSpeeds,
    drives: drives.length,
    leftOut: [...faults]
      .map(([why, count]) => ({ why, drives: count }))
      .sort((a, b) => b.drives - a.drives || a.why.localeCompare(b.why)),
    classes: ROAD_CLASSES.flatMap((roadClass) => {
      const one = learned[roadClass];
      return one ? [{ roadClass, ...one, usualKmh: CLASS_SPEED_KMH[roadClass] }] : [];
    }),
  };
}

/** The corrections that the settings let count, by class; none while the manager has them off. */
export async function corrections(
  sequelize: Sequelize,
  { usesMeasuredSpeeds, measuredFrom }: Settings,
): Promise<RoadFactors['byClass']> {
  if (!usesMeasuredSpeeds) return {};
  const learned = learnedSpeeds(await measuredDrives(sequelize, measuredFrom));
  return Object.fromEntries(
    ROAD_CLASSES.flatMap((name) => {
      const factor = learned[name]?.factor ?? 1;
      // In hundredths, so that one more drive does not time every route again.
      return factor === 1 ? [] : [[name, Math.round(factor * 100) / 100]];
    }),
  );
}
