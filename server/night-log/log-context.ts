import type { ColumnMap } from '@shared/domain/night-log/column-map';
import { HOUR_MS } from '@shared/domain/instant';
import { AreaRecord } from '../areas/area-record';
import type { Context } from '../context';
import { findStorm } from '../storms/storm-queries';
import type { LogToRead } from './read-log';

/** Where no area says when power went: calls may have come in this long before the storm was opened here. */
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
  const outageFrom = outs.length > 0 ? Math.min(...outs) : null;
  return {
    // Its own bytes, without the pool that a Buffer may lie in.
    bytes: new Uint8Array(bytes),
    columns,
    zone: context.region.dto.timeZone,
    // Times without a day are placed from its start on, and nobody rings about a cut that is still to come.
    night: {
      from: outageFrom ?? storm.openedAt.getTime() - BEFORE_OPENING_MS,
      to: context.clock(),
    },
    outage: outageFrom === null ? null : { from: outageFrom, to: last },
    areaCode: context.config.defaultAreaCode,
    cities: context.region.cities,
  };
}
