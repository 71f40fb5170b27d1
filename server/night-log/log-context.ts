import type { ColumnMap } from '@shared/domain/night-log/column-map';
import { HOUR_MS } from '@shared/domain/instant';
import { AreaRecord } from '../areas/area-record';
import type { Context } from '../context';
import { findStorm } from '../storms/storm-queries';
import type { LogToRead } from './read-log';

/** Calls of a storm may have come in from this long before somebody opened it here. */
const BEFORE_OPENING_MS = 48 * HOUR_MS;

/** A log with what its reader has to know of the storm. */
export async function logToRead(
  context: Context,
  stormId: string,
  bytes: Uint8Array,
  columns: ColumnMap | null,
): Promise<LogToRead> {
  const storm = await findStorm(stormId);
  const areas = await AreaRecord.findAll({ where: { stormId } });
  const outs = areas.map((area) => area.outAt.getTime());
  const backs = areas.map((area) => area.backAt?.getTime() ?? null);
  const last = backs.includes(null) ? null : Math.max(...backs.flatMap((at) => at ?? []));
  return {
    // Its own bytes, without the pool that a Buffer may lie in.
    bytes: new Uint8Array(bytes),
    columns,
    zone: context.region.dto.timeZone,
    night: { from: storm.openedAt.getTime() - BEFORE_OPENING_MS, to: context.clock() },
    outage: outs.length > 0 ? { from: Math.min(...outs), to: last } : null,
    areaCode: context.config.defaultAreaCode,
    cities: context.region.cities,
  };
}
