import type { Address, HouseholdFound } from '@shared/contract/calls';
import type { Instant } from '@shared/domain/instant';
import type { Context } from '../context';
import { select } from '../db/sql';
import type { RegionInUse } from '../region/region-in-use';
import { isWithin } from '../region/is-within';
import { callRows } from './call-rows';
import { HouseholdRecord } from './household-record';

/** What is known of whoever rings, from the number alone. */
export async function findHousehold(
  { sequelize, region }: Pick<Context, 'sequelize' | 'region'>,
  stormId: string,
  phone: string,
  now: Instant,
): Promise<HouseholdFound> {
  const household = await HouseholdRecord.findOne({ where: { phone } });
  if (!household) return { household: null, openCall: null, earlierCalls: 0 };
  const calls = await select<{ id: string; is_open: number }>(
    sequelize,
    `SELECT id, storm_id = ? AND open_household IS NOT NULL AS is_open
       FROM calls WHERE household_id = ?`,
    [stormId, household.id],
  );
  const open = calls.find((call) => Boolean(call.is_open));
  const [openCall] = open ? await callRows(sequelize, { ids: [open.id] }, now) : [];
  const optedOut = await select(sequelize, 'SELECT phone FROM opt_outs WHERE phone = ?', [phone]);
  return {
    household: {
      id: household.id,
      name: household.name,
      phone: household.phone,
      address: inRegion(household.address(), region),
      language: household.language,
      mayText: household.mayText,
      optedOut: optedOut.length > 0,
    },
    openCall: openCall ?? null,
    earlierCalls: calls.length - (open ? 1 : 0),
  };
}

/** A place that was noted in another region is looked up in this one by its words; not found, it is open. */
function inRegion(address: Address, region: RegionInUse): Address {
  if (address.lonLat === null || isWithin(address.lonLat, region.dto.bbox)) return address;
  const found = region.locate(address.text);
  return found
    ? { ...address, lonLat: found.lonLat, kind: found.kind }
    : { ...address, lonLat: null, kind: 'unlocated' };
}
