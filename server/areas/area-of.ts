import type { Transaction } from 'sequelize';
import type { LonLat } from '@shared/contract/common';
import { isInRing } from '@shared/domain/point-in-ring';
import { AreaRecord } from './area-record';

/**
 * The outage area around a point. Where areas overlap the one whose power comes back last wins,
 * for nobody inside both has power before that; one that is still out comes last of all.
 */
export async function areaAround(
  tx: Transaction,
  stormId: string,
  point: LonLat,
): Promise<AreaRecord | null> {
  const areas = await AreaRecord.findAll({ where: { stormId }, transaction: tx });
  return lastBack(areas.filter((area) => isInRing(point, area.outline())));
}

export function lastBack(areas: readonly AreaRecord[]): AreaRecord | null {
  const back = (area: AreaRecord): number => area.backAt?.getTime() ?? Infinity;
  return areas.reduce<AreaRecord | null>(
    (last, area) => (last === null || back(area) > back(last) ? area : last),
    null,
  );
}
