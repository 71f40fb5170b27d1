import { DateTime } from 'luxon';
import { isSettled, type CallState } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import type {
  CallPattern,
  ForecastCall,
  ForecastFacts,
  ForecastTechnician,
  PartChances,
} from '@shared/domain/forecast/facts';
import { seenOf, stageOf, visitTimes } from '@shared/domain/forecast/seen';
import { USUAL_PATTERNS } from '@shared/domain/forecast/usual-patterns';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { causesOfVisit, partChances } from '@shared/domain/phone-check/part-chances';
import { isUnderWay } from '@shared/domain/route-rules';
import { PARTS, SKILLS, type Skill } from '@shared/domain/skills';
import type { Context } from '../context';
import { asOfOneMoment } from '../db/transaction';
import { readSettings } from '../office/settings';
import { withBreaksDue } from '../routes/breaks-due';
import { learnedVisits } from '../routes/measured-visits';
import { visitFacts } from '../routes/visit-facts';
import { findStorm } from '../storms/storm-queries';
import { shiftsAhead } from '../technicians/lock-technicians';
import { technicianDtos } from '../technicians/technician-rows';
import {
  areasAhead,
  callsAhead,
  dispatcherCount,
  histories,
  stopsAhead,
  type CallAhead,
  type StopAhead,
} from './forecast-rows';
import { groupedBy } from './grouped-by';
import { usualDrive, usualWork } from './usual-visits';

/** Everything that a forecast is made from, as of one moment. @throws Refusal `not-found`, `storm-closed` */
export function forecastFacts(context: Context, stormId: string): Promise<ForecastFacts> {
  const { sequelize, region } = context;
  return asOfOneMoment(sequelize, async (tx) => {
    const storm = await findStorm(stormId, tx);
    if (storm.state !== 'open')
      throw new Refusal('storm-closed', 'The storm is closed: nothing lies ahead of it.');
    const now = context.clock();
    const settings = await readSettings(sequelize, tx);
    const calls = await callsAhead(sequelize, stormId, tx);
    const stops = await stopsAhead(sequelize, stormId, tx);
    const changes = await histories(sequelize, stormId, tx);
    const technicians = await technicianDtos(sequelize, 'all', tx);
    const shifts = await withBreaksDue(sequelize, await shiftsAhead(sequelize, now, tx), now, tx);
    const areas = await areasAhead(sequelize, stormId, tx);
    const seen = seenOf(changes.values(), now);
    const staff = seen.phone.people || (await dispatcherCount(sequelize, tx));

    const counted = calls.filter(({ state }) => state !== 'duplicate');
    const open = calls.filter(({ state }) => !isSettled(state));
    const number = new Map(open.map(({ id }, i) => [id, i]));
    const inForce = stops.filter(({ state }) => state !== 'done');
    const learned = await learnedVisits(sequelize, settings, tx);
    const visits = await visitFacts(sequelize, [...number.keys()], now, tx);
    const work = usualWork([...number.keys()], visits, settings, learned);
    const doors = open.flatMap(({ state, lonLat }) =>
      stageOf(state) === 'visit' && lonLat ? [lonLat] : [],
    );
    const routes = groupedBy(inForce, ({ technicianId }) => technicianId);
    const { driveMinutes, serviceMinutes } = visitTimes(
      stops.flatMap(({ technicianId, travelAt, arrivedAt, endedAt }) =>
        arrivedAt === null || endedAt === null
          ? []
          : { technicianId, drivingSince: travelAt, arrivedAt, endedAt },
      ),
    );
    return {
      now,
      since: Math.min(storm.openedAt.getTime(), calls[0]?.receivedAt ?? now),
      zoneOffsetMs: DateTime.fromMillis(now, { zone: region.dto.timeZone }).offset * MINUTE_MS,
      calls: open.map((call, i) => ({
        ...toForecastCall(call, checkingSince(call.state, changes.get(call.id))),
        workTimes: work.workTimes[i] ?? 1,
      })),
      patterns: [...counted.map(patternOf), ...USUAL_PATTERNS],
      stillToLose: counted
        .filter(({ state, restoredAt }) => isSettled(state) && restoredAt === null)
        .map(atStake)
        .map((compartments) => compartments.filter(({ saveByAt }) => (saveByAt ?? 0) > now)),
      areas: areas.map(({ id, outAt, backAt }) => ({
        outAt,
        backAt,
        ringsAt: calls.filter(({ areaId }) => areaId === id).map(({ receivedAt }) => receivedAt),
      })),
      otherRingsAt: calls
        .filter(({ areaId }) => areaId === null)
        .map(({ receivedAt }) => receivedAt),
      technicians: technicians
        .filter(({ active, id }) => active || routes.has(id))
        .map((one): ForecastTechnician => {
          const route = (routes.get(one.id) ?? []).filter(({ callId }) => number.has(callId));
          return {
            id: one.id,
            shifts: one.active ? (shifts.get(one.id) ?? []) : [],
            skills: bitsOf(one.skills),
            pace: learned?.byTechnician.get(one.id)?.factor ?? 1,
            van: PARTS.map((part) => one.van[part] ?? 0),
            route: route.map(({ callId }) => number.get(callId)!),
            underWay: underWay(route[0]),
          };
        }),
      phone: {
        staff: Math.max(1, staff),
        settledRunning: seen.phone.settledRunning,
        settledOtherwise: seen.phone.settledOtherwise,
        toVisit: seen.phone.toVisit,
        handleMinutes: seen.phone.handleMinutes,
      },
      visits: {
        usualServiceMinutes: work.usualServiceMinutes,
        usualDriveMinutes: usualDrive(context, settings, inForce, doors),
        driveMinutes,
        serviceMinutes,
        ...seen.outcomes,
      },
      waiting: seen.waiting,
      hasVanStock: technicians.some(({ van }) => Object.values(van).some((count) => count > 0)),
      ...(settings.shopPlace ? { store: { minutes: settings.shopMinutes } } : {}),
    };
  });
}

/** What a visit to this call may need. Nothing once its part is on order: that one comes along. */
export const chancesOf = ({ unit, answers }: Pick<CallAhead, 'unit' | 'answers'>) =>
  unit === null ? [] : partChances(causesOfVisit(answers, unit));

const bitsOf = (skills: readonly Skill[]): number =>
  SKILLS.reduce((bits, skill, i) => (skills.includes(skill) ? bits | (1 << i) : bits), 0);

const numbered = (call: CallAhead): PartChances =>
  chancesOf(call).map(([part, chance]) => [PARTS.indexOf(part), chance]);

const atStake = ({ compartments }: CallAhead) =>
  compartments.map(({ kind, valueCents, saveByAt }) => ({
    valueCents,
    saveByAt,
    isMedicine: kind === 'medicine',
  }));

function toForecastCall(call: CallAhead, since: Instant | null): ForecastCall {
  return {
    receivedAt: call.receivedAt,
    stage: stageOf(call.state) ?? 'visit',
    checkingSince: since,
    compartments: atStake(call),
    skills: bitsOf(call.skills),
    parts: numbered(call),
  };
}

/** Since when a call is being checked; null while it is not. */
const checkingSince = (
  state: CallState,
  history: readonly { readonly at: Instant; readonly to: CallState }[] = [],
): Instant | null =>
  state === 'checking' ? (history.findLast(({ to }) => to === 'checking')?.at ?? null) : null;

function patternOf(call: CallAhead): CallPattern {
  return {
    compartments: atStake(call).map(({ saveByAt, ...one }) => ({
      ...one,
      hoursLeft: saveByAt === null ? null : (saveByAt - call.receivedAt) / HOUR_MS,
    })),
    skills: bitsOf(call.skills),
    parts: numbered(call),
    weight: 1,
  };
}

function underWay(stop: StopAhead | undefined): ForecastTechnician['underWay'] {
  if (!stop || stop.state === 'done' || !isUnderWay(stop.state)) return null;
  return {
    drivingSince: stop.travelAt,
    atDoorSince: stop.state === 'on-site' ? stop.arrivedAt : null,
  };
}
