import { randomUUID } from 'node:crypto';
import type { Sequelize, Transaction } from 'sequelize';
import type { Position } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import { machine } from '../commands/actor';
import { runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { select } from '../db/sql';
import { readSettings } from '../office/settings';
import { tellEtaIfMoved } from '../texts/tell-customer';
import { callOf, lockRoutes, routeOf } from './lock-routes';
import { settleRoutes } from './settle-routes';
import { arrivalFrom, setEta } from './visits';

/** A fix coarser than this says too little about an arrival; our estimate. */
const COARSEST_METERS = 1000;

interface Driving {
  id: string;
  storm_id: string;
  version: number;
  eta_at: Date;
  travel_at: Date;
  by_shop: number;
  lon: number;
  lat: number;
}

/**
 * Corrects the arrival time of whoever is driving when their position moves it by more than the
 * settings allow. The customer is told in the same transaction.
 */
export async function followPosition(
  context: Context,
  technicianId: string,
  { lonLat, accuracyMeters }: Position,
): Promise<void> {
  if ((accuracyMeters ?? 0) > COARSEST_METERS) return;
  const [driving] = await select<Driving>(
    context.sequelize,
    `SELECT s.id, s.storm_id, s.version, s.eta_at, s.travel_at, c.lon, c.lat,
            s.fetches IS NOT NULL AS by_shop
       FROM stops s JOIN calls c ON c.id = s.call_id
      WHERE s.busy_technician = ? AND s.state = 'travelling' AND s.eta_at IS NOT NULL
        AND c.lon IS NOT NULL`,
    [technicianId],
  );
  if (!driving) return;
  const settings = await readSettings(context.sequelize);
  const arrival = arrivalFrom(
    { now: context.clock(), roads: context.roads },
    { settings },
    lonLat,
    driving,
  );
  if (!arrival) return;
  const laterBy = arrival.at - driving.eta_at.getTime();
  if (Math.abs(laterBy) <= settings.etaMovedMinutes * MINUTE_MS) return;
  // Nobody knows whether the van has been at the store already: the direct way would promise too much.
  if (laterBy < 0 && driving.by_shop) return;
  if (laterBy < 0 && (await wasToldByTechnician(context.sequelize, driving))) return;
  await correctEta(context, technicianId, driving, arrival.at);
}

/** Who drives knows more than any map: it never promises less than the driver did. */
export async function wasToldByTechnician(
  sequelize: Sequelize,
  driving: Pick<Driving, 'id' | 'travel_at'>,
  tx?: Transaction,
): Promise<boolean> {
  const told = await select(
    sequelize,
    "SELECT n FROM audit_entries WHERE entity_id = ? AND at >= ? AND command = 'tellEta' LIMIT 1",
    [driving.id, driving.travel_at],
    tx,
  );
  return told.length > 0;
}

async function correctEta(
  context: Context,
  technicianId: string,
  driving: Driving,
  etaAt: Instant,
): Promise<void> {
  const order = {
    actor: machine('arrival times'),
    type: 'correctEta',
    commandId: randomUUID(),
    asked: { stopId: driving.id, etaAt },
  };
  try {
    await runCommand(context, order, async (job) => {
      const routes = await lockRoutes(job, driving.storm_id, [technicianId]);
      const stop = routeOf(routes, technicianId).find(({ id }) => id === driving.id);
      if (stop?.state !== 'travelling' || stop.version !== driving.version)
        throw new Refusal('stale-version', 'The stop has changed since the position was sent.');
      setEta(stop, etaAt);
      const call = callOf(routes, stop);
      await tellEtaIfMoved(job, call, stop);
      await settleRoutes(job, routes);
      job.note('stop', stop.id, `the arrival at call ${String(call.number)} moved with the drive`);
      return null;
    });
    context.wakeOutbox();
  } catch (error) {
    // The stop went on meanwhile; the next position looks again.
    if (!(error instanceof Refusal)) throw error;
  }
}
