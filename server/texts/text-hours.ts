import { DateTime } from 'luxon';
import type { Settings } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import type { MilestoneKind } from '@shared/domain/texts/milestones';
import { textHours, textPermission } from '@shared/domain/texts/quiet-hours';

/**
 * When a text may go: now, or when the quiet hours end at the region's wall clock.
 *
 * @param kind what it is about; for what a person wrote, a kind that quiet hours hold in the same way
 * @param zone IANA name
 */
export function textDue(
  now: Instant,
  kind: MilestoneKind,
  settings: Settings,
  zone: string,
): Instant {
  const local = DateTime.fromMillis(now, { zone });
  const permission = textPermission(
    local.hour * 60 + local.minute,
    kind,
    textHours({
      opensAtMinute: settings.quietUntilMinute,
      closesAtMinute: settings.quietFromMinute,
    }),
  );
  if (permission.maySend) return now;
  // By calendar, not by adding hours: a night in which the clocks change has 23 or 25.
  return local
    .startOf('day')
    .plus({ days: permission.daysAhead })
    .set({
      hour: Math.floor(permission.minuteOfDay / 60),
      minute: permission.minuteOfDay % 60,
    })
    .toMillis();
}

/** A moment as people of the region read it, such as "8:00 am". */
export const wallClock = (at: Instant, zone: string): string =>
  DateTime.fromMillis(at, { zone, locale: 'en-US' }).toFormat('h:mm a').toLowerCase();

/** An arrival window in words: "2:30-3:00 pm", "11:45 am-12:15 pm", "de 2:30 a 3:00 pm". */
export function windowInWords(
  window: { readonly from: Instant; readonly to: Instant },
  language: 'en' | 'es',
  zone: string,
): string {
  const [from, to] = [wallClock(window.from, zone), wallClock(window.to, zone)];
  const isOneHalf = from.slice(-2) === to.slice(-2);
  const start = isOneHalf ? from.slice(0, -3) : from;
  return language === 'es' ? `de ${start} a ${to}` : `${start}-${to}`;
}
