import { addressKey, streetKey } from './address-text';
import type { Danger } from './danger-words';
import type { NightCall, NightUnit, RowReading } from './night-call';
import { bare, editDistance } from './plain-text';

/** One row of a household, and why it is taken for the same. */
export interface HouseholdRow {
  readonly line: number;
  readonly key: string;
  /** Null for the row that came first. */
  readonly reason: string | null;
}

/** One household's rows, as one call. */
export interface Household {
  readonly call: NightCall;
  /** In the order in which the calls came in. */
  readonly rows: readonly HouseholdRow[];
  /** Lines of other households that may be this one; a person decides. */
  readonly maybe: readonly { readonly line: number; readonly reason: string }[];
}

interface Understood {
  readonly line: number;
  readonly key: string;
  readonly call: NightCall;
}

/**
 * Folds the rows of one household into one call. Everything that any row said is kept.
 *
 * To fold two households loses one of them, so where phone and address disagree the rows stay apart and
 * only point at each other.
 */
export function foldDuplicates(rows: readonly RowReading[]): readonly Household[] {
  const understood: Understood[] = rows.flatMap(({ line, key, result }) =>
    result.kind === 'understood' ? [{ line, key, call: result.call }] : [],
  );
  const inOrder = understood
    .map((row, i) => ({ row, i }))
    .sort((a, b) => a.row.call.receivedAt - b.row.call.receivedAt || a.i - b.i);
  const groups: {
    members: Understood[];
    reasons: string[];
    maybe: { line: number; reason: string }[];
  }[] = [];
  const byPhone = new Map<string, number[]>();
  const byAddress = new Map<string, number[]>();

  const common = commonPhones(understood.map(({ call }) => call));

  for (const { row } of inOrder) {
    const keys = keysOf(row.call, common);
    const near = new Set([
      ...keys.phones.flatMap((phone) => byPhone.get(phone) ?? []),
      ...(keys.address ? (byAddress.get(keys.address) ?? []) : []),
    ]);
    let home: number | null = null;
    let homeReason = '';
    const doubtful: { group: number; reason: string }[] = [];
    for (const group of [...near].sort((a, b) => a - b)) {
      const members = groups[group]?.members ?? [];
      const verdicts = members.map((member) => sameHousehold(member.call, row.call, common));
      const yes = verdicts.find(({ same }) => same === 'yes');
      const against = verdicts.find(({ same, firm }) => same !== 'yes' && firm);
      if (yes && !against && home === null) {
        home = group;
        homeReason = yes.reason;
      } else if (yes || verdicts.some(({ same }) => same === 'maybe')) {
        const reason =
          (against ?? verdicts.find(({ same }) => same === 'maybe') ?? yes)?.reason ?? '';
        doubtful.push({ group, reason });
      }
    }
    const index: number = home ?? groups.length;
    if (home === null) groups.push({ members: [row], reasons: [], maybe: [] });
    else {
      groups[home]?.members.push(row);
      groups[home]?.reasons.push(homeReason);
    }
    for (const { group, reason } of doubtful) {
      const otherLine = groups[group]?.members[0]?.line ?? 0;
      groups[index]?.maybe.push({ line: otherLine, reason });
      groups[group]?.maybe.push({ line: row.line, reason });
    }
    for (const phone of keys.phones) remember(byPhone, phone, index);
    if (keys.address) remember(byAddress, keys.address, index);
  }
  return groups.map(({ members, reasons, maybe }) => ({
    call: merged(members.map(({ call }) => call)),
    rows: members.map(({ line, key }, i) => ({
      line,
      key,
      reason: i === 0 ? null : (reasons[i - 1] ?? ''),
    })),
    maybe,
  }));
}

export interface Verdict {
  readonly same: 'yes' | 'maybe' | 'no';
  readonly reason: string;
  /** The rows contradict each other: another address, another apartment. */
  readonly firm: boolean;
}

/** Whether two calls come from one household; also for a call that is on the board already. */
export function sameHousehold(
  a: NightCall,
  b: NightCall,
  common: ReadonlySet<string> = new Set(),
): Verdict {
  const phone = sharedPhone(a, b, common);
  const place = comparePlaces(a, b);
  const names = compareNames(a.name, b.name);
  if (phone) {
    if (place === 'other') {
      return names === 'same' && nearPlaces(a, b)
        ? { same: 'yes', reason: `the same phone ${phone} and name`, firm: false }
        : { same: 'maybe', reason: `the same phone ${phone}, but another address`, firm: true };
    }
    if (place === 'other-unit') {
      return names === 'same'
        ? { same: 'yes', reason: `the same phone ${phone} and name`, firm: false }
        : { same: 'maybe', reason: `the same phone ${phone}, but another apartment`, firm: true };
    }
    const reason =
      phone === a.phone?.e164 && phone === b.phone?.e164
        ? `the same phone ${phone}`
        : `the number ${phone} stands in both`;
    return { same: 'yes', reason, firm: false };
  }
  if (place === 'same') {
    if (names !== 'other')
      return { same: 'yes', reason: `the same address ${a.address?.text ?? ''}`, firm: false };
    return { same: 'maybe', reason: 'the same address, but another name and phone', firm: false };
  }
  if (place === 'same-house') {
    return names === 'same'
      ? { same: 'yes', reason: 'the same house and name', firm: false }
      : { same: 'no', reason: 'perhaps another apartment of the same house', firm: false };
  }
  const firm = place === 'other' || place === 'other-unit';
  return { same: 'no', reason: firm ? 'another address' : 'nothing in common', firm };
}

function sharedPhone(a: NightCall, b: NightCall, common: ReadonlySet<string>): string | null {
  const mine = phonesOf(a);
  return phonesOf(b).find((phone) => mine.includes(phone) && !common.has(phone)) ?? null;
}

/**
 * Numbers that stand in the rows of three places or of five names: a switchboard's, or the service's
 * own line. One household misspelt does not come to that.
 */
function commonPhones(calls: readonly NightCall[]): ReadonlySet<string> {
  const seen = new Map<string, { places: string[]; names: string[] }>();
  for (const call of calls) {
    const place = call.address && addressKey(call.address);
    for (const phone of phonesOf(call)) {
      const known = seen.get(phone) ?? { places: [], names: [] };
      seen.set(phone, known);
      if (
        place &&
        known.places.length < 3 &&
        !known.places.some((other) => nearText(other, place))
      ) {
        known.places.push(place);
      }
      const { name } = call;
      if (
        name &&
        known.names.length < 5 &&
        known.names.every((other) => compareNames(other, name) === 'other')
      ) {
        known.names.push(name);
      }
    }
  }
  const isCommon = ({ places, names }: { places: string[]; names: string[] }): boolean =>
    places.length >= 3 || names.length >= 5;
  return new Set([...seen].flatMap(([phone, of]) => (isCommon(of) ? [phone] : [])));
}

const phonesOf = (call: NightCall): string[] =>
  [call.phone, ...call.otherPhones].flatMap((phone) => (phone ? [phone.e164] : []));

type Places = 'same' | 'same-house' | 'other-unit' | 'other' | 'unknown';

function comparePlaces(a: NightCall, b: NightCall): Places {
  const one = a.address;
  const two = b.address;
  const keyOne = one && addressKey(one);
  const keyTwo = two && addressKey(two);
  if (!one || !two || !keyOne || !keyTwo) return 'unknown';
  const sameHouse =
    keyOne === keyTwo ||
    (one.number === two.number &&
      nearText(streetKey(one.street ?? ''), streetKey(two.street ?? '')));
  const cities = [one.city, two.city].map((city) => bare(city ?? ''));
  const sameCity = cities.includes('') || nearText(cities[0] ?? '', cities[1] ?? '');
  if (!sameHouse || !sameCity) return 'other';
  const units = [one.unitNo, two.unitNo].map((unit) => bare(unit ?? '').replace(/\s/g, ''));
  if (units[0] === units[1]) return 'same';
  return units.includes('') ? 'same-house' : 'other-unit';
}

/** A slip in the house number or in the street, not a move across town. */
function nearPlaces(a: NightCall, b: NightCall): boolean {
  const [one, two] = [a.address, b.address];
  if (!one || !two) return true;
  const streets = editDistance(streetKey(one.street ?? ''), streetKey(two.street ?? ''), 3) <= 3;
  const numbers = editDistance(one.number ?? '', two.number ?? '', 2) <= 1;
  return streets && numbers;
}

function nearText(a: string, b: string): boolean {
  if (a === b) return true;
  return Math.min(a.length, b.length) >= 6 && editDistance(a, b, 2) <= (a.length > 10 ? 2 : 1);
}

function compareNames(a: string | null, b: string | null): 'same' | 'other' | 'unknown' {
  const [one, two] = [a, b].map((name) =>
    bare(name ?? '')
      .split(' ')
      .filter((word) => !/^(?:mr|mrs|ms|miss|dr|sr|jr|sra|el|la)$/.test(word) && word !== ''),
  );
  if (!one || !two || one.length === 0 || two.length === 0) return 'unknown';
  const lastOne = one[one.length - 1] ?? '';
  const lastTwo = two[two.length - 1] ?? '';
  const near = (x: string, y: string): boolean =>
    x === y ||
    (Math.min(x.length, y.length) >= 4 &&
      editDistance(x, y, 2) <= (Math.min(x.length, y.length) >= 7 ? 2 : 1));
  if (near(lastOne, lastTwo)) return 'same';
  if (one.length === 1 && two.some((word) => near(word, lastOne))) return 'same';
  if (two.length === 1 && one.some((word) => near(word, lastTwo))) return 'same';
  // "Wren Ashgrove" and "Ashgrove Wren"
  if (one.length > 1 && near(one[0] ?? '', lastTwo) && near(lastOne, two[0] ?? '')) return 'same';
  return 'other';
}

function keysOf(
  call: NightCall,
  common: ReadonlySet<string>,
): { phones: string[]; address: string | null } {
  const key = call.address && addressKey(call.address);
  // House number and the street's first letter: near enough to be looked at, few enough to be quick.
  return {
    phones: phonesOf(call).filter((phone) => !common.has(phone)),
    address: key ? key.replace(/^(\S+ .{2}).*$/, '$1') : null,
  };
}

function remember(index: Map<string, number[]>, key: string, group: number): void {
  const known = index.get(key);
  if (!known) index.set(key, [group]);
  else if (!known.includes(group)) known.push(group);
}

function merged(calls: readonly NightCall[]): NightCall {
  const [first] = calls;
  if (!first) throw new Error('a household has at least one row');
  if (calls.length === 1) return first;
  const pick = <T>(of: (call: NightCall) => T | null): T | null =>
    calls.map(of).find((value) => value !== null) ?? null;
  const least = (of: (call: NightCall) => number | null): number | null => {
    const known = calls.flatMap((call) => of(call) ?? []);
    return known.length > 0 ? Math.min(...known) : null;
  };
  const newest = calls[calls.length - 1] ?? first;
  const phones = calls.flatMap(({ phone, otherPhones }) => [
    ...(phone ? [phone] : []),
    ...otherPhones,
  ]);
  const different = phones.filter(
    (phone, i) => phones.findIndex(({ e164 }) => e164 === phone.e164) === i,
  );
  return {
    name: longest(calls.map(({ name }) => name)),
    business: pick(({ business }) => business),
    phone: different[0] ?? null,
    otherPhones: different.slice(1),
    address: fullest(calls),
    receivedAt: first.receivedAt,
    receivedAtIs: first.receivedAtIs,
    units: unitsOf(calls),
    medicine: {
      mentioned: calls.some(({ medicine }) => medicine.mentioned),
      kinds: [...new Set(calls.flatMap(({ medicine }) => medicine.kinds))],
      words: [...new Set(calls.flatMap(({ medicine }) => medicine.words))],
    },
    dangers: [...new Set<Danger>(calls.flatMap(({ dangers }) => dangers))],
    language: pick(({ language }) => language),
    contents: joinedOnce(calls.map(({ contents }) => contents)),
    remarks: joinedOnce(calls.map(({ remarks }) => remarks)),
    powerOutAt: least(({ powerOutAt }) => powerOutAt),
    powerBackAt:
      [...calls].reverse().find(({ powerBackAt }) => powerBackAt !== null)?.powerBackAt ?? null,
    powerStillOut: newest.powerStillOut,
    saysRunning: newest.saysRunning,
    doubts: [...new Set(calls.flatMap(({ doubts }) => doubts))],
  };
}

/** The most of each kind that any one row names; two rows that each name a fridge mean one fridge. */
function unitsOf(calls: readonly NightCall[]): readonly NightUnit[] {
  const units: NightUnit[] = [];
  for (const call of calls) {
    const unmatched = [...units];
    for (const unit of call.units) {
      const at = unmatched.findIndex(({ kind }) => kind === unit.kind);
      if (at >= 0) {
        unmatched.splice(at, 1);
        continue;
      }
      // "Freezer" in one row and "chest freezer" in the next are the same thing, better said.
      const open = unmatched.find(
        (other) => sameFamily(other, unit) && (other.assumed || unit.assumed),
      );
      if (!open) {
        units.push(unit);
        continue;
      }
      unmatched.splice(unmatched.indexOf(open), 1);
      if (open.assumed && !unit.assumed) units[units.indexOf(open)] = unit;
    }
  }
  return units;
}

const sameFamily = (a: NightUnit, b: NightUnit): boolean =>
  (a.kind.endsWith('-freezer') &&
    b.kind.endsWith('-freezer') &&
    a.kind !== 'fridge-freezer' &&
    b.kind !== 'fridge-freezer') ||
  (isFridge(a) && isFridge(b));
const isFridge = ({ kind }: NightUnit): boolean =>
  kind === 'refrigerator' || kind === 'fridge-freezer';

const longest = (names: readonly (string | null)[]): string | null =>
  names.reduce<string | null>(
    (best, name) =>
      name !== null && (best === null || name.split(' ').length > best.split(' ').length)
        ? name
        : best,
    null,
  );

function fullest(calls: readonly NightCall[]): NightCall['address'] {
  const parts = (address: NonNullable<NightCall['address']>): number =>
    [address.number, address.street, address.unitNo, address.city, address.postcode].filter(Boolean)
      .length;
  return calls.reduce<NightCall['address']>(
    (best, { address }) => (address && (!best || parts(address) > parts(best)) ? address : best),
    null,
  );
}

const joinedOnce = (texts: readonly string[]): string =>
  [...new Set(texts.filter(Boolean))].join(' // ');
