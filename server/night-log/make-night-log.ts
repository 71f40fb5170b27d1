import type { UnitKind } from '@shared/domain/cold-unit';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import type { Instant } from '@shared/domain/instant';
import type { LocalDateTime } from '@shared/domain/night-log/local-time';
import { SeededRandom } from '@shared/domain/planner/random';
import { drawStyle } from './log-style';
import type { LogStyle, StyleWish } from './log-style';
import {
  AGAIN_REMARKS,
  DANGER_REMARKS,
  FAMILY_NAMES,
  GIVEN_NAMES,
  MEDICINE_REMARKS,
  NO_DANGER_REMARKS,
  NO_MEDICINE_REMARKS,
  NOT_OURS,
  TROUBLES,
  UNIT_WORDINGS,
} from './log-words';
import type { TitledField } from './log-words';
import {
  encodeLog,
  quoteCell,
  typo,
  writeAddress,
  writeDate,
  writeName,
  writePhone,
  writeTime,
} from './write-log';
import { zoneClock } from './zone-clock';

export interface LogAddress {
  readonly number: string;
  readonly street: string;
  readonly unit?: string;
  readonly city: string;
  readonly postcode: string;
  readonly lon: number;
  readonly lat: number;
}

export interface NightLogOrder {
  readonly seed: number;
  /** Rows below the titles, the empty and unreadable ones among them. */
  readonly rows: number;
  /** Where the callers live; one household each. */
  readonly addresses: readonly LogAddress[];
  readonly night: { readonly fromAt: Instant; readonly toAt: Instant };
  /** IANA name of the region's time zone. */
  readonly zone: string;
  readonly areaCode?: string;
  readonly style?: StyleWish;
  /** Share of streets and messages that are mistyped, 0 to 1. */
  readonly typoRate?: number;
}

/** What a row means, known because it was made so. */
export interface RowTruth {
  /** Position among the rows below the titles, from 0. */
  readonly row: number;
  readonly kind: 'call' | 'aside' | 'empty';
  /** Why a row has to be set aside. */
  readonly why: 'phone-cut-short' | 'nothing-to-go-by' | 'not-a-cold-unit' | null;
  /** Rows with the same number are one household; -1 for rows that are no call. */
  readonly household: number;
  readonly name: string | null;
  readonly phoneE164: string | null;
  readonly receivedAt: Instant | null;
  readonly address: LogAddress | null;
  readonly unitKinds: readonly UnitKind[];
  readonly medicine: boolean;
  readonly danger: boolean;
  readonly powerOutAt: Instant | null;
  readonly powerBackAt: Instant | null;
}

export interface MadeNightLog {
  readonly bytes: Uint8Array;
  readonly style: LogStyle;
  readonly truth: readonly RowTruth[];
}

interface Caller {
  readonly first: string;
  readonly last: string;
  readonly phone: string;
  readonly address: LogAddress;
  readonly wording: string;
  readonly unitKinds: readonly UnitKind[];
}

/** Of a hundred rows: how many repeat a household, say nothing, or cannot be used. */
const REPEATS_PERCENT = 14;
const EMPTY_PERCENT = 3;
const ASIDE_PERCENT = 4;

/**
 * Makes a log of one night as an answering service of some invented mind would deliver it, together
 * with what each row means. The same order gives the same bytes.
 */
export function makeNightLog(order: NightLogOrder): MadeNightLog {
  const random = new SeededRandom(order.seed);
  const style = drawStyle(random, order.style);
  const zone = zoneClock(order.zone);
  const times = timesOf(order, random, style);
  const powerOut = roundTo(order.night.fromAt - 30 * MINUTE_MS, 5);
  const callers: Caller[] = [];
  const rows: { cells: Record<TitledField, string>; truth: RowTruth }[] = [];
  const said = new Map<number, number>();

  for (let row = 0; row < order.rows; row++) {
    const at = times[row] ?? order.night.fromAt;
    const kind = random.below(100);
    if (kind < EMPTY_PERCENT) {
      rows.push({ cells: blankCells(), truth: emptyTruth(row) });
      continue;
    }
    const repeats = kind < EMPTY_PERCENT + REPEATS_PERCENT && callers.length > 5;
    const again = repeats ? pickAgain(callers, said, random) : null;
    const household = again ?? callers.length;
    const caller = again === null ? newCaller(order, household, random) : callers[again];
    if (!caller) continue;
    if (again === null) callers.push(caller);
    said.set(household, (said.get(household) ?? 0) + 1);
    const unusable = again === null && random.below(100) < ASIDE_PERCENT;
    rows.push(
      callRow({
        order,
        style,
        random,
        zone,
        row,
        at,
        household,
        caller,
        isAgain: again !== null,
        unusable,
        powerOut,
      }),
    );
  }
  const text = layOut(
    rows.map(({ cells }) => cells),
    style,
    order,
    zone.toLocal(order.night.fromAt),
    random,
  );
  return { bytes: encodeLog(text, style.encoding), style, truth: rows.map(({ truth }) => truth) };
}

function callRow(of: {
  order: NightLogOrder;
  style: LogStyle;
  random: SeededRandom;
  zone: ReturnType<typeof zoneClock>;
  row: number;
  at: Instant;
  household: number;
  caller: Caller;
  isAgain: boolean;
  unusable: boolean;
  powerOut: Instant;
}): { cells: Record<TitledField, string>; truth: RowTruth } {
  const { order, style, random, zone, caller } = of;
  const one = <T>(choices: readonly T[]): T => choices[random.below(choices.length)] as T;
  const chance = (percent: number): boolean => random.below(100) < percent;
  const why: RowTruth['why'] = of.unusable
    ? one(['phone-cut-short', 'nothing-to-go-by', 'not-a-cold-unit'] as const)
    : null;
  const typoRate = order.typoRate ?? 0.05;
  const mistype = (text: string): string => (random.unit() < typoRate ? typo(text, random) : text);

  const asksMedicine = style.fields.includes('medicine');
  const medicine = why === null && chance(9);
  const danger = why === null && chance(5);
  const remarks: string[] = [of.isAgain ? one(AGAIN_REMARKS) : mistype(one(TROUBLES))];
  if (style.units === 'in-message' && why !== 'not-a-cold-unit' && !(of.isAgain && chance(30)))
    remarks.unshift(caller.wording);
  const unitsSaid = style.units === 'column' || remarks.includes(caller.wording);
  if (medicine && !asksMedicine) remarks.push(one(MEDICINE_REMARKS));
  else if (!asksMedicine && chance(12)) remarks.push(one(NO_MEDICINE_REMARKS));
  if (danger) remarks.push(one(DANGER_REMARKS));
  else if (chance(10)) remarks.push(one(NO_DANGER_REMARKS));
  const back = chance(70) ? roundTo(of.powerOut + (1 + random.unit()) * HOUR_MS, 5) : null;
  const knowsPower = style.power !== 'none' && of.at > (back ?? of.powerOut) + 15 * MINUTE_MS;
  const clock = style.clock === '24h-compact' ? '24h' : style.clock;
  const outText = writeTime(zone.toLocal(of.powerOut), clock);
  const backText = back === null ? 'still out' : writeTime(zone.toLocal(back), clock);
  if (knowsPower && style.power === 'in-message')
    remarks.push(`power out ${outText}${back === null ? ', still out' : `, back ${backText}`}`);
  if (why === 'not-a-cold-unit') remarks.splice(0, remarks.length, `${one(NOT_OURS)} will not run`);

  // Somebody else of the household calls from another telephone, and gives the first as well.
  const otherPhone = of.isAgain && why === null && chance(15);
  const phone = why === 'phone-cut-short' ? caller.phone.slice(0, -1) : caller.phone;
  if (otherPhone) remarks.push(`cb ${writePhone(caller.phone, 1, order.areaCode)}`);
  const local = zone.toLocal(of.at);
  const address = writeAddress(caller.address, style.address, random, (street) =>
    why === null ? mistype(street) : street,
  );
  const blankPlace = why === 'nothing-to-go-by';
  const cells: Record<TitledField, string> = {
    ...blankCells(),
    callId: String(1001 + of.row),
    receivedAt: [writeDate(local, style.date), writeTime(local, style.clock)]
      .filter(Boolean)
      .join(style.date === 'iso' && style.clock === '24h' ? 'T' : ' '),
    receivedDate: writeDate(local, style.date),
    receivedTime: writeTime(local, style.clock),
    ...writeName(caller.first, caller.last, style.name),
    phone:
      why === 'nothing-to-go-by'
        ? ''
        : otherPhone
          ? ''
          : why === 'phone-cut-short'
            ? phone.slice(2)
            : writePhone(phone, random.below(12), order.areaCode),
    altPhone: '',
    ...(blankPlace ? {} : address),
    unitKind: why === 'not-a-cold-unit' ? one(NOT_OURS) : caller.wording,
    remarks:
      why === 'nothing-to-go-by'
        ? 'hung up'
        : remarks.join(one([', ', '. ', '; ', style.quotes === 'always' ? '\n' : ', '])),
    powerOutAt: knowsPower ? outText : '',
    powerBackAt: knowsPower ? backText : '',
    medicine: medicine ? one(['Y', 'yes', 'insulin', 'X']) : one(['N', 'no', '', 'none']),
    language: one(['EN', 'EN', 'EN', 'ES']),
    operator: one(['JB', 'KM', 'RT']),
  };
  const truth: RowTruth = {
    row: of.row,
    kind: why === null ? 'call' : 'aside',
    why,
    household: why === null ? of.household : -1,
    name: `${caller.first} ${caller.last}`,
    phoneE164: why === null ? caller.phone : null,
    receivedAt: of.at,
    address: blankPlace ? null : caller.address,
    unitKinds: why === null && unitsSaid ? caller.unitKinds : [],
    medicine:
      medicine || (why === null && caller.unitKinds.includes('medicine-fridge') && unitsSaid),
    danger,
    powerOutAt: knowsPower ? of.powerOut : null,
    powerBackAt: knowsPower ? back : null,
  };
  return { cells, truth };
}

function layOut(
  rows: readonly Record<TitledField, string>[],
  style: LogStyle,
  order: NightLogOrder,
  evening: LocalDateTime,
  random: SeededRandom,
): string {
  const write = (cells: readonly string[]): string =>
    cells.map((cell) => quoteCell(cell, style)).join(style.delimiter);
  const lines: string[] = [];
  if (style.titleLines)
    lines.push(
      write(['Harbor Bell Night Desk']),
      write([`Calls for ${writeDate(evening, 'slashes')}`]),
      '',
    );
  if (style.hasHeader) lines.push(write(style.titles));
  let lastDate = '';
  for (const row of rows) {
    const cells = style.fields.map((field) => row[field]);
    if (style.date === 'where-it-changes') {
      const at = style.fields.indexOf('receivedDate');
      if (cells[at] === lastDate) cells[at] = '';
      else if (cells[at]) lastDate = cells[at];
    }
    // Some forms leave out the blanks at the end of a row.
    while (random.below(20) === 0 && cells.length > 4 && cells[cells.length - 1] === '')
      cells.pop();
    lines.push(write(cells));
  }
  if (style.footers) lines.push(write(['*** end of log ***']));
  return lines.join(style.newline) + (order.seed % 2 === 0 ? style.newline : '');
}

/** Arrivals over the night in the log's order; where times carry no day they stay in one night. */
function timesOf(order: NightLogOrder, random: SeededRandom, style: LogStyle): Instant[] {
  const { fromAt, toAt } = order.night;
  const times = Array.from({ length: order.rows }, () =>
    roundTo(fromAt + random.unit() * (toAt - fromAt), 1),
  ).sort((a, b) => a - b);
  return style.order === 'newest-first' ? times.reverse() : times;
}

function newCaller(order: NightLogOrder, household: number, random: SeededRandom): Caller {
  const one = <T>(choices: readonly T[]): T => choices[random.below(choices.length)] as T;
  const address = order.addresses[household];
  if (!address)
    throw new Error(`${order.addresses.length} addresses are too few for ${order.rows} rows`);
  const total = UNIT_WORDINGS.reduce((sum, { often }) => sum + often, 0);
  let draw = random.below(total);
  const wording = UNIT_WORDINGS.find(({ often }) => (draw -= often) < 0) ?? UNIT_WORDINGS[0];
  if (!wording) throw new Error('no units to speak of');
  return {
    first: one(GIVEN_NAMES),
    last: one(FAMILY_NAMES),
    phone: fictionalPhone(household, order.areaCode ?? '252'),
    address,
    wording: one(wording.words),
    unitKinds: wording.units,
  };
}

/** 555-0100 to 555-0199 are set aside for fiction; a hundred to each area code. */
function fictionalPhone(household: number, areaCode: string): string {
  const block = Math.floor(household / 100);
  let area = Number(areaCode);
  for (let i = 0; i < block; i++) {
    area++;
    while (area % 100 === 11 || area > 989) area = area > 989 ? 202 : area + 1;
  }
  return `+1${area}5550${100 + (household % 100)}`;
}

function pickAgain(
  callers: readonly Caller[],
  said: ReadonlyMap<number, number>,
  random: SeededRandom,
): number | null {
  // Those who called lately call again, up to four times in all.
  for (let tries = 0; tries < 8; tries++) {
    const household = callers.length - 1 - random.below(Math.min(callers.length, 40));
    if ((said.get(household) ?? 0) < 4) return household;
  }
  return null;
}

const roundTo = (at: Instant, minutes: number): Instant =>
  Math.floor(at / (minutes * MINUTE_MS)) * minutes * MINUTE_MS;

function blankCells(): Record<TitledField, string> {
  return {
    callId: '',
    receivedAt: '',
    receivedDate: '',
    receivedTime: '',
    callerName: '',
    firstName: '',
    lastName: '',
    phone: '',
    altPhone: '',
    address: '',
    streetNumber: '',
    street: '',
    unitNo: '',
    city: '',
    postcode: '',
    unitKind: '',
    remarks: '',
    powerOutAt: '',
    powerBackAt: '',
    medicine: '',
    language: '',
    operator: '',
  };
}

function emptyTruth(row: number): RowTruth {
  return {
    row,
    kind: 'empty',
    why: null,
    household: -1,
    name: null,
    phoneE164: null,
    receivedAt: null,
    address: null,
    unitKinds: [],
    medicine: false,
    danger: false,
    powerOutAt: null,
    powerBackAt: null,
  };
}
