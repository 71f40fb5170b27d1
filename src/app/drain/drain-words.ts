import type { OutlookDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import { money } from '../core/zone';
import { emptyWords } from './ahead/outlook-words';
import { settledOf, totalsOf } from './drain-curves';

/** What the backlog's picture shows, for someone who does not see it. */
export function backlogWords(
  drain: DrainDto,
  clock: (at: Instant) => string,
  outlook: OutlookDto | null,
): string {
  const now = totalsOf(drain);
  const most = drain.series.reduce((a, b) => (b.open > a.open ? b : a), now);
  const peak =
    most.open > now.open ? ` The most at once were ${most.open}, at ${clock(most.at)}.` : '';
  return (
    `Calls over time, from ${clock(drain.series[0]?.at ?? drain.at)} to ${clock(drain.at)}: ` +
    `${now.arrivals} came in, ${settledOf(now)} were settled, ${now.open} are open.${peak} ` +
    `${outlook ? emptyWords(outlook, drain, clock) : 'There is no forecast.'} ` +
    `The same figures stand in the tables below.`
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
