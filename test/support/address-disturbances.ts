import type { Chance } from '../../server/region/county/chance';
import type { Said } from './said-address';
import { byEar, slipOfFinger } from './slips';
import { ordinalWords, shortTown, unitWords } from './spoken-parts';

/** One way in which what is typed differs from what the post would write. */
export interface Disturbance {
  readonly name: string;
  /** Parts that it changes; two that change the same part are not put together. */
  readonly touches: readonly string[];
  suits(said: Said): boolean;
  /** Null when the result would be true of something else. */
  disturb(said: Said, chance: Chance): Said | null;
}

const always = (): boolean => true;
const unsaid = (said: Said, part: 'direction' | 'type' | 'city'): Said => ({
  ...said,
  [part]: '',
  facts: { ...said.facts, [part]: null },
});

const ORDINAL = /^(\d{1,2})(st|nd|rd|th)$/i;
const figureOf = (said: Said): number => Number(ORDINAL.exec(said.name)?.[1] ?? 0);

/**
 * All kinds.
 *
 * @param known words of street names, which no slip may turn into each other
 * @param crossings streets that meet the one that is said
 */
export function disturbances(
  known: ReadonlySet<string>,
  crossings: (address: Said) => readonly string[],
): Disturbance[] {
  const spoil = (
    said: Said,
    chance: Chance,
    slip: (word: string) => string | null,
    least: number,
  ): Said | null => {
    const words = said.name.split(' ');
    const able = words.map((_, i) => i).filter((i) => isLong(words[i]!, least));
    const at = chance.pick(able);
    for (let tries = 0; tries < 20; tries++) {
      const spoilt = slip(words[at]!);
      if (spoilt === null || spoilt === words[at] || known.has(spoilt.toLowerCase())) continue;
      return { ...said, name: words.map((word, i) => (i === at ? spoilt : word)).join(' ') };
    }
    return null;
  };
  const isLong = (word: string, least: number): boolean =>
    word.length >= least && /^[a-z]+$/i.test(word);
  const hasLong = (least: number) => (said: Said) =>
    said.name.split(' ').some((word) => isLong(word, least));

  return [
    {
      name: 'short hand',
      touches: [],
      suits: always,
      disturb: (said) => ({ ...said, isLower: true, hasComma: false }),
    },
    {
      name: 'a slip of the finger',
      touches: ['name'],
      suits: hasLong(4),
      disturb: (said, chance) => spoil(said, chance, (word) => slipOfFinger(word, chance), 4),
    },
    {
      name: 'two slips',
      touches: ['name'],
      suits: hasLong(7),
      disturb: (said, chance) =>
        spoil(said, chance, (word) => slipOfFinger(slipOfFinger(word, chance), chance), 7),
    },
    {
      name: 'spelt by ear',
      touches: ['name'],
      suits: hasLong(4),
      disturb: (said, chance) => spoil(said, chance, (word) => byEar(word, chance), 4),
    },
    {
      name: 'no direction',
      touches: ['direction'],
      suits: ({ facts }) => facts.direction !== '',
      disturb: (said) => unsaid(said, 'direction'),
    },
    {
      name: 'no type',
      touches: ['type'],
      suits: ({ facts }) => facts.type !== '',
      disturb: (said) => unsaid(said, 'type'),
    },
    {
      name: 'no direction, no type',
      touches: ['direction', 'type'],
      suits: ({ facts }) => facts.direction !== '' && facts.type !== '',
      disturb: (said) => unsaid(unsaid(said, 'type'), 'direction'),
    },
    {
      name: 'number last',
      touches: ['order'],
      suits: always,
      disturb: (said, chance) => ({
        ...said,
        order: 'number last',
        number: chance.pick(['', '', 'number ', 'no. ']) + said.number,
      }),
    },
    {
      name: 'an apartment',
      touches: ['unit', 'order'],
      suits: always,
      disturb: (said, chance) => ({
        ...said,
        unit: unitWords(chance),
        order: chance.happens(0.15) ? 'unit first' : 'number first',
      }),
    },
    {
      name: 'a postcode for the town',
      touches: ['city', 'order'],
      suits: ({ home }) => home.postcode !== '',
      disturb: (said) => ({
        ...said,
        city: '',
        postcode: said.home.postcode,
        facts: { ...said.facts, city: null, postcode: said.home.postcode },
      }),
    },
    {
      name: 'town and a part of the postcode',
      touches: ['city', 'order'],
      suits: ({ home }) => home.postcode !== '',
      disturb: (said, chance) => ({
        ...said,
        city: said.home.city,
        postcode: said.home.postcode.slice(0, 3 + chance.below(2)),
        facts: { ...said.facts, city: said.home.city },
      }),
    },
    {
      name: 'the town written short',
      touches: ['city'],
      suits: ({ home }) => home.city.length > 6,
      disturb: (said, chance) => ({
        ...said,
        city: shortTown(said.home.city, chance),
        facts: { ...said.facts, city: said.home.city },
      }),
    },
    {
      name: 'a slip in the town',
      touches: ['city'],
      suits: ({ home }) => home.city.length > 5,
      disturb: (said, chance) => ({
        ...said,
        city: slipOfFinger(said.home.city, chance),
        facts: { ...said.facts, city: said.home.city },
      }),
    },
    {
      name: 'the town first',
      touches: ['order', 'city'],
      suits: ({ home }) => home.city !== '',
      disturb: (said) => ({
        ...said,
        order: 'town first',
        city: said.home.city,
        facts: { ...said.facts, city: said.home.city },
      }),
    },
    {
      name: 'an ordinal in words',
      touches: ['name'],
      suits: (said) => figureOf(said) > 0,
      disturb: (said, chance) => ({ ...said, name: ordinalWords(figureOf(said), chance) }),
    },
    {
      name: 'an ordinal without its ending',
      touches: ['name'],
      suits: (said) => figureOf(said) > 0 || /^\d+(st|nd|rd|th)$/i.test(said.name),
      disturb: (said) => ({ ...said, name: said.name.replace(/\D+$/, '') }),
    },
    {
      name: 'words apart or together',
      touches: ['name'],
      suits: hasLong(7),
      disturb: (said, chance) => {
        if (said.name.includes(' ')) return { ...said, name: said.name.replace(' ', '') };
        const at = 3 + chance.below(said.name.length - 5);
        return { ...said, name: `${said.name.slice(0, at)} ${said.name.slice(at)}` };
      },
    },
    {
      name: 'words around it',
      touches: ['around'],
      suits: always,
      disturb: (said, chance) => ({
        ...said,
        before: chance.pick([
          "it's",
          'my address is',
          "i'm at",
          "we're on",
          'the address is',
          'number',
          'house number',
          '',
        ]),
        after: chance.pick([
          '',
          '',
          ' please',
          ', blue house',
          ', near the church',
          ', second house on the left',
          ' across from the school',
        ]),
      }),
    },
    {
      name: 'a slip in the type',
      touches: ['type'],
      suits: ({ facts }) => (facts.type ?? '').length > 4,
      disturb: (said, chance) => ({ ...said, type: slipOfFinger(said.facts.type!, chance) }),
    },
    {
      name: 'another type',
      touches: ['type'],
      suits: ({ facts }) => facts.type !== '',
      disturb: (said, chance) => {
        const type = chance.pick(
          ['Street', 'Avenue', 'Road', 'Drive', 'Lane'].filter((one) => one !== said.facts.type),
        );
        return { ...said, type, wrongType: type, facts: { ...said.facts, type: null } };
      },
    },
    {
      name: 'a word of the name left out',
      touches: ['name'],
      suits: ({ name }) => /^[A-Z][a-z]{3,} [A-Z]/.test(name),
      disturb: (said) => {
        const name = said.name.split(' ')[0]!;
        return { ...said, name, facts: { ...said.facts, name, isPartOfName: true } };
      },
    },
    {
      name: 'a space left out',
      touches: ['order', 'direction'],
      suits: ({ number, name }) => /^\d{2,}$/.test(number) && /^[A-Za-z]{3}/.test(name),
      disturb: (said) => ({ ...said, hasNoSpace: true }),
    },
    {
      name: 'the cross street as well',
      touches: ['order'],
      suits: (said) => crossings(said).length > 0,
      disturb: (said, chance) => {
        const words = chance.pick(crossings(said)).split(' ');
        const short = words.length > 1 && chance.happens(0.6) ? words.slice(0, -1) : words;
        return {
          ...said,
          order: 'number first',
          cross: `${chance.pick(['&', 'and', 'near', 'at', '/'])} ${short.join(' ')}`,
        };
      },
    },
    {
      name: 'a hyphen left out',
      touches: ['number'],
      suits: ({ facts }) => /^\d+-\d+$/.test(facts.number),
      disturb: (said, chance) => ({
        ...said,
        number: said.number.replace('-', chance.pick(['', ' ', ' - '])),
      }),
    },
  ];
}
