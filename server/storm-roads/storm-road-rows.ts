import { Op, type Transaction, type WhereOptions } from 'sequelize';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { StormRoadRecord } from './storm-road-record';

/** A lifting can be taken back for so long; our estimate of a shift and the talk after it. */
const LIFTED_SHOWN_MS = 12 * HOUR_MS;

/** Storm roads by id, or of a storm without those that were lifted long ago, by name. */
export async function stormRoadDtos(
  which: { readonly ids: readonly string[] } | { readonly stormId: string; readonly now: Instant },
  tx?: Transaction,
): Promise<StormRoadDto[]> {
  if ('ids' in which && which.ids.length === 0) return [];
  const where: WhereOptions =
    'ids' in which
      ? { id: { [Op.in]: [...which.ids] } }
      : {
          stormId: which.stormId,
          [Op.or]: [
            { liftedAt: null },
            { liftedAt: { [Op.gt]: new Date(which.now - LIFTED_SHOWN_MS) } },
          ],
        };
  const records = await StormRoadRecord.findAll({
    where,
    order: [
      ['name', 'ASC'],
      ['id', 'ASC'],
    ],
    ...(tx ? { transaction: tx } : {}),
  });
  return records.map(toStormRoadDto);
}

export function toStormRoadDto(record: StormRoadRecord): StormRoadDto {
  return {
    id: record.id,
    stormId: record.stormId,
    kind: record.kind,
    state: record.state,
    name: record.name,
    notes: record.notes,
    shape: record.drawn(),
    startsAt: record.startsAt.getTime(),
    endsAt: record.endsAt?.getTime() ?? null,
    speedShare: record.speedShare ?? null,
    by: record.madeBy,
    at: record.madeAt.getTime(),
    liftedAt: record.liftedAt?.getTime() ?? null,
    canUndo: record.changes().length > 0,
    version: record.version,
  };
}
