import type { AddressPoint } from '../../server/region/address-points';
import type { Chance } from '../../server/region/county/chance';

/** What somebody says of an address, part by part; an empty part is not said. */
export interface Said {
  readonly number: string;
  readonly direction: string;
  readonly name: string;
  readonly type: string;
  readonly unit: string;
  /** The street across, with the word before it: "& 3rd". */
  readonly cross: string;
  readonly city: string;
  readonly postcode: string;
  readonly before: string;
  readonly after: string;
  readonly order: 'number first' | 'number last' | 'town first' | 'unit first';
  readonly hasComma: boolean;
  /** The number and the next word are typed as one. */
  readonly hasNoSpace: boolean;
  readonly isLower: boolean;
  /** A type that is not the street's own. */
  readonly wrongType: string | null;
  readonly home: { readonly street: string; readonly city: string; readonly postcode: string };
  /** What is true of the address, for each part that is said; null for those that are not. */
  readonly facts: {
    readonly number: string;
    readonly name: string;
    /** More words of the name may follow. */
    readonly isPartOfName: boolean;
    readonly direction: string | null;
    readonly type: string | null;
    readonly city: string | null;
    readonly postcode: string | null;
  };
}

const DIRECTIONS: Readonly<Record<string, string>> = {
  North: 'n',
  South: 's',
  East: 'e',
  West: 'w',
};

/** How the common types are written short; others are said in full. */
const SHORT_TYPES: Readonly<Record<string, readonly string[]>> = {
  Street: ['st', 'str', 'street'],
  Avenue: ['ave', 'av', 'avenue'],
  Road: ['rd', 'road'],
  Drive: ['dr', 'drive'],
  Lane: ['ln', 'lane'],
  Court: ['ct', 'court'],
  Place: ['pl', 'place'],
  Boulevard: ['blvd', 'boulevard'],
  Circle: ['cir', 'circle'],
  Terrace: ['ter', 'terrace'],
  Highway: ['hwy', 'highway'],
  Parkway: ['pkwy', 'parkway'],
  Causeway: ['cswy', 'causeway'],
  Turnpike: ['tpke', 'turnpike'],
};

/** Data writes "94th Rd" and "94th Road" for the same street. */
const longType = (type: string): string =>
  Object.keys(SHORT_TYPES).find((long) =>
    SHORT_TYPES[long]!.includes(type.toLowerCase().replace(/\W/g, '')),
  ) ?? type;

/** An address as its owner would say it in full; with chances, in a call taker's short hand. */
export function saidOf(address: AddressPoint, chance?: Chance): Said {
  const words = address.street.split(' ');
  const direction = words.length > 2 && words[0]! in DIRECTIONS ? words.shift()! : '';
  const type = words.length > 1 ? words.pop()! : '';
  const name = words.join(' ');
  const city = address.city;
  const saysCity = city !== '' && (!chance || chance.happens(0.75));
  return {
    number: address.number,
    direction: chance?.happens(0.7) ? (DIRECTIONS[direction] ?? '') : direction,
    name,
    type: chance ? chance.pick(SHORT_TYPES[type] ?? [type]) : type,
    unit: '',
    cross: '',
    city: saysCity ? city : '',
    postcode: '',
    before: '',
    after: '',
    order: 'number first',
    hasNoSpace: false,
    hasComma: !chance || chance.happens(0.5),
    isLower: chance?.happens(0.7) ?? false,
    wrongType: null,
    home: { street: address.street, city, postcode: address.postcode },
    facts: {
      number: address.number,
      name,
      isPartOfName: false,
      direction,
      type: longType(type),
      city: !chance || saysCity ? city : null,
      postcode: chance ? null : address.postcode,
    },
  };
}

/** The call taker asks which town it is, and notes it down at the end. */
export const askTown = (said: Said): Said => ({
  ...said,
  city: said.home.city,
  facts: { ...said.facts, city: said.home.city },
});

/** The parts in the order in which they were said. */
export function writeDown(said: Said): string {
  const { number, direction, name, type, unit, cross, city, postcode, before, after, order } = said;
  const street = [direction, name, type];
  const join = (parts: readonly string[]): string => parts.filter((part) => part !== '').join(' ');
  const line = {
    'number first': [number, ...street, cross, unit],
    'town first': [number, ...street, cross, unit],
    'number last': [...street, number, unit],
    'unit first': [unit, number, ...street],
  }[order].filter((part) => part !== '');
  if (said.hasNoSpace) line[0] = `${line.shift() ?? ''}${line[0] ?? ''}`;
  const town = join([city, postcode]);
  const parts = order === 'town first' ? [town, join(line)] : [join(line), town];
  const whole = parts.filter((part) => part !== '').join(said.hasComma ? ', ' : ' ');
  const text = join([before, whole]) + after;
  return said.isLower ? text.toLowerCase() : text;
}
