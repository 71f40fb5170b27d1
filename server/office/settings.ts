import type { Sequelize, Transaction } from 'sequelize';
import { z } from 'zod';
import { Settings } from '@shared/contract/office';
import { DEFAULT_VALUES } from '@shared/domain/food-value';
import { DEFAULT_LEAST_GAIN, DEFAULT_PRICES } from '@shared/domain/planner/plan-prices';
import { DEFAULT_REACH_MINUTES, DEFAULT_WEIGHTS } from '@shared/domain/urgency';
import { select } from '../db/sql';

/** Used until the manager says otherwise, and for whatever a stored set does not name yet. */
export const DEFAULT_SETTINGS: Omit<Settings, 'version'> = {
  companyName: 'Breakwater Appliance Repair',
  companyPhone: '+12525550100',
  etaMovedMinutes: 15,
  // 47 CFR 64.1200(c)(1) (FCC): solicitations only from 8 a.m. to 9 p.m. at the called party's
  // place. Ours are no solicitations; the same hours are kept out of courtesy.
  quietFromMinute: 21 * 60,
  quietUntilMinute: 8 * 60,
  claimMinutes: 10,
  // Ballou, Rahardja and Sakai, Transportation Research A 36(9), 2002, give 1.20 for the US
  // (from memory); coasts run higher, and the cautious side promises less.
  circuity: 1.35,
  // Our estimate for mixed town and country roads after a storm.
  speedMph: 25,
  // Our estimates, no source: what is left of a road's usual speed at each time of day, and in a storm
  // with wet roads, branches and lights out on top of it.
  morningPercent: 85,
  dayPercent: 95,
  eveningPercent: 85,
  nightPercent: 100,
  stormPercent: 85,
  // Off until a manager has looked at what the drives say.
  usesMeasuredSpeeds: false,
  measuredFrom: null,
  // Our estimate; the company's own times replace it.
  serviceMinutes: 45,
  // Our estimate: the way, the talk and the tools are there already.
  furtherUnitPercent: 60,
  // Off until a manager has looked at what the visits say.
  usesMeasuredVisits: false,
  shopPlace: null,
  shopMinutes: 10,
  ...DEFAULT_PRICES,
  medicineWeight: DEFAULT_WEIGHTS.medicine,
  changesPerHour: 6,
  // Nothing happens by itself until a manager wants it.
  automaticRoutes: 'off',
  automaticGainDollars: DEFAULT_LEAST_GAIN,
  automaticKeepMinutes: 45,
  householdWeight: DEFAULT_WEIGHTS.household,
  reachMinutes: DEFAULT_REACH_MINUTES,
  ...DEFAULT_VALUES,
  pocketKm: 1,
  pocketCalls: 4,
};

export async function readSettings(sequelize: Sequelize, tx?: Transaction): Promise<Settings> {
  const [row] = await select<{ body: string; version: number }>(
    sequelize,
    'SELECT body, version FROM settings WHERE id = 1',
    [],
    tx,
  );
  const stored = z.looseObject({}).parse(row ? JSON.parse(row.body) : {});
  return Settings.parse({ ...DEFAULT_SETTINGS, ...stored, version: row?.version ?? 0 });
}
