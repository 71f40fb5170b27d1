import { HOUR_MS, MINUTE_MS } from '../instant';
import type { Instant } from '../instant';
import { readWhen } from './local-time';
import { addDays, daysOf, timesOf } from './night-clock';
import type { DateOrder, NightSpan, ZoneClock } from './night-clock';
import { plain, saysNothing } from './plain-text';

/** What is needed to put "out since 9p" on the time line. */
export interface PowerSetting {
  readonly receivedAt: Instant;
  readonly zone: ZoneClock;
  readonly span: NightSpan;
  /** When the storm can have taken the power, if known; ambiguous times are settled inside it. */
  readonly outage: { readonly from: Instant; readonly to: Instant | null } | null;
  readonly dateOrder: DateOrder;
  readonly is24: boolean;
}

export interface PowerSaid {
  readonly outAt: Instant | null;
  readonly backAt: Instant | null;
  readonly stillOut: boolean;
  readonly doubts: readonly string[];
}

/** A little after the call is a slow clock, not tomorrow. */
const AFTER_CALL_MS = 20 * MINUTE_MS;

/** When the power went and came back, from cells of their own or from the message. */
export function readPower(
  cells: {
    readonly out: string;
    readonly back: string;
    readonly hours: string;
    readonly message: string;
  },
  setting: PowerSetting,
): PowerSaid {
  const doubts: string[] = [];
  const message = plain(cells.message);
  let outAt = moment(cells.out, setting, 'earliest', doubts);
  outAt ??= hoursAgo(cells.hours, setting, true);
  outAt ??= moment(cells.hours, setting, 'earliest', doubts);
  if (outAt === null) outAt = fromMessage(message, OUT, setting, 'earliest');
  if (outAt === null) {
    const lasting = LASTING.exec(message);
    if (lasting) outAt = setting.receivedAt - Number(lasting[1]) * HOUR_MS;
  }
  const stillOut =
    /\b(?:still|not yet|not back|no\b|n\b|out\b|off\b|sigue)/.test(plain(cells.back)) ||
    STILL.test(message);
  const until = UNTIL.exec(message);
  let backAt =
    stillOut && !/\d/.test(cells.back) ? null : moment(cells.back, setting, 'latest', doubts);
  if (backAt === null && !stillOut) backAt = fromMessage(message, BACK, setting, 'latest');
  if (backAt === null && !stillOut && until?.[2]) {
    backAt = moment(until[2], { ...setting, is24: false }, 'latest', []);
  }
  if (outAt !== null && backAt !== null && backAt < outAt) {
    doubts.push('the power came back before it went, by what the row says; the return was dropped');
    backAt = null;
  }
  return { outAt, backAt, stillOut: stillOut && backAt === null, doubts };
}

const TIME = String.raw`((?:last night|yesterday|tonight|anoche)?[ ,]*(?:at|@|~|about|abt|around)?\s*(?:\d{1,2}[:.]\d{2}\s*(?:[ap]\.?m?\b\.?)?|\d{1,4}\s*(?:[ap]\.?m?\b\.?|hrs\b|o'?clock)|\d{1,2}(?![\d:.%/-]| ?(?:h|hrs?|hours?|min|yrs?|years?|deg|days?|f)\b)|(?:[01]\d|2[0-3])[0-5]\d(?![\d:-])|midnight|noon|medianoche)(?: (?:last night|yesterday|this morning))?)`;
const LINK = String.raw`\s*(?:(?:since|at|@|from|around|about|abt|approx\.?|~|desde|a|for|on|again|sometime|las?|the)\s*)*`;
const OUT = new RegExp(
  String.raw`\b(?:(?:power|pwr|elec\w*|lights?|current|luz)\s*(?:(?:has been|been|was|is|went|all)\s*)?(?:out|off|down|failed|lost|cut)|no (?:power|pwr|lights?|elec\w*)|without (?:power|pwr)|w\/?o (?:power|pwr)|lost (?:power|pwr|elec\w*|lights?)|went (?:out|off)|(?:out|off|down) since|out(?= ?\d)|se fue la luz|sin luz|outage)${LINK}${TIME}`,
);
const BACK = new RegExp(
  String.raw`\b(?:(?:power|pwr|lights?|elec\w*|luz)\s*(?:(?:came|is|was|got|went)\s*)?(?:back|on again|restored|returned|on)(?: (?:on|up))?|(?<!call )(?<!ring )(?<!cb )back(?: (?:on|up))?|came back(?: on)?|restored|volvio(?: la luz)?)${LINK}${TIME}`,
);
/** "out 5:30p - 7:10p" */
const UNTIL = new RegExp(String.raw`${OUT.source}\s*(?:-|to|until|till?|thru|hasta)\s*${TIME}`);
const STILL =
  /\b(?:still (?:out|no power|no pwr|off|without)|(?:power|pwr) (?:is )?still (?:out|off)|no (?:power|pwr) yet|(?:power|pwr) not back|sigue sin luz|todavia sin luz)\b/;
const LASTING =
  /\b(?:out|off|without (?:power|pwr)|w\/?o (?:power|pwr)|no (?:power|pwr)|sin luz)\s*(?:for|x|por)?\s*(?:about|abt|~|over|like)?\s*(\d{1,2}(?:\.\d)?)\s*\+?\s*(?:h|hrs?|hours?|horas)\b/;

function fromMessage(
  message: string,
  pattern: RegExp,
  setting: PowerSetting,
  pick: 'earliest' | 'latest',
): Instant | null {
  const match = pattern.exec(message);
  // People say "since 7" in the evening, whatever clock the form keeps.
  return match?.[1] ? moment(match[1], { ...setting, is24: false }, pick, []) : null;
}

function moment(
  raw: string,
  setting: PowerSetting,
  pick: 'earliest' | 'latest',
  doubts: string[],
): Instant | null {
  if (saysNothing(raw)) return null;
  const ago = hoursAgo(raw, setting, false);
  if (ago !== null) return ago;
  const { zone, span, receivedAt } = setting;
  const when = readWhen(raw.replace(/^\s*(?:since|from|desde|after)\b/i, ''));
  if (when.instant !== null) return when.instant;
  if (!when.clock) {
    if (/\d/.test(raw)) doubts.push(`"${raw.trim()}" could not be read as a time`);
    return null;
  }
  const today = zone.toLocal(receivedAt);
  const days = when.date
    ? daysOf(when.date, zone, span, setting.dateOrder, today).flatMap((day) =>
        // "tonight 9p", said at two in the morning
        when.date?.kind === 'relative' ? [day, addDays(day, -1)] : [day],
      )
    : [today, addDays(today, -1)];
  const options = days.flatMap((day) =>
    timesOf(when.clock ?? NEVER, setting.is24).map(({ hour, minute, likely }) => ({
      at: zone.toInstant({ ...day, hour, minute }),
      likely,
    })),
  );
  const before = options.filter(({ at }) => at <= receivedAt + AFTER_CALL_MS);
  const dated = when.date !== null && when.date.kind !== 'relative';
  if (before.length === 0) return dated ? (options[0]?.at ?? null) : null;
  const recent = dated ? before : before.filter(({ at }) => at > receivedAt - 24 * HOUR_MS);
  const { outage } = setting;
  const inStorm = outage
    ? recent.filter(
        ({ at }) =>
          at >= outage.from - 30 * MINUTE_MS &&
          (outage.to === null || at <= outage.to + 12 * HOUR_MS),
      )
    : recent;
  const pool = inStorm.length > 0 ? inStorm : recent.length > 0 ? recent : before;
  const likely = pool.filter((option) => option.likely);
  const usable = (likely.length > 0 ? likely : pool).map(({ at }) => at);
  if (when.clock.half === 'unknown' && new Set(usable).size > 1) {
    doubts.push(
      `"${raw.trim()}" may be morning or evening; the ${pick === 'earliest' ? 'earlier' : 'later'} was taken`,
    );
  }
  // The clock starts at the earliest plausible moment.
  return pick === 'earliest' && when.clock.half === 'unknown'
    ? Math.min(...usable)
    : Math.max(...usable);
}

const NEVER = { hour: 0, minute: 0, half: 'known', style: '24h' } as const;

/** "3 hrs ago", "5 hours", "2 1/2 h", "90 min"; a bare number only in a column of hours. */
function hoursAgo(raw: string, setting: PowerSetting, bareCounts: boolean): Instant | null {
  const text = plain(raw).replace(/^(?:about|abt|approx\.?|~|over|almost|>|<|around)\s*/, '');
  const half = /^(\d{1,2})? ?1\/2\s*(?:h|hrs?|hours?)/.exec(text);
  if (half) return setting.receivedAt - (Number(half[1] ?? 0) + 0.5) * HOUR_MS;
  const hours =
    /^(\d{1,3}(?:[.,]\d+)?)\s*\+?\s*(h|hrs?|hours?|horas)?\.?(?: ago| now| so far| or so)?$/.exec(
      text,
    );
  if (hours && (hours[2] || bareCounts))
    return setting.receivedAt - Number((hours[1] ?? '').replace(',', '.')) * HOUR_MS;
  const minutes = /^(\d{1,3})\s*(?:m|mins?|minutes?)\.?(?: ago)?$/.exec(text);
  if (minutes) return setting.receivedAt - Number(minutes[1]) * MINUTE_MS;
  const both = /^(\d{1,2})\s*(?:h|hrs?|hours?)\s*(\d{1,2})\s*(?:m|mins?)?(?: ago)?$/.exec(text);
  if (both && !/^\d{1,2}h\d{2}$/.test(text))
    return setting.receivedAt - Number(both[1]) * HOUR_MS - Number(both[2]) * MINUTE_MS;
  return null;
}
