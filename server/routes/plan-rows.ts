import { Op, type Sequelize, type Transaction } from 'sequelize';
import type { PlanDto } from '@shared/contract/routes';
import { type AutomaticDone, automaticDoneOf } from '@shared/domain/automatic-done';
import { PlanRecord } from './stop-record';

/** What of a plan is stored as JSON. */
export type PlanBody = Pick<
  PlanDto,
  'routes' | 'unplanned' | 'figures' | 'inForce' | 'drivesFrom' | 'gainCents' | 'automatic'
>;

export function toPlanDto(record: PlanRecord): PlanDto {
  return {
    id: record.id,
    stormId: record.stormId,
    state: record.state,
    proposedAt: record.proposedAt.getTime(),
    proposedBy: record.proposedBy,
    ...(JSON.parse(record.body) as PlanBody),
    version: record.version,
  };
}

export async function planDtos(
  _sequelize: Sequelize,
  which: { readonly ids: readonly string[] },
  tx?: Transaction,
): Promise<PlanDto[]> {
  if (which.ids.length === 0) return [];
  const records = await PlanRecord.findAll({
    where: { id: { [Op.in]: [...which.ids] } },
    ...(tx ? { transaction: tx } : {}),
  });
  return records.map(toPlanDto);
}

/** The newest proposal that nobody has published or discarded. */
export async function proposedPlan(stormId: string, tx?: Transaction): Promise<PlanDto | null> {
  const record = await PlanRecord.findOne({
    where: { stormId, state: 'proposed' },
    order: [['proposedAt', 'DESC']],
    ...(tx ? { transaction: tx } : {}),
  });
  return record && toPlanDto(record);
}

/** What the automatic mode did, if the plan that was published last is its own. */
export async function lastAutomatic(
  stormId: string,
  tx?: Transaction,
): Promise<AutomaticDone | null> {
  const record = await PlanRecord.findOne({
    where: { stormId, state: 'published' },
    order: [['proposedAt', 'DESC']],
    ...(tx ? { transaction: tx } : {}),
  });
  return record && automaticDoneOf(toPlanDto(record));
}
