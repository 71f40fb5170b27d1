import { canonicalNumber } from '@shared/domain/address/house-number';
import { greatCircleKm } from '@shared/domain/travel/great-circle';
import type { AddressPoint } from '../address-points';
import { wordsOf } from '../address-table';
import type { FileAddress } from './check-row';

/** Two points of one number and street that are no farther apart are one door. Our estimate. */
export const SAME_DOOR_METRES = 30;

export interface Merged {
  readonly addresses: AddressPoint[];
  readonly added: number;
  readonly merged: number;
  readonly unitRows: number;
}

interface Door {
  point: AddressPoint;
  units: Set<string> | null;
}

/**
 * Joins the points of a file to those of the extract. One number on one street within 30 m is one
 * door, also where the two name its town differently; rows of flats are folded into their door, which
 * counts them. The extract's point stays where the two have the same door.
 */
export class AddressMerge {
  private readonly doors: Door[];
  private readonly byKey = new Map<string, number[]>();
  private readonly streetKeys = new Map<string, string>();
  private added = 0;
  private merged = 0;
  private unitRows = 0;

  constructor(own: readonly AddressPoint[]) {
    this.doors = own.map((point) => ({ point, units: null }));
    this.doors.forEach(({ point }, i) => this.note(this.keyOf(point), i));
  }

  add({ at, number, street, unit, city, postcode }: FileAddress): void {
    if (unit !== '') this.unitRows++;
    const key = this.keyOf({ number, street });
    const same = this.byKey
      .get(key)
      ?.find((i) => greatCircleKm(this.doors[i]!.point.at, at) * 1000 <= SAME_DOOR_METRES);
    if (same !== undefined) {
      this.merged++;
      const door = this.doors[same]!;
      door.point = {
        ...door.point,
        city: door.point.city || city,
        postcode: door.point.postcode || postcode,
      };
      if (unit !== '') (door.units ??= new Set()).add(unit);
      return;
    }
    this.added++;
    this.doors.push({
      point: { at, number, street, city, postcode, flats: 1 },
      units: unit === '' ? null : new Set([unit]),
    });
    this.note(key, this.doors.length - 1);
  }

  finish(): Merged {
    const addresses = this.doors.map(({ point, units }) => {
      const flats = Math.max(point.flats, units?.size ?? 1);
      return flats === point.flats ? point : { ...point, flats };
    });
    const { added, merged, unitRows } = this;
    return { addresses, added, merged, unitRows };
  }

  private note(key: string, door: number): void {
    const known = this.byKey.get(key);
    if (known) known.push(door);
    else this.byKey.set(key, [door]);
  }

  private keyOf({ number, street }: { number: string; street: string }): string {
    let words = this.streetKeys.get(street);
    if (words === undefined) {
      words = wordsOf(street).join(' ');
      this.streetKeys.set(street, words);
    }
    return `${canonicalNumber(number)}|${words}`;
  }
}
