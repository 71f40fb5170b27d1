import type { StopCard } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import type { CallRecord } from '../calls/call-record';
import type { Job } from '../commands/run-command';
import { findOpenStorm, lockOpenStorm } from '../storms/storm-queries';
import type { StormRecord } from '../storms/storm-record';
import { callOf, lockRoutes, routeOf, type ActiveStop, type Routes } from './lock-routes';
import { stopCards } from './stop-cards';
import { StopRecord } from './stop-record';
import { toStopDto } from './stop-rows';

export interface OpenedStop {
  readonly storm: StormRecord;
  readonly routes: Routes;
  readonly stop: ActiveStop;
  readonly call: CallRecord;
}

interface Seen {
  readonly stopId: string;
  /** The version that the writer saw. */
  readonly version: number;
}

/**
 * A stop for the desk to change, with its route locked and the storm before it.
 *
 * @param alsoRouteOf another technician whose route is concerned
 * @throws Refusal `not-found`, `storm-closed`, or `stale-version` with the stop as it is now
 */
export async function openStop(
  job: Job,
  { stopId, version }: Seen,
  alsoRouteOf?: string,
): Promise<OpenedStop> {
  const seen = await StopRecord.findByPk(stopId, { transaction: job.tx });
  if (!seen) throw new Refusal('not-found', 'There is no such stop.');
  const storm = await lockOpenStorm(seen.stormId, job.tx);
  const whose = [seen.technicianId, ...(alsoRouteOf ? [alsoRouteOf] : [])];
  const routes = await lockRoutes(job, seen.stormId, whose, [seen.callId]);
  const stop = routeOf(routes, seen.technicianId).find(({ id }) => id === stopId);
  if (!stop || stop.version !== version) {
    const now = await StopRecord.findByPk(stopId, { transaction: job.tx });
    throw new Refusal('stale-version', wordsFor(now), now && toStopDto(now));
  }
  return { storm, routes, stop, call: callOf(routes, stop) };
}

/**
 * A technician's own stop, with the route locked. Somebody else's does not exist for them.
 *
 * @throws Refusal `not-found`, `storm-closed`, or `stale-version` with the card as it is now
 */
export async function openOwnStop(job: Job, { stopId, version }: Seen): Promise<OpenedStop> {
  const { technicianId } = job.actor;
  const seen = await StopRecord.findByPk(stopId, { transaction: job.tx });
  if (!seen || technicianId === null || seen.technicianId !== technicianId)
    throw new Refusal('not-found', 'This stop is not on your route.');
  const storm = await findOpenStorm(seen.stormId, job.tx);
  const routes = await lockRoutes(job, seen.stormId, [technicianId], [seen.callId]);
  const stop = routeOf(routes, technicianId).find(({ id }) => id === stopId);
  if (!stop || stop.version !== version) {
    const now = await StopRecord.findByPk(stopId, { transaction: job.tx });
    if (now?.technicianId !== technicianId)
      throw new Refusal('not-found', 'This stop is not on your route any more.');
    throw new Refusal('stale-version', wordsFor(now), await stopCard(job, stopId));
  }
  return { storm, routes, stop, call: callOf(routes, stop) };
}

/** The stop as a phone shows it, also when it is over. */
export async function stopCard(job: Job, stopId: string): Promise<StopCard> {
  const { cards } = await stopCards(job.sequelize, { stopIds: [stopId], alsoEnded: true }, job.tx);
  const [card] = cards;
  if (!card) throw new Error(`stop ${stopId} has no card`);
  return card;
}

const wordsFor = (stop: StopRecord | null): string =>
  stop?.endedBecause
    ? `This stop is over. ${stop.endedBecause}`
    : 'The stop has changed since you looked at it.';
