import type { ParsedAddress } from '@shared/domain/address/parse-address';
import { isHouseNumber } from '@shared/domain/address/take-number';
import { postalStreet } from '@shared/domain/address/street-words';
import type { AddressTable } from './address-table';
import type { CornerSearch } from './corner-search';
import type { Reading, Search } from './search';
import type { StreetBook } from './street-book';
import { wantedNumber } from './street-book';
import { DEAREST } from './street-names';

/** How much later in the list an answer comes whose number is less well known. Our estimates. */
const UNKNOWN_NUMBER = { rooftop: 0, interpolated: 0.2, street: 0.5 } as const;
/** A wrong postcode is a weak sign: callers know their street better. */
const WRONG_POSTCODE = 0.25;
const PART_OF_POSTCODE_AWAY = 0.4;
/** "12 Heron & 3rd": the house on the Heron Street that meets a Third Street. */
const OTHER_CROSSING = 0.3;

/** Readings as a street of a town, with the house when a number is said. */
export class HouseSearch {
  private readonly postcodes = new Set<string>();

  constructor(
    private readonly table: AddressTable,
    private readonly book: StreetBook,
    private readonly corners: CornerSearch,
  ) {
    const { strings, houses } = table;
    for (const postcode of new Set(houses.postcode)) this.postcodes.add(strings[postcode]!);
  }

  readings(search: Search, way: ParsedAddress): Reading[] {
    const { strings, streets } = this.table;
    const query = search.queryOf(way.street, way.tail);
    const wanted = way.number === null ? null : wantedNumber(way.number);
    const crossing = way.cross && this.corners.meeting(search, way);
    const readings: Reading[] = [];
    for (const { name, fit } of search.similarStreets(query)) {
      // A figure that no street's name explains is a house's, and there is a reading that takes it so.
      if (!wanted && fit.left.some(({ said }) => isHouseNumber(said))) continue;
      for (let street = name.first; street < name.end; street++) {
        const city = search.cityFit(query, fit.left, streets.city[street]!);
        const words = fit.cost + city.cost + way.doubt;
        if (words > DEAREST) continue;
        const crosses =
          !crossing || crossing.has(name.text, streets.city[street]!) ? 0 : OTHER_CROSSING;
        const matches = wanted
          ? this.book.find(street, wanted)
          : [{ ...this.book.somewhere(street), number: null }];
        for (const match of matches) {
          const postcode = this.postcodeCost(way.postcode, match.postcode);
          const cost = words + postcode + crosses;
          if (cost > DEAREST) continue;
          readings.push({
            cost,
            rank: cost + (wanted ? UNKNOWN_NUMBER[match.kind] : 0),
            isAgainst: fit.isAgainst || city.isAgainst || postcode > 0 || crosses > 0,
            kind: match.kind,
            at: match.at,
            unit: way.unit,
            isPlaced: search.isPlaced(city) || (way.postcode !== null && postcode === 0),
            word: () => ({
              number: match.number,
              street: postalStreet(name.text),
              city: strings[streets.city[street]!]!,
              postcode: match.postcode,
            }),
          });
        }
      }
    }
    return readings;
  }

  /** What was said of the postcode against the one that is known; unknown ones say little. */
  private postcodeCost(said: string | null, known: string): number {
    if (said === null || known.slice(0, 5) === said) return 0;
    if (known === '') return said.length < 5 || this.postcodes.has(said) ? 0 : WRONG_POSTCODE;
    if (said.length >= 5) return WRONG_POSTCODE;
    return known.startsWith(said) || known.slice(0, 5).endsWith(said) ? 0 : PART_OF_POSTCODE_AWAY;
  }
}
