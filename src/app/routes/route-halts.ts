import { type Instant, MINUTE_MS } from '@shared/domain/instant';
import type { ShiftBreak } from '@shared/domain/shift-breaks';

/** A pause of the technician, or a stop at the store for parts. */
export interface Halt {
  readonly kind: 'break' | 'shop';
  readonly startAt: Instant;
  readonly finishAt: Instant;
}

/** A stop as far as what lies before it goes. */
export interface HaltedStop {
  readonly arriveAt: Instant;
  readonly finishAt: Instant;
  readonly driveMinutes: number;
  /** On the way or there: nothing is put before it any more. */
  readonly isUnderWay: boolean;
  /** Whether the van drives by the store on the way to it. */
  readonly fetches: boolean;
}

interface HaltShift {
  readonly startsAt: Instant;
  readonly endsAt: Instant;
  readonly breaks?: readonly ShiftBreak[] | undefined;
}

/** Times are stored to the tenth of a minute. */
const ROUNDED_MS = MINUTE_MS;

/**
 * Where the halts of a route in force lie, worked back from the times of its stops by the rule that made
 * them (`shared/domain/shift-breaks.ts`): a break begins at the first free moment at or after its `from`,
 * and one that could only begin after its `to` falls away. Where on its way a van passes the store is not
 * stored, so that halt is drawn in the middle of the drive.
 *
 * @param stops in the order of the route
 * @param shopMinutes how long a stop at the store takes
 */
export function haltsOf(
  shifts: readonly HaltShift[],
  stops: readonly HaltedStop[],
  now: Instant,
  shopMinutes: number,
): Halt[] {
  const halts: Halt[] = [];
  const inOrder = [...shifts].sort((a, b) => a.startsAt - b.startsAt);
  inOrder.forEach((shift, index) => {
    if (shift.endsAt <= now) return;
    const until = inOrder[index + 1]?.startsAt ?? Infinity;
    const due = [...(shift.breaks ?? [])].sort((a, b) => a.from - b.from);
    let free = Math.max(shift.startsAt, now);
    // Stops of a shift before the first one that is known hang on the first.
    const from = index === 0 ? -Infinity : shift.startsAt;
    for (const stop of stops) {
      if (stop.arriveAt < from || stop.arriveAt >= until) continue;
      if (!stop.isUnderWay) {
        const shopMs = stop.fetches ? shopMinutes * MINUTE_MS : 0;
        const driveMs = stop.driveMinutes * MINUTE_MS;
        const setsOff = stop.arriveAt - driveMs - shopMs;
        free = takeBreaks(halts, due, free, setsOff);
        if (shopMs > 0) {
          const startAt = setsOff + driveMs / 2;
          halts.push({ kind: 'shop', startAt, finishAt: startAt + shopMs });
        }
      }
      free = Math.max(free, stop.finishAt);
    }
    takeBreaks(halts, due, free, Infinity);
  });
  return halts;
}

/** Puts the breaks that fit before `end` where they begin, and tells when the technician is free then. */
function takeBreaks(halts: Halt[], due: ShiftBreak[], free: Instant, end: Instant): Instant {
  let at = free;
  for (let next = due[0]; next; next = due[0]) {
    const startAt = Math.max(at, next.from);
    const finishAt = startAt + next.minutes * MINUTE_MS;
    if (startAt <= next.to) {
      if (finishAt > end + ROUNDED_MS) return at;
      halts.push({ kind: 'break', startAt, finishAt });
      at = finishAt;
    }
    due.shift();
  }
  return at;
}

/** A stretch of road on the ruler. */
export interface DrivePiece {
  readonly from: Instant;
  readonly to: Instant;
}

/** The drive to a stop: one stretch, or the two before and after the store. */
export function drivePieces(
  stop: Pick<HaltedStop, 'arriveAt' | 'driveMinutes'>,
  halts: readonly Halt[],
  after: Instant,
): DrivePiece[] {
  const driveMs = stop.driveMinutes * MINUTE_MS;
  const shop = halts.find(
    ({ kind, startAt, finishAt }) =>
      kind === 'shop' && startAt >= after - ROUNDED_MS && finishAt <= stop.arriveAt + ROUNDED_MS,
  );
  if (!shop) return driveMs > 0 ? [{ from: stop.arriveAt - driveMs, to: stop.arriveAt }] : [];
  const last = Math.min(driveMs, Math.max(stop.arriveAt - shop.finishAt, 0));
  return [
    { from: shop.startAt - (driveMs - last), to: shop.startAt },
    { from: stop.arriveAt - last, to: stop.arriveAt },
  ].filter(({ from, to }) => to > from);
}
