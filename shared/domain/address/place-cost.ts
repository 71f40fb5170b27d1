import { canonicalCityWord, cityWordCost } from './city-cost';
import { isFiller, type Fit } from './street-score';
import { wordCost, type WordCost } from './word-cost';

/** What callers call a kind of place, by the kind's own word. Common practice, no source. */
const KINDS: ReadonlyMap<string, string> = new Map(
  [
    'grocery supermarket market groceries store',
    'pharmacy drugstore chemist drug',
    'clinic doctor doctors medical surgery',
    'hospital er infirmary',
    'school schoolhouse',
    'marina dock docks boatyard',
    'library',
    'townhall cityhall',
    'fire firehouse firestation',
    'police sheriff',
  ].flatMap((line) => {
    const [kind = '', ...names] = line.split(' ');
    return names.map((name): [string, string] => [name, kind]);
  }),
);

/** A named place and where it is, in canonical words. */
export interface PlaceWords {
  readonly name: readonly string[];
  /** 'fire_station' gives fire, station. */
  readonly kind: readonly string[];
  readonly where: readonly string[];
}

/** All words by which a place may be asked for. */
export const wordsOfPlace = ({ name, kind, where }: PlaceWords): string[] => [
  ...new Set([...name, ...kind, ...where]),
];

/** What callers say, with the words of a kind put in the place of its other names. */
export const placeQuery = (words: readonly string[]): string[] =>
  words.filter((word) => !isFiller(word)).map((word) => KINDS.get(word) ?? word);

const COST = { any: 0.1, missingName: 0.12, unexplained: 0.45, figure: 1, kindOnly: 0.05 } as const;

/**
 * Cost of taking "the marina on Pell" for a place: each word must be its name, its kind or where
 * it is. Null when neither its name nor its kind is said.
 */
export function placeCost(
  said: readonly string[],
  place: PlaceWords,
  mayBePrefix: (i: number) => boolean,
  costOf: WordCost = wordCost,
): Fit | null {
  const names = [...place.name];
  let cost: number = COST.any;
  let isNamed = false;
  let isAgainst = false;
  said.forEach((word, i) => {
    const name = cheapest(names, (known) => costOf(word, known, mayBePrefix(i)));
    if (name && name.cost < 0.6) {
      names.splice(name.at, 1);
      cost += name.cost;
      isNamed = true;
      return;
    }
    const kind = cheapest(place.kind, (known) => costOf(word, known, mayBePrefix(i)));
    if (kind && kind.cost < 0.4) {
      cost += kind.cost + COST.kindOnly;
      isNamed = true;
      return;
    }
    const where = cheapest(place.where, (known) =>
      cityWordCost(word, known, mayBePrefix(i), costOf),
    );
    if (where) cost += where.cost;
    else {
      // A figure is a house's number, and a place has none.
      cost += /^\d/.test(word) ? COST.figure : COST.unexplained;
      isAgainst = true;
    }
  });
  if (!isNamed) return null;
  // What is not said of the name may be said by where it is: "the clinic in Gullwick".
  const unsaid = names.filter((name) => !place.where.includes(canonicalCityWord(name)));
  return { cost: cost + COST.missingName * unsaid.length, isAgainst };
}

function cheapest(
  words: readonly string[],
  costOf: (word: string) => number | null,
): { at: number; cost: number } | null {
  let best: { at: number; cost: number } | null = null;
  words.forEach((word, at) => {
    const cost = costOf(word);
    if (cost !== null && (best === null || cost < best.cost)) best = { at, cost };
  });
  return best;
}
