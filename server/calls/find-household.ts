import type { Sequelize } from 'sequelize';
import type { HouseholdFound } from '@shared/contract/calls';
import type { Instant } from '@shared/domain/instant';
import { select } from '../db/sql';
import { callRows } from './call-rows';
import { HouseholdRecord } from './household-record';

/** What is known of whoever rings, from the number alone. */
export async function findHousehold(
  sequelize: Sequelize,
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
      address: household.address(),
      language: household.language,
      mayText: household.mayText,
      optedOut: optedOut.length > 0,
    },
    openCall: openCall ?? null,
    earlierCalls: calls.length - (open ? 1 : 0),
  };
}
