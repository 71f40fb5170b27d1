import { inject, Injectable, Pipe, type PipeTransform } from '@angular/core';
import { HOUR_MS, type Instant, MINUTE_MS } from '@shared/domain/instant';
import { Session } from './session';

/** `02:15`, in the given IANA time zone. */
export const clockTime = (at: Instant, timeZone: string): string =>
  formatter(timeZone, { hour: '2-digit', minute: '2-digit' }).format(at);

/** `Tue 02:15`. */
export const dayTime = (at: Instant, timeZone: string): string =>
  `${formatter(timeZone, { weekday: 'short' }).format(at)} ${clockTime(at, timeZone)}`;

/** `Tue, Sep 3, 02:15`, for lists that span weeks. */
export const dateTime = (at: Instant, timeZone: string): string =>
  formatter(timeZone, {
    weekday: 'short',
    month: 'short',
    day: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
  }).format(at);

/** `45 min`, `3 h 10`, `52 h`, `27 days`: a length of time, rounded down. */
export function duration(lengthMs: number): string {
  const minutes = Math.max(0, Math.floor(lengthMs / MINUTE_MS));
  if (minutes < 60) return `${minutes} min`;
  const hours = Math.floor(minutes / 60);
  // Beyond two days nobody acts on minutes.
  if (hours < 48) return `${hours} h ${String(minutes % 60).padStart(2, '0')}`;
  // Nor beyond a week on hours.
  return hours < 168 ? `${hours} h` : `${Math.floor(hours / 24)} days`;
}

/** `just now`, `5 min ago`, `3 h 10 ago`. */
export const ago = (at: Instant, now: Instant): string =>
  now - at < MINUTE_MS ? 'just now' : `${duration(now - at)} ago`;

/** `in 3 h 10`'s length without the `in`; a moment that has passed reads `20 min ago`. */
export const inHours = (at: Instant, now: Instant): string =>
  at >= now ? duration(at - now) : ago(at, now);

/** `$1,240`: US dollars, rounded; for estimates such as the value at risk. */
export const money = (cents: number): string => WHOLE_DOLLARS.format(cents / 100);

/** `$12.40`: US dollars and cents; for prices. */
export const moneyExact = (cents: number): string => DOLLARS_AND_CENTS.format(cents / 100);

/** The start of the day in the given zone that holds `at`; a day may have 23 or 25 hours. */
export function startOfDay(at: Instant, timeZone: string): Instant {
  const [hour = 0, minute = 0] = clockTime(at, timeZone).split(':').map(Number);
  let start = at - (at % MINUTE_MS) - hour * HOUR_MS - minute * MINUTE_MS;
  // Across a clock change the first guess is an hour off, one way or the other.
  const [h = 0] = clockTime(start, timeZone).split(':').map(Number);
  if (h !== 0) start += h > 12 ? (24 - h) * HOUR_MS : -h * HOUR_MS;
  return start;
}

const WHOLE_DOLLARS = new Intl.NumberFormat('en-US', {
  style: 'currency',
  currency: 'USD',
  maximumFractionDigits: 0,
});
const DOLLARS_AND_CENTS = new Intl.NumberFormat('en-US', { style: 'currency', currency: 'USD' });

const formatters = new Map<string, Intl.DateTimeFormat>();

/** Making a formatter costs a thousand times what using it does, so each is made once. */
function formatter(timeZone: string, options: Intl.DateTimeFormatOptions): Intl.DateTimeFormat {
  const key = timeZone + Object.keys(options).join();
  let made = formatters.get(key);
  if (!made) {
    made = new Intl.DateTimeFormat('en-US', { timeZone, hourCycle: 'h23', ...options });
    formatters.set(key, made);
  }
  return made;
}

/** The functions above, in the region's own zone. */
@Injectable({ providedIn: 'root' })
export class Zone {
  private readonly session = inject(Session);
  readonly name = this.session.zone;

  clockTime(at: Instant): string {
    return clockTime(at, this.name());
  }
  dayTime(at: Instant): string {
    return dayTime(at, this.name());
  }
  dateTime(at: Instant): string {
    return dateTime(at, this.name());
  }
}

/** `{{ call.receivedAt | clockTime }}` */
@Pipe({ name: 'clockTime' })
export class ClockTimePipe implements PipeTransform {
  private readonly zone = inject(Zone);
  transform(at: Instant | null | undefined): string {
    return at == null ? '' : this.zone.clockTime(at);
  }
}

/** `{{ call.lostAt | dayTime }}` */
@Pipe({ name: 'dayTime' })
export class DayTimePipe implements PipeTransform {
  private readonly zone = inject(Zone);
  transform(at: Instant | null | undefined): string {
    return at == null ? '' : this.zone.dayTime(at);
  }
}

/** `{{ entry.at | dateTime }}` */
@Pipe({ name: 'dateTime' })
export class DateTimePipe implements PipeTransform {
  private readonly zone = inject(Zone);
  transform(at: Instant | null | undefined): string {
    return at == null ? '' : this.zone.dateTime(at);
  }
}

/** `{{ message.at | ago: clock.now() }}` */
@Pipe({ name: 'ago' })
export class AgoPipe implements PipeTransform {
  transform(at: Instant | null | undefined, now: Instant): string {
    return at == null ? '' : ago(at, now);
  }
}

/** `{{ saveByAt | inHours: clock.now() }}` */
@Pipe({ name: 'inHours' })
export class InHoursPipe implements PipeTransform {
  transform(at: Instant | null | undefined, now: Instant): string {
    return at == null ? '' : inHours(at, now);
  }
}

/** `{{ valueCents | money }}` */
@Pipe({ name: 'money' })
export class MoneyPipe implements PipeTransform {
  transform(cents: number | null | undefined): string {
    return cents == null ? '' : money(cents);
  }
}
