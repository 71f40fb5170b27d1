import type { CallPattern, ForecastCall, ForecastFacts } from '@shared/domain/forecast/facts';
import { USUAL_PATTERNS } from '@shared/domain/forecast/usual-patterns';
import { HOUR_MS } from '@shared/domain/instant';
import { USUAL_SERVICE, ZONE_MS, type TrueCall, type TrueStorm } from './storm-truth';

/** What a company knows of a true storm at its present moment: nothing of what is still to come. */
export function factsOf(storm: TrueStorm): ForecastFacts {
  const { now, seen } = storm;
  const rung = storm.calls.filter(({ state }) => state !== 'later');
  const open = storm.openCalls;
  const number = new Map(open.map((call, i) => [call, i]));
  return {
    now,
    since: storm.start,
    zoneOffsetMs: ZONE_MS,
    calls: open.map(toForecastCall),
    patterns: [...rung.map(patternOf), ...USUAL_PATTERNS],
    stillToLose: rung
      .filter(({ state, coolAt }) => state === 'settled' && coolAt === Infinity)
      .map((call) => atStake(call).filter(({ saveByAt }) => saveByAt !== null && saveByAt > now)),
    areas: storm.areas.map(({ outAt, backAt }, area) => ({
      outAt,
      backAt: backAt <= now ? backAt : null,
      ringsAt: rung.filter((call) => call.area === area).map(({ at }) => at),
    })),
    otherRingsAt: rung.filter(({ area }) => area === null).map(({ at }) => at),
    technicians: storm.technicians.map((one, i) => ({
      id: String(i),
      shifts: one.shifts.filter(({ endsAt }) => endsAt > now),
      skills: 7,
      van: one.van,
      route: one.call ? [number.get(one.call)!] : [],
      underWay: one.call
        ? {
            drivingSince: one.leftAt,
            atDoorSince: one.arrivesAt <= now ? one.arrivesAt : null,
          }
        : null,
    })),
    phone: {
      staff: storm.phoneStaff,
      settledRunning: seen.runs,
      settledOtherwise: seen.other,
      toVisit: seen.toVisit,
      handleMinutes: seen.handle,
    },
    visits: {
      usualServiceMinutes: USUAL_SERVICE,
      usualDriveMinutes: 15,
      serviceMinutes: seen.service,
      driveMinutes: seen.drive,
      restored: seen.restored,
      settledOtherwise: seen.otherVisits,
      noAccess: seen.noAccess,
      partsOnOrder: seen.ordered,
    },
    waiting: { ended: seen.ended, hours: seen.waitingMinutes / 60 },
    hasVanStock: true,
  };
}

const atStake = (call: TrueCall) =>
  call.compartments.map(({ valueCents, hoursLeft, isMedicine }) => ({
    valueCents,
    isMedicine,
    saveByAt: hoursLeft === null ? null : call.at + hoursLeft * HOUR_MS,
  }));

function toForecastCall(call: TrueCall): ForecastCall {
  const stage =
    call.state === 'parts'
      ? 'parts-on-order'
      : call.state === 'away'
        ? 'no-access'
        : call.state === 'line' || call.state === 'phone'
          ? 'phone'
          : 'visit';
  return {
    receivedAt: call.at,
    stage,
    checkingSince: call.state === 'phone' ? call.phoneFrom : null,
    compartments: atStake(call),
    skills: 0,
    parts: call.second ? [] : call.chances,
  };
}

const patternOf = ({ compartments, chances }: TrueCall): CallPattern => ({
  compartments,
  skills: 0,
  parts: chances,
  weight: 1,
});
