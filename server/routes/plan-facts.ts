import type { Sequelize, Transaction } from 'sequelize';
import type { Settings } from '@shared/contract/office';
import type { CallState } from '@shared/domain/call-state';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import type { CompartmentAtStake } from '@shared/domain/planner/loss-deadlines';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import type { RouteStopState, WorkShift } from '@shared/domain/route-rules';
import type { LearnedService } from '@shared/domain/service-times';
import type { Part, Skill } from '@shared/domain/skills';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { json, select } from '../db/sql';
import { asOfOneMoment } from '../db/transaction';
import { readSettings } from '../office/settings';
import { findStorm } from '../storms/storm-queries';
import { shiftsAhead } from '../technicians/lock-technicians';
import { technicianDtos } from '../technicians/technician-rows';
import { withBreaksDue } from './breaks-due';
import { changesSince } from './route-changes';
import { learnedVisits } from './measured-visits';
import { visitFacts, type VisitFacts } from './visit-facts';
import { lastDoors, whereIs } from './where-technicians-are';

/** Shifts that begin later are planned later: our estimate of how far a storm's night can be seen. */
const LOOK_AHEAD_MS = 24 * HOUR_MS;

export interface CallToPlan {
  readonly id: string;
  readonly state: CallState;
  readonly receivedAt: Instant;
  readonly lonLat: LonLat | null;
  /** No technician can drive there now. */
  readonly cutOff: boolean;
  readonly skills: readonly Skill[];
  readonly parts: readonly Part[];
  readonly compartments: readonly CompartmentAtStake[];
  readonly householdAtRisk: boolean;
  /** Technicians who have given it back; it is not put on their route again but by hand. */
  readonly declinedBy: readonly string[];
}

export interface StopInForce {
  readonly callId: string;
  /** The arrival that its customer was told by text. */
  readonly toldEtaAt: Instant | null;
  readonly state: RouteStopState;
  readonly locked: boolean;
  readonly arriveAt: Instant;
  readonly finishAt: Instant;
  readonly driveMinutes: number;
  readonly because: string;
}

export interface TechnicianToPlan {
  readonly id: string;
  readonly name: string;
  readonly active: boolean;
  readonly skills: readonly Skill[];
  readonly van: Readonly<Partial<Record<Part, number>>>;
  readonly home: LonLat;
  readonly at: LonLat;
  /** Not over, and beginning soon enough to be planned now. */
  readonly shifts: readonly WorkShift[];
  /** The route in force, in its order. */
  readonly stops: readonly StopInForce[];
}

/** Everything that a plan is made from, as of one moment and without a lock. */
export interface PlanFacts {
  readonly now: Instant;
  /** The routes that the plan starts from; it may be published only while they are in force. */
  readonly epoch: number;
  readonly isOpen: boolean;
  readonly settings: Settings;
  readonly technicians: readonly TechnicianToPlan[];
  /** Those that wait for a visit, and those on routes. */
  readonly calls: ReadonlyMap<string, CallToPlan>;
  readonly visits: ReadonlyMap<string, VisitFacts>;
  /** What finished visits say of the time at a stop; `null` while it does not count. */
  readonly learned: LearnedService | null;
  /** Changes that publications made to each technician's stops within the last hour. */
  readonly changesThisHour: ReadonlyMap<string, number>;
}

export function planFacts(sequelize: Sequelize, stormId: string, now: Instant): Promise<PlanFacts> {
  return asOfOneMoment(sequelize, async (tx) => {
    const storm = await findStorm(stormId, tx);
    const settings = await readSettings(sequelize, tx);
    const calls = await callsToPlan(sequelize, stormId, tx);
    return {
      now,
      epoch: storm.planEpoch ?? 0,
      isOpen: storm.state === 'open',
      settings,
      technicians: await techniciansToPlan(sequelize, stormId, now, tx),
      calls,
      visits: await visitFacts(sequelize, [...calls.keys()], now, tx),
      learned: await learnedVisits(sequelize, settings, tx),
      changesThisHour: await changesSince(sequelize, stormId, now - HOUR_MS, tx),
    };
  });
}

async function techniciansToPlan(
  sequelize: Sequelize,
  stormId: string,
  now: Instant,
  tx: Transaction,
): Promise<TechnicianToPlan[]> {
  const technicians = await technicianDtos(sequelize, 'all', tx);
  const shifts = await withBreaksDue(sequelize, await shiftsAhead(sequelize, now, tx), now, tx);
  const doors = await lastDoors(
    sequelize,
    technicians.map(({ id }) => id),
    tx,
  );
  const stops = await stopsInForce(sequelize, stormId, tx);
  return technicians.map((one) => {
    const ahead = shifts.get(one.id) ?? [];
    const whereabouts = {
      startLon: one.start[0],
      startLat: one.start[1],
      positionLon: one.position?.lonLat[0] ?? null,
      positionLat: one.position?.lonLat[1] ?? null,
      positionAt: one.position ? new Date(one.position.at) : null,
    };
    return {
      id: one.id,
      name: one.name,
      active: one.active,
      skills: one.skills,
      van: one.van,
      home: one.start,
      at: whereIs(whereabouts, doors.get(one.id), ahead, now),
      shifts: ahead.filter((shift) => shift.startsAt < now + LOOK_AHEAD_MS),
      stops: stops.get(one.id) ?? [],
    };
  });
}

async function stopsInForce(
  sequelize: Sequelize,
  stormId: string,
  tx: Transaction,
): Promise<Map<string, StopInForce[]>> {
  const rows = await select<{
    technician_id: string;
    call_id: string;
    state: RouteStopState;
    locked: number;
    told_eta_at: Date | null;
    arrive_at: Date;
    finish_at: Date;
    drive_minutes: number;
    because: string;
  }>(
    sequelize,
    `SELECT technician_id, call_id, state, locked, told_eta_at, arrive_at, finish_at, drive_minutes, because
       FROM stops WHERE storm_id = ? AND active_call IS NOT NULL ORDER BY technician_id, position`,
    [stormId],
    tx,
  );
  const byTechnician = new Map<string, StopInForce[]>();
  for (const row of rows) {
    const stops = byTechnician.get(row.technician_id) ?? [];
    byTechnician.set(row.technician_id, stops);
    stops.push({
      callId: row.call_id,
      state: row.state,
      locked: Boolean(row.locked),
      toldEtaAt: row.told_eta_at?.getTime() ?? null,
      arriveAt: row.arrive_at.getTime(),
      finishAt: row.finish_at.getTime(),
      driveMinutes: row.drive_minutes,
      because: row.because,
    });
  }
  return byTechnician;
}

async function callsToPlan(
  sequelize: Sequelize,
  stormId: string,
  tx: Transaction,
): Promise<Map<string, CallToPlan>> {
  const toVisit = "('waiting','planned','offered','accepted','travelling','on-site')";
  const calls = await select<{
    id: string;
    state: CallState;
    received_at: Date;
    lon: number | null;
    lat: number | null;
    cut_off: number;
    household_at_risk: number;
    skills: unknown;
    parts: unknown;
  }>(
    sequelize,
    `SELECT id, state, received_at, lon, lat, cut_off, household_at_risk, skills, parts FROM calls
      WHERE storm_id = ? AND state IN ${toVisit} ORDER BY number`,
    [stormId],
    tx,
  );
  const compartments = await select<{
    call_id: string;
    kind: CompartmentKind;
    value_cents: number;
    earliest_at: Date;
    likely_at: Date | null;
    save_by_at: Date | null;
  }>(
    sequelize,
    `SELECT u.call_id, k.kind, k.value_cents, k.earliest_at, k.likely_at, k.save_by_at
       FROM calls c JOIN cold_units u ON u.call_id = c.id JOIN compartments k ON k.unit_id = u.id
      WHERE c.storm_id = ? AND c.state IN ${toVisit}`,
    [stormId],
    tx,
  );
  const declines = await select<{ call_id: string; technician_id: string }>(
    sequelize,
    "SELECT DISTINCT call_id, technician_id FROM stops WHERE storm_id = ? AND state = 'declined'",
    [stormId],
    tx,
  );
  const atStake = grouped(compartments);
  const declinedBy = grouped(declines);
  return new Map(
    calls.map((call) => [
      call.id,
      {
        id: call.id,
        state: call.state,
        receivedAt: call.received_at.getTime(),
        lonLat: call.lon === null || call.lat === null ? null : [call.lon, call.lat],
        cutOff: Boolean(call.cut_off),
        householdAtRisk: Boolean(call.household_at_risk),
        skills: json<Skill[]>(call.skills),
        parts: json<Part[]>(call.parts),
        compartments: (atStake.get(call.id) ?? []).map((one) => ({
          kind: one.kind,
          valueCents: one.value_cents,
          earliestAt: one.earliest_at.getTime(),
          likelyAt: one.likely_at?.getTime() ?? null,
          saveByAt: one.save_by_at?.getTime() ?? null,
        })),
        declinedBy: (declinedBy.get(call.id) ?? []).map((one) => one.technician_id),
      },
    ]),
  );
}

function grouped<Row extends { readonly call_id: string }>(
  rows: readonly Row[],
): Map<string, Row[]> {
  const groups = new Map<string, Row[]>();
  for (const row of rows) {
    const group = groups.get(row.call_id);
    if (group) group.push(row);
    else groups.set(row.call_id, [row]);
  }
  return groups;
}
