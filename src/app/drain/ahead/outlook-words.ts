import type { OutlookDto, WhatIfDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { duration, money } from '../../core/zone';
import { totalsOf } from '../drain-curves';

type Clock = (at: Instant) => string;

/** When the backlog is empty, in a sentence, with how sure that is. */
export function emptyWords(outlook: OutlookDto, drain: DrainDto, clock: Clock): string {
  if (totalsOf(drain).open === 0) return 'Nothing is open.';
  const { emptyAt, until, emptyShare } = outlook;
  const { low, middle, high } = emptyAt;
  if (middle === null)
    return (
      `More likely than not the backlog is not empty by ${clock(until)}, as far as shifts are entered: ` +
      `it is in ${ofHundred(emptyShare)} futures.`
    );
  const between =
    high === null
      ? `one time in ten before ${clock(low ?? middle)}, one in ten not by ${clock(until)}`
      : `four times of five between ${clock(low ?? middle)} and ${clock(high)}`;
  return `Empty ${clock(middle)}, in ${duration(middle - drain.at)}; ${between}.`;
}

/** What is lost and what comes until then. */
export function aheadWords({ lostCents, medicineLost, arrivals }: OutlookDto): string {
  const count = (value: number): number => Math.round(value);
  return (
    `Until then ${count(arrivals.middle)} more calls (${count(arrivals.low)} to ${count(arrivals.high)}) ` +
    `and ${money(lostCents.middle)} lost (${money(lostCents.low)} to ${money(lostCents.high)}); ` +
    `medicine is lost in ${count(medicineLost.middle)} ${count(medicineLost.middle) === 1 ? 'household' : 'households'} ` +
    `(${count(medicineLost.low)} to ${count(medicineLost.high)}).`
  );
}

/** What a change of the crew does, in sentences. */
export function differenceWords({ difference, changed }: WhatIfDto, clock: Clock): string {
  const { emptyHours, lostCents, medicineLost, openAtEnd, soonerShare } = difference;
  const empty =
    changed.emptyAt.middle === null
      ? `Open ${clock(changed.until)}: ${moreOrLess(openAtEnd.middle, whole, 'fewer', 'more')} ` +
        `(${range(openAtEnd, (n) => signed(n, whole))}).`
      : `Empty ${moreOrLess(emptyHours.middle, hoursWords, 'sooner', 'later')} ` +
        `(${range(emptyHours, signedHours)}); sooner in ${ofHundred(soonerShare)} futures.`;
  return [
    empty,
    `Lost: ${moreOrLess(lostCents.middle / 100, dollars, 'less', 'more')} ` +
      `(${range(lostCents, (cents) => signed(cents / 100, dollars))}).`,
    `Households whose medicine is lost: ${moreOrLess(medicineLost.middle, whole, 'fewer', 'more')} ` +
      `(${range(medicineLost, (n) => signed(n, whole))}).`,
  ].join(' ');
}

/** `4 h 30 sooner`, `no sooner`. */
export function moreOrLess(
  value: number,
  words: (size: number) => string,
  less: string,
  more: string,
): string {
  const size = words(Math.abs(value));
  if (size === words(0)) return `no ${less}`;
  return `${size} ${value < 0 ? less : more}`;
}

export const hoursWords = (hours: number): string => duration(hours * HOUR_MS);
export const signedHours = (hours: number): string => signed(hours, hoursWords);
/** `−$120`, `+3`. */
export const signed = (value: number, words: (size: number) => string): string => {
  const size = words(Math.abs(value));
  return size === words(0) ? size : `${value < 0 ? '−' : '+'}${size}`;
};

const range = (
  { low, high }: { readonly low: number; readonly high: number },
  words: (value: number) => string,
): string => `${words(low)} to ${words(high)}`;

export const ofHundred = (share: number): string => `${Math.round(share * 100)} of 100`;
export const dollars = (amount: number): string => money(Math.round(amount) * 100);
export const whole = (value: number): string => String(Math.round(value));
