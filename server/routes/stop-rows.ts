import { Op, type Sequelize, type Transaction } from 'sequelize';
import type { StopDto } from '@shared/contract/routes';
import { StopRecord } from './stop-record';

/** The states of a stop that is still to be done; the others are history. */
export const ACTIVE_STOPS: readonly StopDto['state'][] = [
  'planned',
  'offered',
  'accepted',
  'travelling',
  'on-site',
];

export const isActive = (state: StopDto['state']): boolean => ACTIVE_STOPS.includes(state);

/** Stops by id, or those of a storm that are still to be done, in the order of their routes. */
export async function stopDtos(
  _sequelize: Sequelize,
  which: { readonly ids: readonly string[] } | { readonly stormId: string },
  tx?: Transaction,
): Promise<StopDto[]> {
  if ('ids' in which && which.ids.length === 0) return [];
  const records = await StopRecord.findAll({
    where:
      'ids' in which
        ? { id: { [Op.in]: [...which.ids] } }
        : { stormId: which.stormId, state: { [Op.in]: [...ACTIVE_STOPS] } },
    order: [
      ['technicianId', 'ASC'],
      ['position', 'ASC'],
    ],
    ...(tx ? { transaction: tx } : {}),
  });
  return records.map(toStopDto);
}

export function toStopDto(stop: StopRecord): StopDto {
  return {
    id: stop.id,
    stormId: stop.stormId,
    technicianId: stop.technicianId,
    callId: stop.callId,
    position: stop.position,
    state: stop.state,
    locked: stop.locked,
    arriveAt: stop.arriveAt.getTime(),
    finishAt: stop.finishAt.getTime(),
    etaAt: stop.etaAt?.getTime() ?? null,
    driveMinutes: stop.driveMinutes,
    isUnreachable: stop.unreachable,
    because: stop.because,
    ...(stop.fetches ? { fetches: stop.fetches } : {}),
    version: stop.version,
  };
}
