import { NameGrams } from '@shared/domain/address/name-grams';
import type { ParsedAddress } from '@shared/domain/address/parse-address';
import {
  placeCost,
  placeQuery,
  wordsOfPlace,
  type PlaceWords,
} from '@shared/domain/address/place-cost';
import { lonLatAt, wordsOf, type AddressTable } from './address-table';
import { cityWordsOf } from './city-names';
import type { Reading, Search } from './search';
import { DEAREST } from './street-names';

const CANDIDATES = 60;

/** Readings as a named place: a town, a school, "the marina on Pell". */
export class PlaceSearch {
  readonly words: readonly string[];
  private readonly places: readonly PlaceWords[];
  private readonly grams: NameGrams;

  constructor(private readonly table: AddressTable) {
    const { strings, places } = table;
    this.places = Array.from(places.name, (name, i) => ({
      name: wordsOf(strings[name]!),
      kind: wordsOf((strings[places.kind[i]!] ?? '').replace(/_/g, ' ')),
      where: [
        ...cityWordsOf(strings[places.city[i]!] ?? ''),
        ...wordsOf(strings[places.street[i]!] ?? ''),
      ],
    }));
    const words = this.places.map(wordsOfPlace);
    this.words = words.flat();
    this.grams = new NameGrams(words);
  }

  readings(search: Search, way: ParsedAddress): Reading[] {
    if (way.number !== null) return [];
    const said = placeQuery([...way.street, ...(way.cross ?? []), ...way.tail]);
    if (said.length === 0) return [];
    return this.grams.similar(said, CANDIDATES).flatMap((number): Reading[] => {
      const fit = placeCost(
        said,
        this.places[number]!,
        (i) => search.isTyping && i === said.length - 1,
        search.wordCost,
      );
      if (!fit || fit.cost > DEAREST) return [];
      const { strings, places } = this.table;
      return [
        {
          ...fit,
          rank: fit.cost + way.doubt,
          kind: 'place',
          at: lonLatAt(places, number),
          unit: way.unit,
          isPlaced: true,
          word: () => {
            const name = strings[places.name[number]!]!;
            return {
              number: null,
              street: name,
              city: strings[places.city[number]!]!,
              postcode: '',
            };
          },
        },
      ];
    });
  }
}
