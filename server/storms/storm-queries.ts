import type { Sequelize, Transaction } from 'sequelize';
import type { StormDto } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import { StormRecord } from './storm-record';

export function toStormDto(record: StormRecord): StormDto {
  return {
    id: record.id,
    name: record.name,
    state: record.state,
    openedAt: record.openedAt.getTime(),
    closedAt: record.closedAt?.getTime() ?? null,
    version: record.version,
  };
}

/** @throws Refusal `not-found` */
export async function findStorm(id: string, tx?: Transaction): Promise<StormRecord> {
  const record = await StormRecord.findByPk(id, tx ? { transaction: tx } : {});
  if (!record) throw new Refusal('not-found', 'There is no such storm.');
  return record;
}

/** The storm, if its calls and routes may still change. @throws Refusal `not-found`, `storm-closed` */
export async function findOpenStorm(id: string, tx?: Transaction): Promise<StormRecord> {
  return refuseIfClosed(await findStorm(id, tx));
}

/** As `findOpenStorm`, and locked against other commands that count on it. */
export async function lockOpenStorm(id: string, tx: Transaction): Promise<StormRecord> {
  return refuseIfClosed(await lockStorm(id, tx));
}

/** @throws Refusal `not-found` */
export async function lockStorm(id: string, tx: Transaction): Promise<StormRecord> {
  const record = await StormRecord.findByPk(id, { transaction: tx, lock: tx.LOCK.UPDATE });
  if (!record) throw new Refusal('not-found', 'There is no such storm.');
  return record;
}

function refuseIfClosed(record: StormRecord): StormRecord {
  if (record.state !== 'open')
    throw new Refusal('storm-closed', `The storm "${record.name}" is closed.`);
  return record;
}

export async function stormDto(
  _sequelize: Sequelize,
  id: string,
  tx?: Transaction,
): Promise<StormDto> {
  return toStormDto(await findStorm(id, tx));
}

export async function openStorm(tx?: Transaction): Promise<StormDto | null> {
  const record = await StormRecord.findOne({
    where: { state: 'open' },
    ...(tx ? { transaction: tx } : {}),
  });
  return record && toStormDto(record);
}

export async function listStorms(): Promise<StormDto[]> {
  const records = await StormRecord.findAll({ order: [['openedAt', 'DESC']] });
  return records.map(toStormDto);
}
