import { COMPARTMENTS_OF } from '../cold-unit';
import { findPhones, readPhone } from '../phone-number';
import type { PhoneNumber, PhoneOptions } from '../phone-number';
import { findAddress, readAddress } from './address-text';
import type { AddressSaid } from './address-text';
import { cellsOf } from './column-map';
import type { ColumnMap, ColumnRole } from './column-map';
import { readDangers } from './danger-words';
import { readMedicine, readMedicineCell } from './medicine-words';
import type { MedicineSaid } from './medicine-words';
import type { NightCall, RowResult } from './night-call';
import type { Received } from './night-clock';
import { joinName, readName } from './person-name';
import { plain, saysNothing } from './plain-text';
import { readPower } from './power-times';
import type { PowerSetting } from './power-times';
import { readUnits } from './read-units';

/** What a row alone cannot tell. */
export interface RowSetting {
  readonly received: Received;
  readonly power: Omit<PowerSetting, 'receivedAt'>;
  readonly areaCode: string | null;
  /** The towns of the region, so that "12 Cape Loop Rd Port Ness" can be cut. */
  readonly cities: readonly string[];
}

/**
 * Reads one row as a call, or says in words why a person has to.
 *
 * @param cells as many as the map has columns
 * @param further lines of the message that stood in rows of their own
 */
export function understandRow(
  cells: readonly string[],
  map: ColumnMap,
  setting: RowSetting,
  further = '',
): RowResult {
  const of = (role: ColumnRole): string =>
    cellsOf(map, cells, role)
      .map((cell) => cell.trim())
      .filter(Boolean)
      .join(' ');
  const doubts: string[] = [];
  const message = [...cellsOf(map, cells, 'remarks'), further]
    .map((cell) => cell.trim())
    .filter((cell) => !saysNothing(cell))
    .join(' / ');
  const details = labelled(map, cells);
  // A line break ends a thought: "insulin: no" must not run on into the next line.
  const told = [message, details]
    .filter(Boolean)
    .join(' / ')
    .replace(/\s*[\r\n]+\s*/g, ' ; ');

  const who = nameOf(of);
  const reached = phonesOf(map, cells, told, { areaCode: setting.areaCode });
  doubts.push(...reached.doubts);
  // "Wren Ashgrove 252-555-0142" in the one column for both
  const hasNames = NAMES.some((role) => cellsOf(map, cells, role).length > 0);
  const isName = /^\p{Lu}[\p{L}'. -]+$/u.test(reached.beside) && !NOT_A_NAME.test(reached.beside);
  const beside = hasNames || !isName ? null : readName(reached.beside).name;
  const address = addressOf(of, map, cells, told, setting.cities, doubts);

  const unitCell = cellsOf(map, cells, 'unitKind')
    .map((cell) => cell.trim())
    .filter((cell) => !saysNothing(cell))
    .join(' + ');
  const unitsSaid = readUnits(unitCell, [told, of('contents')].filter(Boolean).join(' . '));
  doubts.push(...unitsSaid.doubts);
  const everything = spoken(map, cells, further);
  const medicine = medicineOf(map, cells, everything);
  const power = readPower(
    { out: of('powerOutAt'), back: of('powerBackAt'), hours: of('hoursOut'), message: told },
    { ...setting.power, receivedAt: setting.received.at },
  );
  doubts.push(...power.doubts);
  if (setting.received.doubt) doubts.push(setting.received.doubt);
  if (unitsSaid.units.length === 0) doubts.push('no appliance is named');

  const call: NightCall = {
    name: who.name ?? beside,
    business: who.business,
    phone: reached.phone,
    otherPhones: reached.others,
    address,
    receivedAt: setting.received.at,
    receivedAtIs: setting.received.is,
    units: unitsSaid.units.map((unit) => ({ ...unit, compartments: COMPARTMENTS_OF[unit.kind] })),
    medicine,
    dangers: dangersOf(map, cells, everything),
    language: languageOf(map, cells, `${told} ${unitCell}`),
    contents: of('contents'),
    remarks: [message, reached.rest, who.note, address?.note ?? '', details]
      .filter(Boolean)
      .join(' / '),
    powerOutAt: power.outAt,
    powerBackAt: power.backAt,
    powerStillOut: power.stillOut,
    saysRunning: unitsSaid.running || CALLS_OFF.test(plain(told)),
    doubts,
  };
  const reason = whyAside(
    call,
    reached,
    unitsSaid.other,
    `${of('callerName')} ${message} ${unitCell} ${details}`,
  );
  return reason === null ? { kind: 'understood', call } : { kind: 'aside', reason, call };
}

const CALLS_OFF =
  /\b(?:cancel(?:led|ed)?|disregard|never ?mind|(?:running|working|cooling) again|came back on its own|all good now|no longer needed|fixed itself|back on now and (?:cold|running)|ya (?:funciona|sirve))\b/;
const NO_CALL =
  /\b(?:wrong (?:number|no|#)|test (?:call|message|msg)|hang ?-?up|hung up|no message left|dead air|static on (?:the )?line|(?:call|caller) (?:dropped|disconnected|cut off)|no one (?:there|on (?:the )?line)|sales call|solicit\w*|telemarket\w*|robo ?call|fax tone|prank|pocket dial|butt dial|do not dispatch|shift change|relief operator|numero equivocado|billing|invoice|vendor|job application|wants (?:a )?(?:receipt|quote|price))\b/;

function whyAside(
  call: NightCall,
  reached: Reached,
  other: string | null,
  words: string,
): string | null {
  const place = call.address?.street ?? null;
  if (reached.unreadable && !call.phone)
    return `the phone number cannot be read: ${reached.unreadable}`;
  if (!call.phone && !place) {
    const said = [call.name, call.address?.city].filter(Boolean).join(', ');
    return `no phone number and no address${said ? ` (only ${said})` : ''}`;
  }
  const noCall = NO_CALL.exec(plain(words));
  if (noCall && call.units.length === 0) return `the message says "${noCall[0]}"`;
  if (other && call.units.length === 0) return `it names ${other}, no cold unit`;
  return null;
}

interface Reached {
  readonly phone: PhoneNumber | null;
  readonly others: readonly PhoneNumber[];
  readonly rest: string;
  /** What stood in the phone's own cell beside the number. */
  readonly beside: string;
  readonly unreadable: string | null;
  readonly doubts: readonly string[];
}

/** The number to call back, wherever in the row it stands. */
function phonesOf(
  map: ColumnMap,
  cells: readonly string[],
  message: string,
  options: PhoneOptions,
): Reached {
  const numbers: PhoneNumber[] = [];
  const rests: string[] = [];
  const doubts: string[] = [];
  let unreadable: string | null = null;
  const read = (cell: string, isMain: boolean): void => {
    const reading = readPhone(cell, options);
    if (reading.kind === 'number') {
      numbers.push(reading.number, ...reading.others);
      doubts.push(...reading.doubts);
      if (reading.rest && /[a-z]{3}|\d{2}/i.test(reading.rest)) rests.push(reading.rest);
    } else if (reading.kind === 'unreadable') {
      if (isMain) unreadable = reading.why;
      rests.push(cell.trim());
    } else if (reading.kind === 'withheld' && isMain)
      doubts.push('the caller’s number was withheld');
  };
  for (const cell of cellsOf(map, cells, 'phone')) read(cell, true);
  const main = numbers[0] ?? null;
  const beside = rests[0] ?? '';
  for (const cell of cellsOf(map, cells, 'altPhone')) read(cell, false);
  const inMessage = findPhones(message, options);
  numbers.push(...inMessage);
  if (numbers.length === 0) {
    for (const { index, role } of map.columns) {
      if (['phone', 'altPhone', 'remarks', 'receivedAt', 'callId'].includes(role)) continue;
      numbers.push(...findPhones(cells[index] ?? '', { areaCode: null }));
    }
  }
  const different = numbers.filter(
    (number, i) => numbers.findIndex(({ e164 }) => e164 === number.e164) === i,
  );
  const [phone = null, ...others] = different;
  if (phone && !main && unreadable)
    doubts.push(
      `the phone number cannot be read (${String(unreadable)}); another in the row was taken`,
    );
  else if (!phone && !unreadable) doubts.push('no phone number');
  return { phone, others, rest: rests.join(' / '), beside, unreadable, doubts };
}

const NAMES: readonly ColumnRole[] = ['callerName', 'firstName', 'lastName', 'business'];
const NOT_A_NAME =
  /\b(?:call|after|before|ask|cell|home|work|no name|or|text|only|ext|mobile|night|day|landline)\b/i;

type Cell = (role: ColumnRole) => string;

function nameOf(of: Cell): { name: string | null; business: string | null; note: string } {
  const first = of('firstName');
  const last = of('lastName');
  const whole = of('callerName');
  // "Name" beside "First" holds the last name.
  const isLast =
    whole !== '' && first !== '' && last === '' && !plain(whole).includes(plain(first));
  const raw = whole && !isLast ? whole : joinName(first, isLast ? whole : last);
  const { name, note } = readName(raw);
  const business = saysNothing(of('business')) ? null : of('business');
  return { name: name ?? null, business, note };
}

function addressOf(
  of: Cell,
  map: ColumnMap,
  row: readonly string[],
  message: string,
  cities: readonly string[],
  doubts: string[],
): AddressSaid | null {
  const cells = {
    whole: cellsOf(map, row, 'address')
      .map((cell) => cell.trim())
      .filter(Boolean)
      .join(', '),
    number: of('streetNumber'),
    street: of('street'),
    unit: of('unitNo'),
    city: of('city'),
    state: of('state'),
    postcode: of('postcode'),
  };
  const address = readAddress(cells, cities);
  if (address?.street) {
    if (!address.number) doubts.push('no house number');
    if (/\bp\.? ?o\.? ?box\b/i.test(address.text)) doubts.push('the address is a post office box');
    return address;
  }
  const found = findAddress(message, cities);
  if (found) {
    doubts.push('the address was taken from the message');
    return { ...found, city: found.city ?? address?.city ?? null };
  }
  doubts.push('no address');
  return address;
}

/** Cells that are kept with the message under their own title. */
function labelled(map: ColumnMap, cells: readonly string[]): string {
  return map.columns
    .filter(({ role, index }) => role === 'detail' && !saysNothing(cells[index] ?? ''))
    .map(({ header, index }) => `${header ? `${header}: ` : ''}${(cells[index] ?? '').trim()}`)
    .join(' / ');
}

const SILENT: ReadonlySet<ColumnRole> = new Set<ColumnRole>([
  'phone',
  'altPhone',
  'receivedAt',
  'receivedDate',
  'receivedTime',
  'city',
  'state',
  'postcode',
  'streetNumber',
  'street',
  'unitNo',
  'callId',
  'medicine',
  'danger',
  'firstName',
  'lastName',
  'language',
  'powerOutAt',
  'powerBackAt',
  'hoursOut',
]);

/** All that was said, cell by cell; even a column that is not used may hold the word insulin. */
function spoken(map: ColumnMap, cells: readonly string[], further: string): string {
  return [
    ...map.columns
      .filter(
        ({ role, index }) =>
          !SILENT.has(role) && !/^\s*med(?:ium)?\.?\s*$/i.test(cells[index] ?? ''),
      )
      .map(({ index }) => (cells[index] ?? '').trim()),
    further,
  ]
    .filter(Boolean)
    .join(' | ')
    .replace(/\s*[\r\n]+\s*/g, ' ; ');
}

function medicineOf(map: ColumnMap, cells: readonly string[], everything: string): MedicineSaid {
  const said = [readMedicine(everything)];
  for (const { role, index, header } of map.columns) {
    if (role === 'medicine') said.push(readMedicineCell(cells[index] ?? '', header));
  }
  const kinds = [...new Set(said.flatMap((one) => one.kinds))];
  return {
    mentioned: said.some(({ mentioned }) => mentioned),
    kinds: kinds.length > 1 ? kinds.filter((kind) => kind !== 'label-not-read') : kinds,
    words: [...new Set(said.flatMap(({ words }) => words))],
  };
}

function dangersOf(
  map: ColumnMap,
  cells: readonly string[],
  everything: string,
): NightCall['dangers'] {
  const found = new Set(readDangers(everything));
  for (const { role, index, header } of map.columns) {
    if (role !== 'danger') continue;
    const cell = plain(cells[index] ?? '');
    for (const danger of readDangers(cell)) found.add(danger);
    if (/^(?:y|yes|x|1|t|true|si)\b/.test(cell)) {
      const titled = readDangers((header ?? '').replace(/[/]/g, ' and '));
      for (const danger of titled.length > 0 ? titled : (['smoke'] as const)) found.add(danger);
    }
  }
  return [...found];
}

const LANGUAGES: readonly [string, RegExp][] = [
  [
    'es',
    /\b(?:spanish|span\b|espanol|habla(?:n)? espa|solo espa|sp(?:anish)? speak\w*|es speaker|se habla|no (?:habla|speak) (?:ingles|english))/,
  ],
  ['haitian creole', /\b(?:haitian|creole|kreyol)\b/],
  ['vietnamese', /\b(?:vietnamese|viet)\b/],
  ['chinese', /\b(?:chinese|mandarin|cantonese)\b/],
  ['french', /\bfrench(?! door)\b/],
  ['portuguese', /\bportuguese\b/],
  ['russian', /\brussian\b/],
  ['arabic', /\barabic\b/],
  ['korean', /\bkorean\b/],
];
const SPANISH_WORDS =
  /\b(?:nevera|refri|congelador|luz|sin|desde|comida|no enfria|esta|funciona|tiene|llamar|por favor|gracias|leche|carne|anoche|senora?)\b/g;

function languageOf(map: ColumnMap, cells: readonly string[], message: string): string | null {
  for (const { role, index, header } of map.columns) {
    if (role !== 'language') continue;
    const cell = plain(cells[index] ?? '');
    if (saysNothing(cell)) continue;
    if (/^(?:y|yes|x|1|si|true)$/.test(cell))
      return /spanish|espan/.test(plain(header ?? '')) ? 'es' : null;
    if (/^(?:n|no|0|false)$/.test(cell)) return null;
    if (/^(?:en|eng?|english|ingles|e)\b/.test(cell)) return 'en';
    if (/^(?:es|sp|spa?n?|s|spanish|espanol)\b/.test(cell)) return 'es';
    return LANGUAGES.find(([, pattern]) => pattern.test(cell))?.[0] ?? cell;
  }
  const text = plain(message);
  const named = LANGUAGES.find(([, pattern]) => pattern.test(text));
  if (named) return named[0];
  return new Set(text.match(SPANISH_WORDS) ?? []).size >= 2 ? 'es' : null;
}
