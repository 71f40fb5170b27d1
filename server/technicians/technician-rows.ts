import { Op, type Sequelize, type Transaction } from 'sequelize';
import type { TechnicianDto } from '@shared/contract/routes';
import { ShiftRecord, TechnicianRecord } from './technician-record';

/** Technicians with their shifts, by name. */
export async function technicianDtos(
  _sequelize: Sequelize,
  which: { readonly ids: readonly string[] } | 'all',
  tx?: Transaction,
): Promise<TechnicianDto[]> {
  if (which !== 'all' && which.ids.length === 0) return [];
  const transaction = tx ? { transaction: tx } : {};
  const records = await TechnicianRecord.findAll({
    ...(which === 'all' ? {} : { where: { id: { [Op.in]: [...which.ids] } } }),
    order: [
      ['name', 'ASC'],
      ['id', 'ASC'],
    ],
    ...transaction,
  });
  const shifts = await ShiftRecord.findAll({
    where: { technicianId: { [Op.in]: records.map((record) => record.id) } },
    order: [['startsAt', 'ASC']],
    ...transaction,
  });
  return records.map((record) =>
    toTechnicianDto(
      record,
      shifts.filter((shift) => shift.technicianId === record.id),
    ),
  );
}

export const toShift = ({
  startsAt,
  endsAt,
  breaks,
}: ShiftRecord): TechnicianDto['shifts'][number] => ({
  startsAt: startsAt.getTime(),
  endsAt: endsAt.getTime(),
  ...(breaks.length > 0 ? { breaks: breaks.map((one) => ({ ...one })) } : {}),
});

function toTechnicianDto(record: TechnicianRecord, shifts: readonly ShiftRecord[]): TechnicianDto {
  const { positionLon, positionLat, positionAt } = record;
  return {
    id: record.id,
    name: record.name,
    phone: record.phone,
    skills: record.skills,
    van: record.van,
    start: [record.startLon, record.startLat],
    shifts: shifts.map(toShift),
    position:
      positionLon === null || positionLat === null || positionAt === null
        ? null
        : {
            lonLat: [positionLon, positionLat],
            at: positionAt.getTime(),
            accuracyMeters: record.positionAccuracyMeters,
          },
    active: record.active,
    version: record.version,
  };
}
