import type { Sequelize, Transaction } from 'sequelize';
import type { MeasuredVisitsDto, Settings } from '@shared/contract/office';
import { CAUSES, type CauseId } from '@shared/domain/phone-check/causes';
import { likeliestCause } from '@shared/domain/phone-check/likeliest-cause';
import {
  learnedService,
  visitFault,
  type LearnedService,
  type MeasuredVisit,
  type ServiceFactor,
} from '@shared/domain/service-times';
import { json, select } from '../db/sql';
import { readSettings } from '../office/settings';

/** Older visits tell of other storms: our bound on how many count. */
const MOST_VISITS = 2000;

interface Measured extends MeasuredVisit {
  readonly technician: string;
}

/** The visits that count, newest first. */
async function measuredVisits(sequelize: Sequelize, tx?: Transaction): Promise<Measured[]> {
  const rows = await select<{
    technician_id: string;
    name: string;
    causes: unknown;
    units: number;
    arrived_at: Date;
    ended_at: Date;
    had_access: number;
  }>(
    sequelize,
    `SELECT s.technician_id, t.name, c.causes, s.arrived_at, s.ended_at,
            (SELECT COUNT(*) FROM cold_units u WHERE u.call_id = c.id) AS units,
            s.ended_because <> 'Finished: no access' AS had_access
       FROM stops s JOIN calls c ON c.id = s.call_id JOIN technicians t ON t.id = s.technician_id
      WHERE s.state = 'done' AND s.arrived_at IS NOT NULL AND s.ended_at IS NOT NULL
      ORDER BY s.ended_at DESC, s.id LIMIT ?`,
    [MOST_VISITS],
    tx,
  );
  return rows.map((row) => ({
    technicianId: row.technician_id,
    technician: row.name,
    cause: likeliestCause(json<string[]>(row.causes)),
    units: Number(row.units),
    arrivedAt: row.arrived_at.getTime(),
    endedAt: row.ended_at.getTime(),
    hadAccess: Boolean(row.had_access),
  }));
}

/** What was learned last. Reading every visit for each change of a route would be work for nothing. */
const learnt = new WeakMap<Sequelize, { readonly key: string; readonly learned: LearnedService }>();

/** What finished visits say, as far as the settings let it count. */
export async function learnedVisits(
  sequelize: Sequelize,
  settings: Settings,
  tx?: Transaction,
): Promise<LearnedService | null> {
  if (!settings.usesMeasuredVisits) return null;
  const [newest] = await select<{ count: number; ended_at: Date | null }>(
    sequelize,
    "SELECT COUNT(*) AS count, MAX(ended_at) AS ended_at FROM stops WHERE state = 'done'",
    [],
    tx,
  );
  const { serviceMinutes, furtherUnitPercent } = settings;
  const key = JSON.stringify([newest, serviceMinutes, furtherUnitPercent]);
  const before = learnt.get(sequelize);
  if (before?.key === key) return before.learned;
  const learned = learnedService(await measuredVisits(sequelize, tx), settings);
  learnt.set(sequelize, { key, learned });
  return learned;
}

/** The same for the manager to look at, before and after switching it on. */
export async function measuredVisitsDto(sequelize: Sequelize): Promise<MeasuredVisitsDto> {
  const settings = await readSettings(sequelize);
  const visits = await measuredVisits(sequelize);
  const learned = learnedService(visits, settings);
  const names = new Map(visits.map(({ technicianId, technician }) => [technicianId, technician]));
  const faults = new Map<string, number>();
  for (const visit of visits) {
    const why = visitFault(visit);
    if (why !== null) faults.set(why, (faults.get(why) ?? 0) + 1);
  }
  return {
    isUsed: settings.usesMeasuredVisits,
    visits: learned.visits,
    leftOut: [...faults].map(([why, count]) => ({ why, visits: count })),
    serviceMinutes: settings.serviceMinutes,
    all: { name: 'All visits', ...learned.all },
    byCause: listed(learned.byCause, (cause) => CAUSES[cause as CauseId].words),
    byTechnician: listed(learned.byTechnician, (id) => names.get(id) ?? ''),
  };
}

const listed = (
  factors: ReadonlyMap<string, ServiceFactor>,
  nameOf: (key: string) => string,
): MeasuredVisitsDto['byCause'] =>
  [...factors]
    .map(([key, factor]) => ({ name: nameOf(key), ...factor }))
    .sort((a, b) => b.visits - a.visits || a.name.localeCompare(b.name));
