import type { ForecastFacts } from './facts';

const plural = (count: number, one: string, more: string): string =>
  `${String(count)} ${count === 1 ? one : more}`;

/** What a forecast rests on, in sentences for the screen: what was measured, and what is taken for granted. */
export function restsOn(facts: ForecastFacts): readonly string[] {
  const { areas, phone, visits, technicians, now } = facts;
  const out = areas.filter(({ backAt }) => backAt === null || backAt > now).length;
  const working = technicians.filter(({ shifts }) => shifts.length > 0).length;
  const checks = phone.settledRunning + phone.settledOtherwise + phone.toVisit;
  return [
    'Empty: nobody is left to speak with or to drive to. Calls that wait for a part on order, or for somebody to be at home, are left out of that; the curve counts them as open.',
    `Calls to come: from ${plural(areas.length, 'outage area', 'outage areas')}, ${String(out)} still out, by how the households of this storm have rung so far.`,
    checks === 0
      ? 'Settled by phone: our estimate of three in ten, until calls have been checked.'
      : `Settled by phone: ${String(phone.settledRunning + phone.settledOtherwise)} of ${plural(checks, 'call', 'calls')} checked so far.`,
    visits.serviceMinutes.length === 0
      ? `Visits: ${String(Math.round(visits.usualServiceMinutes))} minutes as routes count them, until visits have been measured; drives: ${String(Math.round(visits.usualDriveMinutes))} minutes.`
      : `Visits and drives: as measured on ${plural(visits.serviceMinutes.length, 'visit', 'visits')}.`,
    working === 0
      ? 'Nobody has a shift ahead, so no visit is counted.'
      : `Shifts of ${plural(working, 'technician', 'technicians')}; after the last one entered nobody works. Routes in force are driven as they stand until the shift ends.`,
    `${plural(phone.staff, 'person', 'people')} on the phones around the clock, as in the last two hours.`,
    facts.hasVanStock
      ? 'Each van is filled up before each later shift to what it carries now, with two of each part at least.'
      : 'No van has parts entered: one visit in twelve or so orders a part, our estimate.',
    ...(facts.store && facts.hasVanStock
      ? [
          'A part that a van lacks is fetched at the store on the way: our estimate of a drive more and the minutes there.',
        ]
      : []),
    'Weather and the utility’s next plans are not foreseen.',
  ];
}
