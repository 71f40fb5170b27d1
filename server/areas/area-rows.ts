import { Op, type Sequelize, type Transaction } from 'sequelize';
import type { AreaDto } from '@shared/contract/areas';
import { AreaRecord } from './area-record';

/** Outage areas by id or of a storm, by name. */
export async function areaDtos(
  _sequelize: Sequelize,
  which: { readonly ids: readonly string[] } | { readonly stormId: string },
  tx?: Transaction,
): Promise<AreaDto[]> {
  if ('ids' in which && which.ids.length === 0) return [];
  const records = await AreaRecord.findAll({
    where: 'ids' in which ? { id: { [Op.in]: [...which.ids] } } : { stormId: which.stormId },
    order: [['name', 'ASC']],
    ...(tx ? { transaction: tx } : {}),
  });
  return records.map(toAreaDto);
}

export function toAreaDto(record: AreaRecord): AreaDto {
  return {
    id: record.id,
    stormId: record.stormId,
    name: record.name,
    shape: record.ground(),
    outAt: record.outAt.getTime(),
    backAt: record.backAt?.getTime() ?? null,
    version: record.version,
  };
}
