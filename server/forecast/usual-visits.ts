import type { Settings } from '@shared/contract/office';
import type { LearnedService } from '@shared/domain/service-times';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { Context } from '../context';
import { minutesAtDoor, type VisitFacts } from '../routes/visit-facts';
import { travelNow } from '../routes/travel-by-settings';
import type { StopAhead } from './forecast-rows';

/** Until routes or roads say more: our estimate of a drive in minutes. */
const USUAL_DRIVE_MINUTES = 15;
/** Fewer stops than this say little of the drives to come. */
const ENOUGH_STOPS = 5;
/** Doors from which the drives to their nearest others are looked up: so many single drives are soon found. */
const MOST_DOORS = 24;
/** A route goes to near doors, and not always to the nearest: our estimate. */
const NEAR = 3;

export interface UsualWork {
  /** A visit on average, in minutes. */
  readonly usualServiceMinutes: number;
  /** How many such visits each call is, in the order asked for. */
  readonly workTimes: readonly number[];
}

/** What routes count at the doors of these calls: units, likely causes, and what visits have taught. */
export function usualWork(
  callIds: readonly string[],
  visits: ReadonlyMap<string, VisitFacts>,
  settings: Settings,
  learned: LearnedService | null,
): UsualWork {
  const plain = { cause: null, units: 1 };
  const minutes = callIds.map((id) => minutesAtDoor(visits.get(id) ?? plain, settings, learned));
  const usualServiceMinutes =
    minutes.length === 0
      ? minutesAtDoor(plain, settings, learned)
      : minutes.reduce((sum, one) => sum + one, 0) / minutes.length;
  return { usualServiceMinutes, workTimes: minutes.map((one) => one / usualServiceMinutes) };
}

/**
 * A drive to the next door in minutes: that of the routes in force, where there are enough of them; else,
 * along the roads as they are now, to one of the nearest doors that wait.
 */
export function usualDrive(
  { roads }: Pick<Context, 'roads'>,
  settings: Settings,
  inForce: readonly StopAhead[],
  doors: readonly LonLat[],
): number {
  const drives = inForce.map(({ driveMinutes }) => driveMinutes).filter((minutes) => minutes > 0);
  if (drives.length >= ENOUGH_STOPS) return mean(drives);
  if (doors.length <= NEAR) return USUAL_DRIVE_MINUTES;
  const travel = travelNow(roads, settings);
  const step = Math.ceil(doors.length / MOST_DOORS);
  const near = doors
    .filter((_, index) => index % step === 0)
    .flatMap((from) => {
      const [to] = nearest(doors, from).slice(NEAR, NEAR + 1);
      const seconds = to ? (travel.matrix([from, to])[1] ?? Infinity) : Infinity;
      // Doors of one house say nothing of drives.
      return seconds > 0 && Number.isFinite(seconds) ? [seconds / 60] : [];
    });
  return near.length === 0 ? USUAL_DRIVE_MINUTES : mean(near);
}

const mean = (values: readonly number[]): number =>
  values.reduce((sum, one) => sum + one, 0) / values.length;

/** By the straight line, itself first. */
function nearest(doors: readonly LonLat[], [lon, lat]: LonLat): LonLat[] {
  const shrink = Math.cos((lat * Math.PI) / 180);
  const far = (door: LonLat): number => ((door[0] - lon) * shrink) ** 2 + (door[1] - lat) ** 2;
  return [...doors].sort((a, b) => far(a) - far(b));
}
