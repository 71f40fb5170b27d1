import type { AddressBook, AddressPoint } from '../../server/region/address-points';
import { chanceOf, type Chance } from '../../server/region/county/chance';
import { askTown, saidOf, writeDown, type Said } from './said-address';
import { disturbances, type Disturbance } from './address-disturbances';

/** An address as a call taker might have typed it, and the house that was meant. */
export interface DisturbedAddress {
  readonly text: string;
  readonly kinds: readonly string[];
  readonly meant: AddressPoint;
}

export interface DisturbedSet {
  /** What was said fits one house only: there is one right answer. */
  readonly clear: readonly DisturbedAddress[];
  /** What was said fits several houses equally: nobody could know without asking. */
  readonly open: readonly DisturbedAddress[];
}

/**
 * Draws addresses of a book and writes them down as people say, shorten and mistype them, the same
 * way for the same seed. The kinds of disturbance take turns; a sixth of the addresses suffers two
 * kinds at once and a sixth three.
 *
 * A caller who leaves out the town is asked for it when it matters, so that each address of the set
 * has one known answer; those where even that would not help (no direction was said, and the town
 * has both) go to `open` and are counted apart.
 */
export function disturbedAddresses(
  book: AddressBook,
  { seed, count }: { readonly seed: number; readonly count: number },
): DisturbedSet {
  const chance = chanceOf(seed, 'disturbed-addresses');
  const fits = new Fits(book);
  const kinds = disturbances(wordsOf(book), crossingsOf(book));
  const clear: DisturbedAddress[] = [];
  const open: DisturbedAddress[] = [];
  const some = book.addresses.filter((_, i) => i % Math.ceil(book.addresses.length / 5_000) === 0);
  const usable = kinds.filter((kind) => some.some((address) => kind.suits(saidOf(address))));
  for (let turn = 0; clear.length < count; turn++) {
    const first = usable[turn % usable.length]!;
    const meant = drawFor(first, book, chance);
    const more = turn % 6 === 4 ? 1 : turn % 6 === 5 ? 2 : 0;
    const applied = [first, ...others(first, usable, more, saidOf(meant), chance)];
    let said: Said | null = saidOf(meant, chance);
    for (const kind of applied) said = said && kind.disturb(said, chance);
    // A slip that makes another street's name of this one is another address.
    if (!said) continue;
    if (fits.count(said) > 1 && said.facts.city === null) said = askTown(said);
    const disturbed = {
      text: writeDown(said),
      kinds: applied.map(({ name }) => name),
      meant,
    };
    (fits.count(said) > 1 ? open : clear).push(disturbed);
  }
  return { clear, open };
}

function wordsOf(book: AddressBook): Set<string> {
  const names = [...book.streets.map(({ name }) => name), ...book.addresses.map((a) => a.street)];
  return new Set([...new Set(names)].flatMap((name) => name.toLowerCase().split(/[^a-z0-9]+/)));
}

function crossingsOf(book: AddressBook): (said: Said) => readonly string[] {
  const found = new Map<string, string[]>();
  const add = (street: string, city: string, other: string): void => {
    const key = `${street}|${city}`;
    const known = found.get(key);
    if (known) known.push(other);
    else found.set(key, [other]);
  };
  for (const { first, second, city } of book.corners) {
    add(first, city, second);
    add(second, city, first);
  }
  return ({ home }) => found.get(`${home.street}|${home.city}`) ?? [];
}

function drawFor(kind: Disturbance, book: AddressBook, chance: Chance): AddressPoint {
  for (;;) {
    const address = chance.pick(book.addresses);
    if (kind.suits(saidOf(address))) return address;
  }
}

function others(
  first: Disturbance,
  usable: readonly Disturbance[],
  count: number,
  said: Said,
  chance: Chance,
): Disturbance[] {
  const found: Disturbance[] = [];
  for (let tries = 0; found.length < count && tries < 50; tries++) {
    const kind = chance.pick(usable);
    const touched = [first, ...found].flatMap(({ touches }) => touches);
    if (kind.suits(said) && !kind.touches.some((part) => touched.includes(part))) found.push(kind);
  }
  return found;
}

/** Counts the houses that fit what is said, whatever a matcher makes of it. */
class Fits {
  private readonly byFirstWord = new Map<string, AddressPoint[]>();

  constructor(book: AddressBook) {
    const words = new Map<string, string>();
    for (const address of book.addresses) {
      const word = words.get(address.street) ?? firstWord(saidOf(address).facts.name);
      words.set(address.street, word);
      const known = this.byFirstWord.get(word);
      if (known) known.push(address);
      else this.byFirstWord.set(word, [address]);
    }
  }

  /** Houses of which all that was said is true; the same house, surveyed twice, counts once. */
  count({ facts: said, wrongType }: Said): number {
    const figures = figuresOf(said.number);
    const doors = (this.byFirstWord.get(firstWord(said.name)) ?? [])
      .filter((address) => figuresOf(address.number) === figures)
      .map((address) => saidOf(address).facts)
      .filter(
        (facts) =>
          (facts.name === said.name || (said.isPartOfName && isLonger(facts.name, said.name))) &&
          (said.direction === null || facts.direction === said.direction) &&
          (said.type === null || facts.type === said.type) &&
          (said.city === null || facts.city === said.city) &&
          (said.postcode === null || facts.postcode === said.postcode),
      );
    // Where a street has the wrong type for its own, the words mean that one.
    if (wrongType !== null && doors.some((facts) => facts.type === wrongType)) return Infinity;
    return new Set(
      doors.map((facts) => [facts.direction, facts.name, facts.type, facts.city].join('|')),
    ).size;
  }
}

const figuresOf = (number: string): string => number.replace(/\D+/g, '');
const firstWord = (name: string): string => name.split(' ')[0]!.toLowerCase();
const isLonger = (name: string, part: string): boolean => name.startsWith(`${part} `);
