import { parsePhoneNumberFromString } from 'libphonenumber-js/min';

/** One telephone number, in the form in which it is stored, texted and compared. */
export interface PhoneNumber {
  /** E.164: a plus sign and at most fifteen digits (ITU-T E.164, 2010). */
  readonly e164: string;
  readonly extension: string | null;
}

/** What a cell or a form field that should hold a number turned out to hold. */
export type PhoneReading =
  | {
      readonly kind: 'number';
      readonly number: PhoneNumber;
      /** Further numbers in the same text, in order. */
      readonly others: readonly PhoneNumber[];
      /** The text around the numbers, such as "call after 6". */
      readonly rest: string;
      /** What was assumed on the way, in words; empty when nothing was. */
      readonly doubts: readonly string[];
    }
  | { readonly kind: 'blank' }
  | { readonly kind: 'withheld' }
  | { readonly kind: 'unreadable'; readonly why: string };

export interface PhoneOptions {
  /** Three digits put before a number of seven; without it such a number is unreadable. */
  readonly areaCode?: string | null;
}

interface Found {
  readonly number: PhoneNumber;
  readonly start: number;
  readonly end: number;
  readonly areaCodeAssumed: boolean;
}

const EXTENSION = String.raw`(?:\s*(?:,|;)?\s*(?:x|ext\.?|extension|xt\.?)\s*[.:#]?\s*(\d{1,6})(?!\d))?`;
const TEN_DIGITS = new RegExp(
  String.raw`(?<![\d])(?:(?:\+|00)?\s*1[\s.\-/]*)?\(?\s*([2-9]\d{2})\s*\)?[\s.\-/_]*(\d{3})[\s.\-/_]*(\d{4})(?!\d)` +
    EXTENSION,
  'gi',
);
const SEVEN_DIGITS = new RegExp(
  String.raw`(?<![\d\-.)/])([2-9]\d{2})[\s.\-](\d{4})(?![\d\-/])` + EXTENSION,
  'gi',
);
const ABROAD = /\+\s?(?!1[\s.\-(]?\(?[2-9])[1-9]\d{0,2}[\s.\-()]?(?:\d[\s.\-()]{0,2}){6,13}\d/g;
const NO_NUMBER =
  /^(?:n\/?a|none|no(?:ne)? given|no (?:number|phone|ph|callback|call back)|nothing|unk(?:nown)?|\?+|-+|\.+|x+|not? (?:given|avail\w*)|refused|declined|did ?n[o']?t (?:give|leave)\b.*|would ?n[o']?t (?:give|leave)\b.*|sin tel\w*)\.?$/i;
const WITHHELD =
  /^(?:blocked|private|restricted|anonymous|withheld|unavailable|out of area|no caller id|unknown caller|number withheld|private (?:number|caller)|blocked (?:number|id))\.?$/i;

/** Reads a text that is meant to hold a telephone number. */
export function readPhone(raw: string, options: PhoneOptions = {}): PhoneReading {
  const text = tidy(raw);
  if (text === '' || NO_NUMBER.test(text)) return { kind: 'blank' };
  if (WITHHELD.test(text)) return { kind: 'withheld' };

  const doubts: string[] = [];
  let found = findIn(text, options);
  let searched = text;
  if (found.length === 0) {
    const repaired = repair(text);
    if (repaired !== text) {
      found = findIn(repaired, options);
      searched = repaired;
      if (found.length > 0) doubts.push(`the phone number "${raw.trim()}" was read as ${repaired}`);
    }
  }
  const [first, ...others] = found;
  if (!first) return { kind: 'unreadable', why: whyUnreadable(text, raw, options) };
  if (first.areaCodeAssumed) {
    doubts.push(`no area code in "${raw.trim()}", so ${options.areaCode ?? ''} was taken`);
  }
  return {
    kind: 'number',
    number: first.number,
    others: others.map((other) => other.number),
    rest: restOf(searched, found),
    doubts,
  };
}

/** Every number in a free text, such as a message that names a neighbour's telephone. */
export function findPhones(raw: string, options: PhoneOptions = {}): readonly PhoneNumber[] {
  return findIn(tidy(raw), options).map((found) => found.number);
}

/** The way a person in the number's own country writes it. */
export function formatPhone(e164: string): string {
  const parsed = parsePhoneNumberFromString(e164);
  if (!parsed) return e164;
  return parsed.countryCallingCode === '1' ? parsed.formatNational() : parsed.formatInternational();
}

function findIn(text: string, options: PhoneOptions): Found[] {
  // Most messages hold no digits to speak of, and this runs over every cell of a log.
  if (!/\d{2}/.test(text) && !/(?:\d\D?){7}/.test(text)) return [];
  const found: Found[] = [];
  for (const match of text.matchAll(ABROAD)) {
    const parsed = parsePhoneNumberFromString(match[0]);
    if (parsed?.isValid()) add(found, match, parsed.number, null, false);
  }
  for (const match of text.matchAll(TEN_DIGITS)) {
    const e164 = northAmerican(`${match[1]}${match[2]}${match[3]}`);
    if (e164) add(found, match, e164, match[4] ?? null, false);
    // "252-555-0142 / 0143": the second shares all but its last four digits.
    const end = match.index + match[0].length;
    const twin = /^\s*(?:\/|or|&|,)\s*(\d{4})(?![\d:./-])/.exec(text.slice(end));
    const second = twin && northAmerican(`${match[1]}${match[2]}${twin[1]}`);
    if (e164 && twin && second)
      add(found, Object.assign(twin, { index: end }), second, null, false);
  }
  if (options.areaCode) {
    for (const match of text.matchAll(SEVEN_DIGITS)) {
      const e164 = northAmerican(`${options.areaCode}${match[1]}${match[2]}`);
      if (e164) add(found, match, e164, match[3] ?? null, true);
    }
    const bare = /^\d{7}$/.exec(text);
    const e164 = bare && northAmerican(`${options.areaCode}${text}`);
    if (bare && e164) add(found, Object.assign(bare, { index: 0 }), e164, null, true);
  }
  return found.sort((a, b) => a.start - b.start);
}

function add(
  found: Found[],
  match: RegExpExecArray,
  e164: string,
  extension: string | null,
  areaCodeAssumed: boolean,
): void {
  const start = match.index;
  const end = start + match[0].length;
  if (found.some((other) => start < other.end && other.start < end)) return;
  if (found.some((other) => other.number.e164 === e164)) return;
  found.push({ number: { e164, extension }, start, end, areaCodeAssumed });
}

/**
 * Ten digits as E.164, or null when the North American plan cannot hold them.
 *
 * Area code and exchange each start with 2 to 9 and do not end in 11 (ATIS NANP; from memory). The
 * library would say the same at fifty times the cost, and a night log asks ten thousand times; a test
 * compares the two.
 */
function northAmerican(tenDigits: string): string | null {
  if (!/^[2-9](?!11)\d{2}[2-9](?!11)\d{6}$/.test(tenDigits)) return null;
  return /^(\d)\1{9}$/.test(tenDigits) ? null : `+1${tenDigits}`;
}

function tidy(raw: string): string {
  return raw
    .replace(/[\u00a0\u2007\u202f\u200b\u200e\u200f\u202a-\u202e\ufeff]/g, ' ')
    .replace(/[\u2010-\u2015\u2212]/g, '-')
    .replace(/[\u2018\u2019]/g, "'")
    .replace(/^\s*=?"(.*)"\s*$/s, '$1')
    .replace(/^\s*'(?=[\d(+])/, '')
    .replace(/^\s*(\d{10,11})\.0\s*$/, '$1')
    .replace(/\s+/g, ' ')
    .trim();
}

/** Spreadsheet damage, spaced-out digits, and letters typed for the digits they resemble. */
function repair(text: string): string {
  const scientific = /^(\d)[.,](\d{1,10})e\+?(\d{1,2})$/i.exec(text);
  if (scientific) {
    const digits = `${scientific[1]}${scientific[2]}`;
    const length = Number(scientific[3]) + 1;
    // Fewer digits than the exponent promises: the spreadsheet threw the rest away.
    return digits.length <= length && length - digits.length <= 1
      ? digits.padEnd(length, '0')
      : text;
  }
  const digitLike = text
    .replace(/[oO](?=[\d\s.\-()]|$)/g, '0')
    .replace(/[lI|](?=[\d\s.\-()])/g, '1');
  const isDate = /(?<!\d)\d{1,2}([-./])\d{1,2}\1(?:\d{4}|\d{2})(?!\d)/.test(digitLike);
  if (!isDate && /^[+\d\s.\-()/_*,'"]+$/.test(digitLike)) {
    const digits = digitLike.replace(/\D/g, '');
    if (/^1?\d{10}$/.test(digits)) return digits;
    if (digits.length === 7) return digits;
  }
  return digitLike;
}

function restOf(text: string, found: readonly Found[]): string {
  let rest = '';
  let at = 0;
  for (const { start, end } of found) {
    rest += `${text.slice(at, start)} `;
    at = end;
  }
  rest += text.slice(at);
  const words = rest
    .replace(/\btel:/gi, ' ')
    .replace(/\s+/g, ' ')
    .replace(/^[\s,;:/()\-.#+]+|[\s,;:/(\-.#+]+$/g, '');
  return /[a-z\d]/i.test(words) ? words : '';
}

function whyUnreadable(text: string, raw: string, options: PhoneOptions): string {
  const digits = text.replace(/\D/g, '').length;
  const shown = raw.trim();
  if (/^\d[.,]\d+e\+?\d+$/i.test(text))
    return `a spreadsheet cut the phone number short: "${shown}"`;
  if (digits === 0) return `there is no phone number in "${shown}"`;
  if (digits === 7 && !options.areaCode) return `"${shown}" has no area code`;
  if (digits === 10 || digits === 11) return `"${shown}" is not a telephone number that can exist`;
  return `"${shown}" has ${digits} digits, not ten`;
}
