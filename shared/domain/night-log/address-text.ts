import { bare, plain, saysNothing } from './plain-text';
import {
  canonicalWord,
  isDirection,
  isNumberedRoad,
  isStreetType,
  isStrongType,
} from './street-words';

/** An address as a row gives it, cut into the parts that could be told apart. */
export interface AddressSaid {
  readonly number: string | null;
  readonly street: string | null;
  /** Apartment, suite or lot, without the word. */
  readonly unitNo: string | null;
  readonly city: string | null;
  readonly state: string | null;
  readonly postcode: string | null;
  /** One line for a person and for looking the address up; holds no apartment. */
  readonly text: string;
  /** What stood beside the address: "(blue house)", the name of a business. */
  readonly note: string;
}

export interface AddressCells {
  readonly whole: string;
  readonly number: string;
  readonly street: string;
  readonly unit: string;
  readonly city: string;
  readonly state: string;
  readonly postcode: string;
}

const UNIT_WORD =
  'apt|apartment|apmt|aptmt|unit|ste|suite|rm|room|lot|trlr|trailer|fl|floor|bldg|building|spc|space|slip|flat|apto|depto|ph|no';
const UNIT_NAME = String.raw`(?:\d[a-z0-9-]{0,6}|[a-z](?:-?\d{1,4})?[a-z]?)`;
const UNIT = new RegExp(
  String.raw`(?:[,;/]\s*|\s|^)(?:(?:${UNIT_WORD})\b\.?\s*(?:no\.?|#|:)?\s*#?|#\s*)(${UNIT_NAME})(?![a-z0-9])`,
  'gi',
);
const FLOOR_WORD =
  /[,\s]+(upper|lower|upstairs|downstairs|rear|front|basement|bsmt|2nd fl(?:oor)?|1st fl(?:oor)?|3rd fl(?:oor)?)\s*$/i;
const NUMBER =
  /^(?:#|no\.?\s+)?(\d{1,6}(?:\s?-\s?\d{1,5})?(?:(?:[a-z]|\s[a-d])(?=[\s,])(?!\s*$))?(?: 1\/2)?)[\s,]+(?=\S)/i;
const NO_ADDRESS =
  /^(?:unknown|refused|declined|see (?:notes?|remarks|msg|message|below|above)|on file|same|not given|none|no address|will call back|did ?n.?t (?:say|give|leave)\b.*|would ?n.?t (?:say|give)\b.*)\.?$/i;

/** Joins and cuts an address that stands in one cell or in several. */
export function readAddress(
  cells: AddressCells,
  cities: readonly string[] = [],
): AddressSaid | null {
  const street = blankOut(cells.street);
  const number = blankOut(cells.number).replace(/\.0$/, '');
  let whole = blankOut(cells.whole);
  if (street) {
    const numbered = number && !startsWithNumber(street, number) ? `${number} ${street}` : street;
    whole = whole && !includesText(whole, numbered) ? `${numbered}, ${whole}` : whole || numbered;
  } else if (number && whole && !startsWithNumber(whole, number)) {
    whole = `${number} ${whole}`;
  }
  const cut = whole ? cutWhole(whole, cities) : EMPTY;
  const unitCell = blankOut(cells.unit);
  const unitNo = unitCell ? unitOf(unitCell) : cut.unitNo;
  // "Port Ness, NC 27999" in the town's cell
  const town = /^(.*?),?(?:\s+([A-Za-z]{2}))?,?\s+(\d{5}(?:-\d{4})?)$/.exec(blankOut(cells.city));
  const city = titled(town?.[1] ?? blankOut(cells.city)) || cut.city;
  const state = (blankOut(cells.state) || (town?.[2] ?? '')).toUpperCase() || cut.state;
  const postcode = blankOut(cells.postcode).replace(/^'|\.0$/g, '') || (town?.[3] ?? cut.postcode);
  if (!cut.street && !city && !postcode) return null;
  const line = [cut.number, cut.street].filter(Boolean).join(' ');
  const text = [line, city, [state, postcode].filter(Boolean).join(' ')].filter(Boolean).join(', ');
  return {
    number: cut.number,
    street: cut.street,
    unitNo: unitNo || null,
    city: city || null,
    state: state || null,
    postcode: postcode || null,
    text,
    note: cut.note,
  };
}

/** An address in running text, such as "pls go to 12 Cape Loop Rd". */
export function findAddress(message: string, cities: readonly string[] = []): AddressSaid | null {
  const words = message.replace(/\s+/g, ' ').split(/(?<=\s)/);
  for (let i = 0; i < words.length; i++) {
    if (!/^#?\d{1,5}[a-z]?\s$/i.test(words[i] ?? '')) continue;
    for (let j = i + 2; j < Math.min(i + 6, words.length); j++) {
      const word = bare(words[j] ?? '');
      if (!/^[a-z']+$/.test(bare(words[j - 1] ?? '')) && j === i + 2) break;
      const isLast = /[,.;:]\s*$/.test(words[j] ?? '') || !isStrongType(bare(words[j + 1] ?? ''));
      if (isStrongType(word) && isLast) {
        const after = words.slice(j + 1).join('');
        const unit = unitAfter(after);
        const line = words
          .slice(i, j + 1)
          .join('')
          .trim()
          .replace(/[,;:]$/, '');
        const whole = `${line} ${unit}${cityAfter(after.slice(unit.length), cities)}`;
        return readAddress({ ...NO_CELLS, whole }, cities);
      }
    }
  }
  return null;
}

/** Number and street in the one form in which two rows are compared, or null without both. */
export function addressKey(address: Pick<AddressSaid, 'number' | 'street'>): string | null {
  if (!address.number || !address.street) return null;
  return `${bare(address.number).replace(/\s/g, '')} ${streetKey(address.street)}`;
}

export function streetKey(street: string): string {
  return bare(street).split(' ').map(canonicalWord).join(' ');
}

/** Whether a text begins like an address: a house number, then a name. For guessing columns. */
export function looksLikeAddress(raw: string): boolean {
  const text = raw.trim();
  const match = NUMBER.exec(text);
  if (!match) return false;
  const words = bare(text.slice(match[0].length)).split(' ');
  return (
    words.some(isStreetType) ||
    (/^[a-z]{3,}/.test(words[0] ?? '') && words.length <= 8 && /,/.test(text))
  );
}

/** Whether a text is a street without a house number. */
export function looksLikeStreet(raw: string): boolean {
  const words = bare(raw).split(' ');
  return (
    !/^\d/.test(raw.trim()) &&
    words.length >= 2 &&
    words.length <= 6 &&
    words.slice(1).some(isStrongType)
  );
}

const NO_CELLS: AddressCells = {
  whole: '',
  number: '',
  street: '',
  unit: '',
  city: '',
  state: '',
  postcode: '',
};
const EMPTY: AddressSaid = {
  number: null,
  street: null,
  unitNo: null,
  city: null,
  state: null,
  postcode: null,
  text: '',
  note: '',
};

function cutWhole(raw: string, cities: readonly string[]): AddressSaid {
  const notes: string[] = [];
  let text = raw
    .replace(/[\r\n]+/g, ', ')
    .replace(/\(([^)]*)\)/g, (_, inside: string) => {
      const unit = new RegExp(`^(?:${UNIT_WORD})\\b|^#`, 'i').test(inside.trim());
      if (!unit) notes.push(inside.trim());
      return unit ? ` ${inside}` : ' ';
    })
    .replace(/\s+/g, ' ')
    .replace(/^["'\s,]+|["'\s,.]+$/g, '');
  text = text.replace(/,?\s*\bU\.?S\.?A?\.?$/i, '');

  let postcode: string | null = null;
  let state: string | null = null;
  text = text.replace(
    /[,\s]+(\d{5})(?:-\d{4})?$/,
    (match: string, zip: string) => ((postcode = match.trim().replace(/^,\s*/, '') || zip), ''),
  );
  text = text.replace(/(,\s*|\s)([A-Z]{2})\.?$/, (match: string, gap: string, code: string) => {
    const isState =
      (postcode !== null || gap.startsWith(',')) &&
      !isStreetType(code.toLowerCase()) &&
      !isDirection(code.toLowerCase());
    if (isState) state = code;
    return isState ? '' : match;
  });

  const units: string[] = [];
  const takeUnit = (part: string): string =>
    part
      .replace(UNIT, (match: string, unit: string) => {
        if (/^\s*no\b/i.test(match) && !/\d/.test(unit)) return match;
        units.push(unit.toUpperCase());
        return ' ';
      })
      .replace(FLOOR_WORD, (_, floor: string) => (units.push(floor.toUpperCase()), ''));

  const segments = text.split(/\s*[,;|]\s*/).filter(Boolean);
  const isUnit = (segment: string): boolean => takeUnitTest.test(segment);
  const start = segments.findIndex(
    (segment) => NUMBER.test(`${segment} `) && !/^\d+[a-z]?$/i.test(segment),
  );
  const loneNumber = segments.findIndex((segment) => /^\d{1,6}[a-z]?$/i.test(segment));
  let at = start;
  if (start < 0 && loneNumber >= 0 && segments[loneNumber + 1]) {
    // "12, Cape Loop Rd"
    segments.splice(loneNumber, 2, `${segments[loneNumber]} ${segments[loneNumber + 1]}`);
    at = loneNumber;
  }
  for (const segment of segments.slice(0, Math.max(at, 0))) {
    if (isUnit(segment)) takeUnit(` ${segment}`);
    else notes.push(segment);
  }
  const line = takeUnit(` ${segments[Math.max(at, 0)] ?? ''}`).trim();
  let city: string | null = null;
  for (const segment of segments.slice(Math.max(at, 0) + 1)) {
    const left = takeUnit(` ${segment}`).trim();
    if (!left) continue;
    if (units.length === 0 && /^(?:\d{1,4}[a-z]?|[a-z]\d{0,3})$/i.test(left))
      units.push(left.toUpperCase());
    else if (/^[A-Z]{2}$/.test(left) && !state) state = left;
    else if (!city && !/\d/.test(left)) city = left;
    else notes.push(left);
  }
  const split = splitLine(line, cities, city === null);
  if (split.unit) units.push(split.unit);
  return {
    number: split.number,
    street: split.street ? titled(split.street) : null,
    unitNo: units.join(' ') || null,
    city: titled(city ?? split.city ?? '') || null,
    state,
    postcode,
    text: '',
    note: notes.filter(Boolean).join('; '),
  };
}

const takeUnitTest = new RegExp(`^(?:(?:${UNIT_WORD})\\b\\.?|#)`, 'i');

/** "12 Cape Loop Rd 4B Port Ness" without a comma to help. */
function splitLine(
  line: string,
  cities: readonly string[],
  mayHoldCity: boolean,
): { number: string | null; street: string; unit: string | null; city: string | null } {
  const match = NUMBER.exec(line);
  let number = match ? (match[1] ?? '').replace(/\s/g, '').toUpperCase() : null;
  let street = match ? line.slice(match[0].length).trim() : line;
  let city: string | null = null;
  if (mayHoldCity) {
    const folded = plain(street);
    const known = cities
      .filter((name) => folded.endsWith(` ${plain(name)}`))
      .sort((a, b) => b.length - a.length)[0];
    if (known) {
      city = known;
      street = street.slice(0, street.length - known.length).trim();
    }
  }
  const words = street.split(' ');
  const types = words.map((word) => bare(word));
  let end = types.findIndex(
    (word, i) =>
      (i > 0 && isStreetType(word) && !isStreetType(types[i + 1] ?? '')) ||
      (isNumberedRoad(word) && /^\d/.test(types[i + 1] ?? '')),
  );
  for (let i = end + 1; end >= 0 && i < types.length; i++)
    if (isStrongType(types[i] ?? '')) end = i;
  let unit: string | null = null;
  if (end >= 0) {
    if (isNumberedRoad(types[end] ?? '') && /^\d/.test(types[end + 1] ?? '')) end++;
    while (isDirection(types[end + 1] ?? '')) end++;
    const next = types[end + 1] ?? '';
    let after = end + 1;
    if (/^(?:\d{1,4}[a-z]?|[a-z]\d{0,3}|[a-z])$/.test(next)) {
      if (!number && /^\d/.test(next))
        number = next.toUpperCase(); // "Cape Loop Rd 12"
      else unit = next.toUpperCase();
      after++;
    }
    const rest = words.slice(after).join(' ');
    if (rest && mayHoldCity && !city && !/\d/.test(rest)) {
      city = rest;
      street = words.slice(0, end + 1).join(' ');
    } else if (!rest) street = words.slice(0, end + 1).join(' ');
  }
  return { number, street, unit, city };
}

function unitOf(cell: string): string {
  const match = new RegExp(UNIT.source, 'i').exec(` ${cell}`);
  return (match?.[1] ?? cell)
    .replace(/^#\s*|\.0$/g, '')
    .trim()
    .toUpperCase();
}

function unitAfter(text: string): string {
  const words = UNIT_WORD.replace('|no', '');
  const match = new RegExp(
    `^[,\\s]*(?:(?:${words})\\b\\.?\\s*#?|#\\s*)${UNIT_NAME}(?![a-z0-9])`,
    'i',
  ).exec(text);
  return match ? match[0] : '';
}

function cityAfter(text: string, cities: readonly string[]): string {
  const rest = bare(text);
  const city = cities.find((name) => rest.startsWith(bare(name)));
  return city ? `, ${city}` : '';
}

/** All-capital and all-small text in the way that signs are written; mixed text is left alone. */
function titled(text: string): string {
  if (!/[a-z]/i.test(text) || (/[a-z]/.test(text) && /[A-Z]/.test(text))) return text.trim();
  return text
    .trim()
    .toLowerCase()
    .replace(
      /(^|[\s\-/(.])([a-z\u00e0-\u00ff])/g,
      (_, gap: string, letter: string) => gap + letter.toUpperCase(),
    );
}

const blankOut = (cell: string): string =>
  saysNothing(cell) || NO_ADDRESS.test(cell.trim()) ? '' : cell.trim();

const startsWithNumber = (text: string, number: string): boolean =>
  bare(text).startsWith(`${bare(number)} `);

const includesText = (whole: string, part: string): boolean => bare(whole).includes(bare(part));
