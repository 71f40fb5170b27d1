import fc from 'fast-check';
import { editDistance } from '../../shared/domain/address/edit-distance';
import { cityWordCost, matchCity } from '../../shared/domain/address/city-cost';
import { confidenceOf } from '../../shared/domain/address/confidence';
import { ACCEPT_CONFIDENCE } from '../../shared/domain/address/address-suggestion';
import {
  canonicalNumber,
  houseNumberOrder,
  hyphenatedForms,
  isEvenNumber,
} from '../../shared/domain/address/house-number';
import { NameGrams } from '../../shared/domain/address/name-grams';
import { soundKey } from '../../shared/domain/address/sounds-alike';
import { streetCost, type Candidate, type Query } from '../../shared/domain/address/street-score';
import { canonical, wordsOfStreet } from '../../shared/domain/address/street-words';
import { wordCost, WordCosts } from '../../shared/domain/address/word-cost';

/** The textbook recurrence over the whole table, without limits or shortcuts. */
function slowDistance(a: string, b: string): number {
  const table = Array.from({ length: a.length + 1 }, (_, i) =>
    Array.from({ length: b.length + 1 }, (__, j) => (i === 0 ? j : j === 0 ? i : 0)),
  );
  const at = (i: number, j: number): number => table[i]?.[j] ?? Infinity;
  for (let i = 1; i <= a.length; i++) {
    for (let j = 1; j <= b.length; j++) {
      const change = at(i - 1, j - 1) + (a[i - 1] === b[j - 1] ? 0 : 1);
      const isSwap = i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1];
      table[i]![j] = Math.min(
        at(i - 1, j) + 1,
        at(i, j - 1) + 1,
        change,
        isSwap ? at(i - 2, j - 2) + 1 : Infinity,
      );
    }
  }
  return at(a.length, b.length);
}

describe('editDistance', () => {
  // The classic examples: Levenshtein's, and one where a swap counts once.
  it.each([
    ['kitten', 'sitting', 3],
    ['saturday', 'sunday', 3],
    ['heron', 'hreon', 1],
    ['ca', 'abc', 3],
    ['', 'abc', 3],
    ['larch', 'larch', 0],
  ])('of %p and %p is %p', (a, b, distance) => expect(editDistance(a, b, 9)).toBe(distance));

  it('agrees with the full table, up to its limit', () => {
    const word = fc.string({ unit: fc.constantFrom('a', 'b', 'c', 'd'), maxLength: 9 });
    fc.assert(
      fc.property(word, word, fc.integer({ min: 0, max: 4 }), (a, b, limit) => {
        expect(editDistance(a, b, limit)).toBe(Math.min(slowDistance(a, b), limit + 1));
      }),
      { seed: 5, numRuns: 2_000 },
    );
  });
});

describe('houseNumberOrder', () => {
  it('sorts numbers as they stand along a street', () => {
    const numbers = ['9', '12', '12 1/2', '13', '120'];
    const shuffled = ['120', '13', '9', '12 1/2', '12'];
    const sorted = [...shuffled].sort((a, b) => houseNumberOrder(a)! - houseNumberOrder(b)!);
    expect(sorted).toEqual(numbers);
  });

  it('sorts hyphenated numbers by their block, then by the house', () => {
    const sorted = ['218-09', '94-15', '218-1', '217-40'].sort(
      (a, b) => houseNumberOrder(a)! - houseNumberOrder(b)!,
    );
    expect(sorted).toEqual(['94-15', '217-40', '218-1', '218-09']);
  });

  it('takes the side of the street from the house, not from the block', () => {
    expect(isEvenNumber(houseNumberOrder('218-09')!)).toBe(false);
    expect(isEvenNumber(houseNumberOrder('217-10')!)).toBe(true);
    expect(isEvenNumber(houseNumberOrder('12A')!)).toBe(true);
  });

  it('has nothing to say about a name', () => expect(houseNumberOrder('Rosewood')).toBeNull());
});

describe('canonicalNumber', () => {
  it('takes two spellings for one house', () => {
    expect(canonicalNumber('218 - 09')).toBe(canonicalNumber('218-9'));
    expect(canonicalNumber('12 A')).toBe(canonicalNumber('12a'));
    expect(canonicalNumber('12 1/2')).not.toBe(canonicalNumber('12'));
  });
});

describe('hyphenatedForms', () => {
  it('puts back a hyphen that was left out, first where such numbers have it', () => {
    expect(hyphenatedForms('21809')[0]).toBe('218-09');
    expect(hyphenatedForms('824')).toContain('82-4');
    expect(hyphenatedForms('12')).toEqual([]);
    expect(hyphenatedForms('218-09')).toEqual([]);
  });
});

const street = (name: string, city = 'Ternhaven'): Candidate => ({
  words: wordsOfStreet(name.toLowerCase().split(' ').map(canonical)),
  city: [city.toLowerCase()],
});
const said = (text: string, tail = '', isTyping = false): Query => ({
  street: text.split(' ').map(canonical),
  tail: tail === '' ? [] : tail.split(' '),
  isTyping,
  namesACity: tail !== '',
});

describe('streetCost', () => {
  const heron = street('North Heron Street');

  it('costs nothing word for word, in any of the accepted spellings', () => {
    expect(streetCost(said('n heron st'), heron)).toBe(0);
    expect(streetCost(said('north heron str', 'ternhaven'), heron)).toBe(0);
  });

  it('costs more for each thing that is missing or wrong', () => {
    const ladder = ['n heron st', 'n heron', 'heron', 's heron st', 'n plover st'].map((text) =>
      streetCost(said(text), heron),
    );
    expect(ladder).toEqual([...ladder].sort((a, b) => a - b));
    expect(new Set(ladder).size).toBe(ladder.length);
  });

  it('forgives one slip of the finger more easily than another street', () => {
    for (const slip of ['n herron st', 'n heorn st', 'n hron st', 'n heton st']) {
      expect(streetCost(said(slip), heron)).toBeLessThan(
        streetCost(said(slip), street('North Plover Street')),
      );
      expect(streetCost(said(slip), heron)).toBeLessThan(0.6);
    }
  });

  it('prefers the town that was named', () => {
    expect(
      streetCost(said('n heron st', 'gullwick'), street('North Heron Street', 'Gullwick')),
    ).toBeLessThan(streetCost(said('n heron st', 'gullwick'), heron));
  });

  it('takes an unfinished word only while somebody types', () => {
    expect(wordCost('her', 'heron', true)).toBeLessThan(0.2);
    expect(wordCost('her', 'heron', false) ?? 1).toBeGreaterThan(0.5);
  });

  it('never reads one house row number for another', () => {
    expect(wordCost('94', '93', false)).toBeNull();
    expect(wordCost('94', '194', false)).toBeNull();
  });
});

describe('soundKey', () => {
  // Pairs that differ in spelling only; the words are in any English dictionary.
  it.each([
    ['wigeon', 'widgen'],
    ['quartz', 'kwarts'],
    ['pheasant', 'fesant'],
    ['knoll', 'noll'],
    ['gneiss', 'nise'],
    ['osprey', 'ospry'],
  ])('hears %p and %p alike', (a, b) => expect(soundKey(a)).toBe(soundKey(b)));

  it.each([
    ['heron', 'herring'],
    ['larch', 'lark'],
    ['tern', 'fern'],
  ])('tells %p from %p', (a, b) => expect(soundKey(a)).not.toBe(soundKey(b)));
});

describe('WordCosts', () => {
  it('says what wordCost says, and the same again', () => {
    const costs = new WordCosts(new Map([['heron', soundKey('heron')]]));
    const word = fc.string({
      unit: fc.constantFrom('h', 'e', 'r', 'o', 'n'),
      minLength: 1,
      maxLength: 7,
    });
    fc.assert(
      fc.property(word, word, fc.boolean(), (said, known, mayBePrefix) => {
        const expected = wordCost(said, known, mayBePrefix);
        expect(costs.of(said, known, mayBePrefix)).toBe(expected);
        expect(costs.of(said, known, mayBePrefix)).toBe(expected);
      }),
      { seed: 7, numRuns: 1_000 },
    );
  });
});

describe('a town among the words', () => {
  const cove = ['larchmere', 'cv'];
  const used = (text: string): number[] => [...matchCity(text.split(' '), cove, () => false).used];

  it.each(['larchmere cove', 'larchmere', 'larch', 'lrchmr cv', 'lc', 'larchmer'])(
    'is known by %p',
    (text) => expect(used(text).length).toBeGreaterThan(0),
  );

  it.each(['heron', 'st', 'lane', 'la', 'mere'])('is not known by %p', (text) =>
    expect(used(text)).toEqual([]),
  );

  it('takes the post’s short words for the long ones', () => {
    expect(cityWordCost('hbr', 'hbr', false)).toBe(0);
    expect(cityWordCost('harbor', 'hbr', false)).toBe(0);
  });
});

describe('confidenceOf', () => {
  const sure = {
    kind: 'rooftop',
    cost: 0,
    isPlaced: true,
    isAgainst: false,
    isDisputed: false,
  } as const;

  it('takes a house that fits word for word', () =>
    expect(confidenceOf(sure)).toBeGreaterThanOrEqual(ACCEPT_CONFIDENCE));

  it.each([
    { isAgainst: true },
    { isDisputed: true },
    { kind: 'street' as const },
    { kind: 'place' as const },
    { cost: 0.6 },
    { kind: 'interpolated' as const, isPlaced: false },
  ])('leaves to a person what is %p', (doubt) =>
    expect(confidenceOf({ ...sure, ...doubt })).toBeLessThan(ACCEPT_CONFIDENCE),
  );
});

describe('NameGrams', () => {
  const names = ['heron', 'herring', 'plover', 'larch', 'larkspur', '94', '93'].map((name) => [
    name,
  ]);
  const grams = new NameGrams(names);
  const best = (word: string): string | undefined =>
    grams.similar([word], 3).map((i) => names[i]![0])[0];

  it.each([
    ['heron', 'heron'],
    ['herno', 'heron'],
    ['plovr', 'plover'],
    ['larksp', 'larkspur'],
    ['94', '94'],
  ])('finds for %p first %p', (word, name) => expect(best(word)).toBe(name));

  it('counts each search by itself', () => {
    const first = grams.similar(['larch'], 5);
    grams.similar(['heron', 'plover'], 5);
    expect(grams.similar(['larch'], 5)).toEqual(first);
  });
});
