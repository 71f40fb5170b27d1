import type { DrainDto } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import { duration, money } from '../core/zone';
import { forecastOf, settledOf, totalsOf } from './drain-curves';

/** The forecast in a sentence, without its assumption. `clock` tells a moment as the region's time. */
export function forecastWords(drain: DrainDto, clock: (at: Instant) => string): string {
  const { arrivalsPerHour, settledPerHour, emptyAt } = drain.forecast;
  switch (forecastOf(drain).kind) {
    case 'is-empty':
      return 'Nothing is open.';
    case 'empties':
      return emptyAt === null ? '' : `Empty ${clock(emptyAt)}, in ${duration(emptyAt - drain.at)}.`;
    case 'grows':
      return `Not empty at this rate: it grows by ${rate(arrivalsPerHour - settledPerHour)} an hour.`;
    case 'stands':
      return 'Not empty at this rate: it stands still.';
  }
}

/** On what the forecast rests. */
export function assumptionWords({ forecast }: DrainDto): string {
  const words = forecast.assumption.replace(/^Never at this rate: /, 'Counted: ');
  return `${words}. It knows nothing of the night, of shifts that end or of parts that run out.`;
}

/** What the backlog's picture shows, for someone who does not see it. */
export function backlogWords(
  drain: DrainDto,
  clock: (at: Instant) => string,
  isOver: boolean,
): string {
  const now = totalsOf(drain);
  const most = drain.series.reduce((a, b) => (b.open > a.open ? b : a), now);
  const peak =
    most.open > now.open ? ` The most at once were ${most.open}, at ${clock(most.at)}.` : '';
  return (
    `Calls over time, from ${clock(drain.series[0]?.at ?? drain.at)} to ${clock(drain.at)}: ` +
    `${now.arrivals} came in, ${settledOf(now)} were settled, ${now.open} are open.${peak} ` +
    `${isOver ? 'The storm is closed.' : forecastWords(drain, clock)} ` +
    `The same figures stand in the table below.`
  );
}

/** What the picture of the value shows. */
export function valueWords(drain: DrainDto): string {
  const { valueAtRiskCents, savedCents, lostCents } = totalsOf(drain);
  return (
    `Value of what the callers keep cold: ${money(savedCents)} saved, ` +
    `${money(valueAtRiskCents)} at risk, ${money(lostCents)} lost. ` +
    `The same figures stand in the table below.`
  );
}

const rate = (perHour: number): string => String(Math.round(perHour * 10) / 10);
