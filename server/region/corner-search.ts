import type { ParsedAddress } from '@shared/domain/address/parse-address';
import { postalStreet } from '@shared/domain/address/street-words';
import { lonLatAt, type AddressTable } from './address-table';
import type { Reading, Search } from './search';
import { DEAREST, type NameFit } from './street-names';

/** A house comes before the corner near which it is said to be, unless nobody knows the house. */
const BESIDE_A_NUMBER = 0.25;
const OTHER_TOWN = 0.35;

/** A pair of streets that meet, with what it costs to take the words for them. */
interface Meeting {
  readonly corner: number;
  readonly first: NameFit;
  readonly second: NameFit;
}

/** Readings as a corner of two streets. */
export class CornerSearch {
  constructor(private readonly table: AddressTable) {}

  readings(search: Search, way: ParsedAddress): Reading[] {
    if (!way.cross) return [];
    const { strings, corners } = this.table;
    const query = search.queryOf(way.street, way.tail);
    return this.meetings(search, way).flatMap(({ corner, first, second }): Reading[] => {
      // Words that neither street explains name the town.
      const left = [...first.fit.left, ...second.fit.left];
      const city = search.cityFit(query, left, corners.city[corner]!);
      const cost = first.fit.cost + second.fit.cost + city.cost + way.doubt;
      if (cost > DEAREST) return [];
      return [
        {
          cost,
          rank: cost + (way.number === null ? 0 : BESIDE_A_NUMBER),
          // With a number it is the house that was meant, and this only a help to find it.
          isAgainst:
            way.number !== null || first.fit.isAgainst || second.fit.isAgainst || city.isAgainst,
          kind: 'corner',
          at: lonLatAt(corners, corner),
          unit: way.unit,
          isPlaced: search.isPlaced(city),
          word: () => ({
            number: null,
            street: `${postalStreet(first.name.text)} & ${postalStreet(second.name.text)}`,
            city: strings[corners.city[corner]!]!,
            postcode: '',
          }),
        },
      ];
    });
  }

  /** Which streets of which town meet one that may be the second street. */
  meeting(search: Search, way: ParsedAddress): { has(name: string, city: number): boolean } {
    const { corners } = this.table;
    const query = search.queryOf(way.street, way.tail);
    const found = new Set(
      this.meetings(search, way)
        // The town is said after the second street as a rule, and counts for both.
        .filter(
          ({ corner, second }) =>
            search.cityFit(query, second.fit.left, corners.city[corner]!).cost < OTHER_TOWN,
        )
        .map(({ corner, first }) => `${first.name.text}|${String(corners.city[corner]!)}`),
    );
    return { has: (name, city) => found.has(`${name}|${String(city)}`) };
  }

  private meetings(search: Search, { street, cross, tail }: ParsedAddress): Meeting[] {
    const firsts = search.similarStreets(search.queryOf(street, tail));
    const seconds = search.similarStreets(search.queryOf(cross ?? [], tail));
    return firsts.flatMap((first) =>
      seconds.flatMap((second): Meeting[] =>
        first.fit.cost + second.fit.cost > DEAREST || first.name === second.name
          ? []
          : this.between(first.name.text, second.name.text).map((corner) => ({
              corner,
              first,
              second,
            })),
      ),
    );
  }

  /** Rows of the table's corners of two streets, by halving. */
  private between(a: string, b: string): number[] {
    const { strings, corners } = this.table;
    const [first, second] = a < b ? [a, b] : [b, a];
    const isBelow = (i: number): boolean => {
      const name = strings[corners.first[i]!]!;
      return name < first || (name === first && strings[corners.second[i]!]! < second);
    };
    let low = 0;
    let high = corners.first.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (isBelow(middle)) low = middle + 1;
      else high = middle;
    }
    const found: number[] = [];
    for (
      let i = low;
      i < corners.first.length &&
      strings[corners.first[i]!] === first &&
      strings[corners.second[i]!] === second;
      i++
    )
      found.push(i);
    return found;
  }
}
