import { plain } from './plain-text';

/** A day on the wall calendar; month 1 to 12. */
export interface LocalDate {
  readonly year: number;
  readonly month: number;
  readonly day: number;
}

/** A time on the wall clock of the region, 24-hour. */
export interface LocalDateTime extends LocalDate {
  readonly hour: number;
  readonly minute: number;
}

/**
 * A time of day as somebody wrote it. `half` is 'unknown' for a bare "2:15", which may be a 12-hour
 * or a 24-hour time; the hour is then 1 to 12 as written.
 */
export interface ClockSaid {
  readonly hour: number;
  readonly minute: number;
  readonly half: 'known' | 'unknown';
  /**
   * How it is written: "2:15a" is 12h; "14:20", "00:15" and "0215 hrs" can only be 24h; "02:15" is
   * padded and most often 24h; "2:15" is bare and says nothing.
   */
  readonly style: '12h' | '24h' | 'padded' | 'bare';
}

/** A day as somebody wrote it. */
export type DateSaid =
  | {
      readonly kind: 'full';
      readonly year: number | null;
      readonly month: number;
      readonly day: number;
    }
  /** "3/4": month and day in an order that only the rest of the log can tell. */
  | {
      readonly kind: 'either';
      readonly first: number;
      readonly second: number;
      readonly year: number | null;
    }
  /** 0 is Sunday. */
  | { readonly kind: 'weekday'; readonly weekday: number }
  /** Days from the day of the call. */
  | { readonly kind: 'relative'; readonly days: number; readonly evening: boolean };

export interface WhenSaid {
  readonly date: DateSaid | null;
  readonly clock: ClockSaid | null;
  /** Set when the text names an offset from UTC or counts seconds since 1970. */
  readonly instant: number | null;
  /** "about", "~", "or so". */
  readonly about: boolean;
  /** What was not part of a date or time. */
  readonly rest: string;
}

const MONTHS = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];
const SPANISH_MONTHS = [
  'ene',
  'feb',
  'mar',
  'abr',
  'may',
  'jun',
  'jul',
  'ago',
  'sep',
  'oct',
  'nov',
  'dic',
];
const WEEKDAYS = ['sun', 'mon', 'tue', 'wed', 'thu', 'fri', 'sat'];
const MONTH = `(jan|feb|mar|apr|may|jun|jul|aug|sept?|oct|nov|dec|ene|abr|ago|dic)[a-z]*\\.?`;
const ISO =
  /^(\d{4})-(\d{2})-(\d{2})[t ](\d{2}):(\d{2})(?::(\d{2})(?:[.,]\d+)?)?\s*(z|[+-]\d{2}:?\d{2})$/;

/** Reads a date, a time or both out of a short text. */
export function readWhen(raw: string): WhenSaid {
  let text = plain(raw).replace(/^'|^=?"(.*)"$/g, '$1');
  const instant = absolute(text);
  if (instant !== null) return { date: null, clock: null, instant, about: false, rest: '' };
  const serial = spreadsheetSerial(text);
  if (serial) return serial;

  let date: DateSaid | null = null;
  const packed = /^(\d{4})(\d{2})(\d{2})[t ]?(\d{2})?:?(\d{2})?(?::?\d{2})?$/.exec(text);
  if (packed && isDate(Number(packed[2]), Number(packed[3])) && Number(packed[1]) > 1990) {
    date = {
      kind: 'full',
      year: Number(packed[1]),
      month: Number(packed[2]),
      day: Number(packed[3]),
    };
    text = packed[4] && packed[5] ? `${packed[4]}:${packed[5]}` : '';
  } else if (/^\d{4}(?:19|20)\d{2}$/.test(text)) {
    date = either(Number(text.slice(0, 2)), Number(text.slice(2, 4)), Number(text.slice(4)));
    if (date) text = '';
  } else {
    for (const finder of DATE_FINDERS) {
      const match = finder.pattern.exec(text);
      const found = match && finder.read(match);
      if (!match || !found) continue;
      date = found;
      text = `${text.slice(0, match.index)} ${text.slice(match.index + match[0].length)}`.trim();
      break;
    }
    if (date?.kind !== 'weekday') text = text.replace(WEEKDAY, ' ');
  }

  const about = ABOUT.test(text);
  const unhedged = text
    .replace(ABOUT, ' ')
    .replace(/\b(\d{1,2})[ -]?ish\b/, '$1')
    .trim();
  const clock = findClock(unhedged);
  const rest = clock ? clock.rest : unhedged;
  return {
    date,
    clock: clock?.said ?? null,
    instant: null,
    about,
    rest: rest
      .replace(/\b(?:at|on|the|of)\b/g, ' ')
      .replace(/^[\s,@|;:()/-]+|[\s,@|;:()/.-]+$/g, '')
      .trim(),
  };
}

/** True when a text is a time, with or without a day, and nothing else. */
export function isWholeWhen(raw: string): boolean {
  const when = readWhen(raw);
  return when.rest === '' && (when.instant !== null || when.date !== null || when.clock !== null);
}

const ABOUT =
  /(?:~|\b(?:about|abt|approx(?:imately)?\.?|around|arnd|circa|ca\.|appx\.?|roughly|maybe|like|or so|como a las)(?![a-z])|\?+$)/;
const WEEKDAY = /\b(sun|mon|tues?|wed(?:nes)?|thu(?:rs?)?|fri|sat(?:ur)?)(?:day)?\b\.?,?/;

const DATE_FINDERS: readonly { pattern: RegExp; read: (m: RegExpExecArray) => DateSaid | null }[] =
  [
    // 2026-12-01, 2026/12/1
    {
      pattern: /(?<!\d)((?:19|20)\d{2})[-/.](\d{1,2})[-/.](\d{1,2})(?:t(?=\d)|(?!\d))/,
      read: (m) => full(Number(m[1]), Number(m[2]), Number(m[3])),
    },
    // 01-Dec-26, 1 December 2026, 01DEC26, 1st of Dec
    {
      pattern: new RegExp(
        `(?<!\\d)(\\d{1,2})(?:st|nd|rd|th)?[\\s\\-./]*(?:of |de )?${MONTH}(?:[\\s\\-./,']*(?:de )?((?:20)?\\d{2})(?![\\d:.]\\d|\\s*[ap]\\b|\\d))?`,
      ),
      read: (m) => full(year(m[3]), monthNumber(m[2] ?? ''), Number(m[1])),
    },
    // Dec 1, Dec 1st 2026, December 01, 2026
    {
      pattern: new RegExp(
        `\\b${MONTH}[\\s\\-./]*(\\d{1,2})(?:st|nd|rd|th)?(?!\\d|:\\d)(?:[\\s,\\-./']+((?:20)\\d{2}|'?\\d{2}(?!\\d*[:.]\\d|\\s*[ap]\\b|\\d)))?`,
      ),
      read: (m) => full(year(m[3]), monthNumber(m[1] ?? ''), Number(m[2])),
    },
    // 12/01/2026, 12-1-26, 12.01.2026
    {
      pattern: /(?<![\d/])(\d{1,2})([/\-.])(\d{1,2})\2((?:20)?\d{2})(?![\d/])/,
      read: (m) => either(Number(m[1]), Number(m[3]), year(m[4])),
    },
    // 12/1, 12-1 (but not 2.15, which is a time)
    {
      pattern: /(?<![\d/:.-])(\d{1,2})([/-])(\d{1,2})(?![\d/:-]|\.\d)/,
      read: (m) => either(Number(m[1]), Number(m[3]), null),
    },
    {
      pattern: /(?<![\d.])(\d{1,2})\.(\d{1,2})\.(?!\d)/,
      read: (m) => either(Number(m[1]), Number(m[2]), null),
    },
    {
      pattern: /\b(?:last night|last nite|l\.?\s?n\.|yesterday (?:evening|night)|anoche)\b/,
      read: () => ({ kind: 'relative', days: -1, evening: true }),
    },
    {
      pattern: /\b(?:yesterday|yest\.?|ystdy|ayer)\b/,
      read: () => ({ kind: 'relative', days: -1, evening: false }),
    },
    {
      pattern: /\b(?:today|tonight|tonite|this (?:morning|am|evening)|hoy|esta noche)\b/,
      read: () => ({ kind: 'relative', days: 0, evening: false }),
    },
    {
      pattern: WEEKDAY,
      read: (m) => ({ kind: 'weekday', weekday: WEEKDAYS.indexOf((m[1] ?? '').slice(0, 3)) }),
    },
  ];

function findClock(text: string): { said: ClockSaid; rest: string } | null {
  const word = /\b(?:(12)\s*)?(midnight|midnite|mid|noon|midday|medianoche|mediodia)\b/.exec(text);
  if (word) {
    const noon = /noon|midday|mediodia/.test(word[2] ?? '');
    return {
      said: { hour: noon ? 12 : 0, minute: 0, half: 'known', style: '12h' },
      rest: without(text, word),
    };
  }
  const half = String.raw`(?:\s*(a\.?\s?m?|p\.?\s?m?|in the morning|at night|hrs?|hours|h|u)\b\.?)?`;
  const patterns = [
    new RegExp(
      String.raw`(?<![\d.:])(\d{1,2})\s?[:;.]\s?(\d{2})(?:\s?[:.]\s?\d{2}(?:[.,]\d+)?)?(?!\d)${half}`,
    ),
    new RegExp(String.raw`(?<![\d.:])(\d{1,2})h(\d{2})(?!\d)${half}`),
    new RegExp(String.raw`(?<![\d.:$#/-])(\d{1,2})(\d{2})(?![\d.:/-])${half}`),
    /(?<![\d.:$#/-])(\d{1,2}) (\d{2})\s*([ap]\.?\s?m?)\b\.?/,
    /(?<![\d.:$#/-])(\d{1,2})()\s*(a\.?\s?m?|p\.?\s?m?|o'?clock|in the morning|at night)\b\.?/,
    /^(\d{1,2})()()$/,
  ];
  for (const pattern of patterns) {
    const match = pattern.exec(text);
    const said = match && clockOf(match[1] ?? '', match[2] ?? '', match[3] ?? '');
    if (match && said) return { said, rest: without(text, match) };
  }
  return null;
}

function clockOf(hourText: string, minuteText: string, halfText: string): ClockSaid | null {
  let hour = Number(hourText);
  const minute = minuteText === '' ? 0 : Number(minuteText);
  if (minute > 59 || hour > 24 || (hour === 24 && minute > 0)) return null;
  if (hour === 24) hour = 0;
  const half = halfText.replace(/[.\s]/g, '');
  const afternoon = half.startsWith('p') || half === 'atnight';
  if (half.startsWith('a') || half.startsWith('p') || half === 'inthemorning') {
    if (hour > 12) return { hour, minute, half: 'known', style: '24h' };
    if (half === 'atnight' && (hour < 5 || hour === 12))
      return { hour: hour % 12, minute, half: 'known', style: '12h' };
    return { hour: (hour % 12) + (afternoon ? 12 : 0), minute, half: 'known', style: '12h' };
  }
  if (hour > 12 || hour === 0 || /^(?:h|hrs?|hours|u)$/.test(half)) {
    return { hour, minute, half: 'known', style: '24h' };
  }
  return { hour, minute, half: 'unknown', style: /^0\d/.test(hourText) ? 'padded' : 'bare' };
}

function absolute(text: string): number | null {
  const iso = ISO.exec(text);
  if (iso) {
    const offset = iso[7] === 'z' ? 'Z' : (iso[7] ?? '').replace(/^(.{3})(\d{2})$/, '$1:$2');
    const at = Date.parse(
      `${iso[1]}-${iso[2]}-${iso[3]}T${iso[4]}:${iso[5]}:${iso[6] ?? '00'}${offset}`,
    );
    return Number.isNaN(at) ? null : at;
  }
  if (/^1[5-9]\d{8}$/.test(text)) return Number(text) * 1000;
  if (/^1[5-9]\d{11}$/.test(text)) return Number(text);
  return null;
}

/** Days since 1899-12-30, as a spreadsheet writes a date whose format it lost; 40000 is in 2009. */
function spreadsheetSerial(text: string): WhenSaid | null {
  const whole = /^([45]\d{4})(?:[.,](\d+))?$/.exec(text);
  const fraction = whole ? whole[2] : /^0?[.,](\d{2,})$/.exec(text)?.[1];
  if (!whole && (fraction === undefined || fraction.length < 3)) return null;
  const minutes = Math.round(Number(`0.${fraction ?? '0'}`) * 24 * 60) % (24 * 60);
  const clock: ClockSaid = {
    hour: Math.floor(minutes / 60),
    minute: minutes % 60,
    half: 'known',
    style: '24h',
  };
  let date: DateSaid | null = null;
  if (whole) {
    const day = new Date(Date.UTC(1899, 11, 30) + Number(whole[1]) * 86_400_000);
    date = {
      kind: 'full',
      year: day.getUTCFullYear(),
      month: day.getUTCMonth() + 1,
      day: day.getUTCDate(),
    };
  }
  return {
    date,
    clock: fraction === undefined ? null : clock,
    instant: null,
    about: false,
    rest: '',
  };
}

function full(yearNumber: number | null, month: number, day: number): DateSaid | null {
  return isDate(month, day) ? { kind: 'full', year: yearNumber, month, day } : null;
}

function either(first: number, second: number, yearNumber: number | null): DateSaid | null {
  if (isDate(first, second) && isDate(second, first) && first !== second) {
    return { kind: 'either', first, second, year: yearNumber };
  }
  return full(yearNumber, first, second) ?? full(yearNumber, second, first);
}

function isDate(month: number, day: number): boolean {
  return month >= 1 && month <= 12 && day >= 1 && day <= 31;
}

function year(text: string | undefined): number | null {
  if (!text) return null;
  const value = Number(text.replace(/\D/g, ''));
  return value < 100 ? 2000 + value : value;
}

function monthNumber(text: string): number {
  const short = text.slice(0, 3);
  const at = MONTHS.indexOf(short);
  return (at >= 0 ? at : SPANISH_MONTHS.indexOf(short)) + 1;
}

function without(text: string, match: RegExpExecArray): string {
  return `${text.slice(0, match.index)} ${text.slice(match.index + match[0].length)}`.trim();
}
