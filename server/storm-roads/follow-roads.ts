import { randomUUID } from 'node:crypto';
import type { Sequelize } from 'sequelize';
import type { Settings } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import { conditionsAt, conditionsKey, type RoadConditions } from '@shared/domain/roads/conditions';
import { drive } from '@shared/domain/route-times';
import { forTheGraph } from '@shared/domain/storm-roads';
import { writeRemark } from '../calls/change-call';
import { machine } from '../commands/actor';
import { runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { select } from '../db/sql';
import { readSettings } from '../office/settings';
import { wasToldByTechnician } from '../routes/follow-position';
import {
  callOf,
  lockRoutes,
  routeOf,
  technicianOf,
  type ActiveStop,
  type Routes,
} from '../routes/lock-routes';
import { overtakePlans } from '../routes/overtake-plans';
import { settleRoutes } from '../routes/settle-routes';
import { travelNow } from '../routes/travel-by-settings';
import { setEta } from '../routes/visits';
import { newestSighting } from '../routes/where-technicians-are';
import { lockOpenStorm } from '../storms/storm-queries';
import { StormRecord } from '../storms/storm-record';
import { tellEtaIfMoved } from '../texts/tell-customer';
import { findCutOff } from './find-cut-off';
import { corrections } from './measured-speeds';
import { confirmedRoads, factorsAt, shortKey } from './road-conditions';

/**
 * Brings travel times, routes and arrivals up to the roads of this moment: after a change of a storm road or
 * of the settings, and when a span begins or ends, or the hour changes. It only compares what holds with
 * what was followed last, so it may be called as often as one likes, by any number of processes.
 *
 * @param looksAgain whether calls that are cut off are looked at once more: vans move
 */
export async function followRoads(context: Context, looksAgain = true): Promise<void> {
  const { roads } = context;
  if (!roads) return;
  const storm = await StormRecord.findOne({ where: { state: 'open' } });
  if (!storm) return;
  const conditions = await conditionsNow(context, storm.id);
  // Until a moment ago commands of this process counted with other roads, whoever timed the routes last.
  const wasBehind = conditionsKey(roads.followed) !== conditionsKey(conditions);
  if (wasBehind) await roads.follow(conditions);
  const key = shortKey(conditions, context.region.dto.id);
  if (storm.roadsKey !== key || wasBehind)
    await timeRoutesAgain(context, storm.id, { conditions, key, wasBehind });
  await findCutOff(context, storm.id, { conditions, key, looksAgain });
}

/** Conditions as they were made last. Reading every outline each second would be work for nothing. */
const made = new WeakMap<
  Sequelize,
  { readonly glance: string; readonly conditions: RoadConditions }
>();

async function conditionsNow(context: Context, stormId: string): Promise<RoadConditions> {
  const { sequelize, region } = context;
  const now = context.clock();
  const zone = region.dto.timeZone;
  const settings = await readSettings(sequelize);
  const glance = await glanceAt(sequelize, stormId, settings, now, zone);
  const before = made.get(sequelize);
  if (before?.glance === glance) return before.conditions;
  const factors = factorsAt(settings, await corrections(sequelize, settings), now, zone);
  const conditions = conditionsAt((await confirmedRoads(stormId)).map(forTheGraph), factors, now);
  made.set(sequelize, { glance, conditions });
  return conditions;
}

/** Everything that conditions are made from, as versions: the same text makes the same conditions. */
async function glanceAt(
  sequelize: Sequelize,
  stormId: string,
  settings: Settings,
  now: Instant,
  zone: string,
): Promise<string> {
  const inForce = await select<{ id: string; version: number }>(
    sequelize,
    `SELECT id, version FROM storm_roads WHERE storm_id = ? AND state = 'confirmed'
        AND starts_at <= ? AND (ends_at IS NULL OR ends_at > ?) ORDER BY id`,
    [stormId, new Date(now), new Date(now)],
  );
  const [drives] = settings.usesMeasuredSpeeds
    ? await select<{ count: number }>(sequelize, 'SELECT COUNT(*) AS count FROM drives')
    : [];
  const { timeOfDay } = factorsAt(settings, {}, now, zone);
  return JSON.stringify([stormId, settings.version, timeOfDay, drives?.count, zone, inForce]);
}

/** One command for all routes of the storm, so that every board sees them change together. */
async function timeRoutesAgain(
  context: Context,
  stormId: string,
  {
    conditions,
    key,
    wasBehind,
  }: {
    readonly conditions: RoadConditions;
    readonly key: string;
    readonly wasBehind: boolean;
  },
): Promise<void> {
  const order = {
    actor: machine('road conditions'),
    type: 'followRoads',
    commandId: randomUUID(),
    asked: { stormId, key },
  };
  try {
    await runCommand(context, order, async (job) => {
      const storm = await lockOpenStorm(stormId, job.tx);
      const isNews = storm.roadsKey !== key;
      if (!isNews && !wasBehind)
        throw new Refusal('stale-version', 'Another process has timed the routes already.');
      const isFirst = storm.roadsKey === '';
      storm.roadsKey = key;
      await storm.save({ transaction: job.tx });
      const routes = await lockRoutes(job, stormId, 'all');
      for (const technicianId of routes.stops.keys()) await moveArrival(job, routes, technicianId);
      await settleRoutes(job, routes);
      // What was proposed before counted on other drives.
      if (isNews && !isFirst) await overtakePlans(job, storm);
      job.note('storm', stormId, wordsFor(conditions, job.touched.stops.size));
      return null;
    });
  } catch (error) {
    // Closed meanwhile, or done by another process.
    if (!(error instanceof Refusal)) throw error;
  }
}

const wordsFor = ({ roads, factors }: RoadConditions, moved: number): string =>
  `routes follow the roads: ${String(roads.length)} storm roads in force, ` +
  `${String(Math.round(factors.timeOfDay * factors.storm * 100))} % of the usual speed; ` +
  `${String(moved)} stops have new times`;

/** The arrival of whoever is driving now, from where the van was seen last; the customer is told of a large move. */
async function moveArrival(job: Job, routes: Routes, technicianId: string): Promise<void> {
  const stop = routeOf(routes, technicianId).find(({ state }) => state === 'travelling');
  if (!stop) return;
  const call = callOf(routes, stop);
  const arrival = arrivalOf(job, routes, stop);
  if (arrival === null) return;
  const isUnreachable = !Number.isFinite(arrival);
  const isNews = (stop.unreachable ?? false) !== isUnreachable;
  if (isNews) stop.unreachable = isUnreachable;
  if (isUnreachable) {
    if (isNews) await remarkCutOff(job, call.id, technicianOf(routes, technicianId).name);
    return;
  }
  const laterBy = arrival - (stop.etaAt ?? stop.arriveAt).getTime();
  if (Math.abs(laterBy) < MINUTE_MS) return;
  const { travelAt } = stop;
  if (laterBy < 0 && stop.fetches) return;
  if (laterBy < 0 && travelAt) {
    const driving = { id: stop.id, travel_at: travelAt };
    if (await wasToldByTechnician(job.sequelize, driving, job.tx)) return;
  }
  setEta(stop, arrival);
  await tellEtaIfMoved(job, call, stop);
}

/** The arrival that the customer was told cannot be kept, and no other can be told: people have to talk. */
async function remarkCutOff(job: Job, callId: string, technician: string): Promise<void> {
  await writeRemark(
    job,
    callId,
    `No open road leads there any more, and ${technician} is on the way. The arrival that was told cannot be kept: ring the customer.`,
  );
  job.touched.call(callId);
}

/** Infinity where no open road leads there; `null` where nobody knows from where to count. */
function arrivalOf(job: Job, routes: Routes, stop: ActiveStop): number | null {
  const { lon, lat } = callOf(routes, stop);
  const seen = newestSighting(
    technicianOf(routes, stop.technicianId),
    routes.lastDoors.get(stop.technicianId),
  );
  if (lon == null || lat == null || !seen || !stop.travelAt) return null;
  const driveMs = drive(travelNow(job.roads, routes.settings), seen.at, [lon, lat]);
  // A van that was seen before it set off stood there until then.
  return Math.max(job.now, Math.max(seen.seenAt, stop.travelAt.getTime()) + driveMs);
}
