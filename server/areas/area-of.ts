import type { Transaction } from 'sequelize';
import type { LonLat } from '@shared/contract/common';
import { lastBack } from '@shared/domain/outage-area';
import { shapeFinder } from '@shared/domain/outage-shape';
import { AreaRecord } from './area-record';

/** An area with its ground read and its times as moments. */
const spanOf = (area: AreaRecord) => ({
  area,
  shape: area.ground(),
  outAt: area.outAt.getTime(),
  backAt: area.backAt?.getTime() ?? null,
});

/** Answers for points of a storm which outage area counts there. */
export async function areasOf(
  tx: Transaction,
  stormId: string,
): Promise<(point: LonLat) => AreaRecord | null> {
  const areas = await AreaRecord.findAll({ where: { stormId }, transaction: tx });
  const around = shapeFinder(areas.map(spanOf));
  return (point) => lastBack(around(point))?.area ?? null;
}

/** As `areasOf`, for one point. */
export const areaAround = async (
  tx: Transaction,
  stormId: string,
  point: LonLat,
): Promise<AreaRecord | null> => (await areasOf(tx, stormId))(point);
