import Flatbush from 'flatbush';
import type { AddressSuggestion } from '@shared/domain/address/address-suggestion';
import { postalStreet } from '@shared/domain/address/street-words';
import { lonLatAt, type AddressTable } from './address-table';
import { metresBetween } from './nearness';

const HOUSE_METRES = 60;
const NEARBY_METRES = 400;
/** Per 1e-7 degree of latitude. */
const METRES_PER_UNIT = 111_195 / 1e7;

/** Finds the house beside a point. */
export class NearestAddress {
  private readonly squeeze: number;
  private index: Flatbush | null = null;

  constructor(private readonly table: AddressTable) {
    this.squeeze = Math.cos((((table.houses.lat[0] ?? 0) / 1e7) * Math.PI) / 180);
  }

  /** A pin at this point with the name of the house beside it; the point stays as given. */
  at(lon: number, lat: number): AddressSuggestion {
    const pin = { unit: null, lon, lat, kind: 'pin', confidence: 1 } as const;
    const house = this.houseNear(lon, lat);
    if (house === null) {
      const label = `Pin at ${lat.toFixed(5)}, ${lon.toFixed(5)}`;
      return { ...pin, label, number: null, street: '', city: '', postcode: '' };
    }
    const { strings, houses, streets } = this.table;
    const street = this.streetOf(house);
    const number = strings[houses.number[house]!]!;
    const name = postalStreet(strings[streets.name[street]!]!);
    const city = strings[streets.city[street]!]!;
    const postcode = strings[houses.postcode[house]!]!;
    const isBeside =
      metresBetween([lon, lat], lonLatAt(houses, house), this.squeeze) <= HOUSE_METRES;
    const line = [`${number} ${name}`, [city, postcode].filter((part) => part).join(' ')]
      .filter((part) => part)
      .join(', ');
    return {
      ...pin,
      label: isBeside ? line : `Pin near ${line}`,
      number: isBeside ? number : null,
      street: name,
      city,
      postcode,
    };
  }

  private houseNear(lon: number, lat: number): number | null {
    if (this.table.houses.lon.length === 0) return null;
    this.index ??= this.indexPoints();
    const found = this.index.neighbors(
      lon * 1e7 * this.squeeze,
      lat * 1e7,
      1,
      NEARBY_METRES / METRES_PER_UNIT,
    );
    return found[0] ?? null;
  }

  /** Made when the first pin is set: a million points take a fraction of a second. */
  private indexPoints(): Flatbush {
    const { lon, lat } = this.table.houses;
    const index = new Flatbush(lon.length, 16, Int32Array);
    for (let i = 0; i < lon.length; i++) index.add(lon[i]! * this.squeeze, lat[i]!);
    index.finish();
    return index;
  }

  /** The street whose houses this one is among, by halving. */
  private streetOf(house: number): number {
    const { houses } = this.table.streets;
    let low = 0;
    let high = houses.length - 1;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (houses[middle + 1]! <= house) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}
