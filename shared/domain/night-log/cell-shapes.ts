import { readPhone } from '../phone-number';
import { looksLikeAddress, looksLikeStreet } from './address-text';
import type { ColumnRole } from './column-map';
import { readDangers } from './danger-words';
import { readWhen } from './local-time';
import { readMedicine } from './medicine-words';
import { plain, saysDitto, saysNothing } from './plain-text';
import { namesUnit } from './read-units';

/** What a cell looks like, whatever its column is called. */
export type CellShape =
  | 'phone'
  | 'date'
  | 'time'
  | 'date-time'
  | 'duration'
  | 'address'
  | 'town-line'
  | 'street'
  | 'apartment'
  | 'postcode'
  | 'state'
  | 'unit'
  | 'message'
  | 'name'
  | 'yes-no'
  | 'language'
  | 'number'
  | 'other';

const LANGUAGE =
  /^(?:english|eng?|spanish|span?|sp|es|espanol|creole|french|fr|vietnamese|viet|chinese|mandarin|cantonese|russian|portuguese|arabic|korean|tagalog|polish|german|haitian|ingles)(?: speaking| only| spkr)?$/;

/** The one shape that fits a cell best; null for a cell that says nothing. */
export function shapeOf(raw: string): CellShape | null {
  const text = raw.trim();
  if (saysNothing(text) || saysDitto(text)) return null;
  const folded = plain(text);
  const digits = text.replace(/\D/g, '').length;
  const words = folded.split(' ').length;
  if (/^(?:y|n|yes|no|si|true|false|x)$/.test(folded)) return 'yes-no';
  if (LANGUAGE.test(folded)) return 'language';
  if (digits >= 7 && words <= 8) {
    const phone = readPhone(text, { areaCode: '252' });
    if (phone.kind === 'number' && phone.rest.split(' ').length <= 4 && !looksLikeAddress(text))
      return 'phone';
  }
  if (/^\d{5}(?:-\d{4})?$/.test(text)) return 'postcode';
  // "1A" is a door; a time would be "1a" or "1 AM".
  if (/^\d{1,3}A$/.test(text)) return 'apartment';
  if (digits > 0 && words <= 7) {
    const when = readWhen(text);
    if (
      when.rest === '' &&
      /\d[:.;h]\d{2}|\d\s?[ap]\.?m?\b|[-/]|[a-z]{3}|^\d{3,4}$|^\d{8}|^\d{5}[.,]\d|^0?[.,]\d{3}/.test(
        folded,
      )
    ) {
      if (when.instant !== null || (when.date && when.clock)) return 'date-time';
      if (when.date && when.date.kind !== 'relative') return 'date';
      // A bare "1215" may as well be a house number or a call's number.
      if (when.clock) return /^\d{1,4}$/.test(text) && !/^0\d{3}$/.test(text) ? 'number' : 'time';
    }
  }
  if (/^[~<>]?\s*\d{1,2}(?:[.,]\d)?\+?\s*(?:h|hrs?|hours?|horas?)\b\.?(?: ago)?$/.test(folded))
    return 'duration';
  if (looksLikeAddress(text)) return 'address';
  if (/^\p{L}[\p{L} .'-]+,?(?: [A-Za-z]{2},?)? \d{5}(?:-\d{4})?$/u.test(text)) return 'town-line';
  if (
    /^(?:apt|apartment|unit|ste|suite|lot|rm|room|trlr|flat|fl|apto|spc)\b\.? ?#? ?[a-z0-9-]{1,6}$|^# ?[a-z0-9-]{1,5}$|^\d{1,4}[a-z]$|^[a-z]-?\d{1,3}$/.test(
      folded,
    )
  ) {
    return 'apartment';
  }
  if (/^\d{1,6}$/.test(text)) return 'number';
  if (/^\d[\d.,-]*$/.test(text)) return 'other';
  if (looksLikeStreet(text) && !namesUnit(text, false)) return 'street';
  if (/^[A-Z]{2}$/.test(text)) return 'state';
  if (words <= 7 && namesUnit(text, true)) return 'unit';
  if (words >= 6 || text.length > 40) return 'message';
  if (/^\p{L}[\p{L}'.\u2019 ,&-]+$/u.test(text) && words <= 4) return 'name';
  return words >= 4 ? 'message' : 'other';
}

/** How well a single cell sits in a column of a role, -1 to 1; for finding where a row has slipped. */
export function fit(role: ColumnRole, raw: string): number {
  const shape = shapeOf(raw);
  if (shape === null) return ESSENTIAL.has(role) ? -0.3 : 0;
  const good = FITS[role];
  if (!good) return 0;
  if (good.includes(shape)) return ESSENTIAL.has(role) ? 1 : 0.6;
  if (role === 'remarks' || role === 'detail' || role === 'ignore')
    return shape === 'other' || shape === 'number' ? 0 : -0.4;
  return shape === 'other' || shape === 'message' ? -0.6 : -1;
}

const ESSENTIAL: ReadonlySet<ColumnRole> = new Set<ColumnRole>([
  'phone',
  'receivedAt',
  'receivedTime',
  'address',
]);

const FITS: Readonly<Partial<Record<ColumnRole, readonly CellShape[]>>> = {
  callId: ['number', 'postcode', 'apartment'],
  receivedAt: ['date-time', 'time'],
  receivedDate: ['date'],
  receivedTime: ['time', 'number', 'date-time'],
  callerName: ['name'],
  firstName: ['name'],
  lastName: ['name'],
  business: ['name'],
  phone: ['phone'],
  altPhone: ['phone'],
  address: ['address', 'street', 'town-line'],
  streetNumber: ['number', 'apartment'],
  street: ['street', 'name', 'address'],
  unitNo: ['apartment', 'number', 'state'],
  city: ['name', 'street', 'town-line'],
  state: ['state'],
  postcode: ['postcode'],
  unitKind: ['unit'],
  remarks: ['message', 'unit', 'name', 'other'],
  powerOutAt: ['time', 'date-time', 'duration', 'number'],
  powerBackAt: ['time', 'date-time', 'yes-no', 'number'],
  hoursOut: ['number', 'duration'],
  medicine: ['yes-no', 'name'],
  danger: ['yes-no', 'name'],
  language: ['language'],
};

/** What the cells of one column have in common. */
export interface ColumnSample {
  /** Cells that say something. */
  readonly count: number;
  readonly total: number;
  readonly shapes: ReadonlyMap<CellShape, number>;
  /** Share of different cells among those that say something. */
  readonly distinct: number;
  readonly different: number;
  readonly meanWords: number;
  /** Share of the steps from cell to cell that go the commoner way, on the clock or in number; 0 if few move. */
  readonly rising: number;
  /** Share of steps of exactly one, as of a number that is counted up or down. */
  readonly counting: number;
  /** Share of cells that can be a time such as 0215 or 1930. */
  readonly compactTimes: number;
  /** "still out", "not yet". */
  readonly stillOut: number;
  readonly medicine: number;
  readonly danger: number;
  readonly namesUnits: number;
}

export function sampleColumn(cells: readonly string[]): ColumnSample {
  const said = cells.filter((cell) => !saysNothing(cell) && !saysDitto(cell));
  const shapes = new Map<CellShape, number>();
  for (const cell of said) {
    const shape = shapeOf(cell);
    if (shape) shapes.set(shape, (shapes.get(shape) ?? 0) + 1);
  }
  const count = said.length;
  const share = (test: (cell: string) => boolean): number =>
    count === 0 ? 0 : said.filter(test).length / count;
  const different = new Set(said.map(plain)).size;
  return {
    count,
    total: cells.length,
    shapes: new Map([...shapes].map(([shape, n]) => [shape, n / Math.max(count, 1)])),
    distinct: count === 0 ? 0 : different / count,
    different,
    meanWords:
      said.reduce((sum, cell) => sum + cell.trim().split(/\s+/).length, 0) / Math.max(count, 1),
    rising: risingShare(said),
    counting: countingShare(said),
    compactTimes: share((cell) => /^(?:[01]?\d|2[0-3])[0-5]\d$/.test(cell.trim())),
    stillOut: share((cell) => /^\s*(?:still\b|not (?:yet|back)|sigue)/i.test(cell)),
    medicine: share((cell) => readMedicine(cell).mentioned),
    danger: share((cell) => readDangers(cell).length > 0),
    namesUnits: share((cell) => namesUnit(cell, false)),
  };
}

function risingShare(cells: readonly string[]): number {
  const values = cells.map((cell) => {
    const when = readWhen(cell);
    if (when.instant !== null) return when.instant / 60_000;
    if (when.clock) return when.clock.hour * 60 + when.clock.minute;
    return /^\d+$/.test(cell.trim()) ? Number(cell) : null;
  });
  let up = 0;
  let down = 0;
  let steps = 0;
  for (let i = 1; i < values.length; i++) {
    const before = values[i - 1];
    const now = values[i];
    if (before == null || now == null) continue;
    steps++;
    const step = now - before;
    // Past midnight the clock falls by most of a day.
    if (step > 12 * 60 || (step < 0 && step >= -12 * 60)) down++;
    else if (step !== 0) up++;
  }
  // A time that hardly changes is when the power went, not when people called.
  return steps < 2 || up + down < steps * 0.3 ? 0 : Math.max(up, down) / (up + down);
}

function countingShare(cells: readonly string[]): number {
  const numbers = cells.map((cell) => Number(/\d+$/.exec(cell.trim())?.[0] ?? Number.NaN));
  const steps = numbers.slice(1).map((value, i) => Math.abs(value - (numbers[i] ?? Number.NaN)));
  return steps.length < 2
    ? 0
    : steps.filter((step) => step === 1 || step === 2).length / steps.length;
}
