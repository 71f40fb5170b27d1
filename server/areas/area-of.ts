import type { Transaction } from 'sequelize';
import type { LonLat } from '@shared/contract/common';
import { lastBack } from '@shared/domain/outage-area';
import { isInRing } from '@shared/domain/point-in-ring';
import { AreaRecord } from './area-record';

/** An area with its outline read and its times as moments. */
export const spanOf = (area: AreaRecord) => ({
  area,
  ring: area.outline(),
  outAt: area.outAt.getTime(),
  backAt: area.backAt?.getTime() ?? null,
});

/** The outage area that counts around a point. */
export async function areaAround(
  tx: Transaction,
  stormId: string,
  point: LonLat,
): Promise<AreaRecord | null> {
  const areas = await AreaRecord.findAll({ where: { stormId }, transaction: tx });
  return areaAmong(areas.map(spanOf), point);
}

/** As `areaAround`, for many points among the same areas. */
export const areaAmong = (
  spans: readonly ReturnType<typeof spanOf>[],
  point: LonLat,
): AreaRecord | null => lastBack(spans.filter(({ ring }) => isInRing(point, ring)))?.area ?? null;
