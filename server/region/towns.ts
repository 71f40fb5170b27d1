import { TownDto } from '@shared/contract/areas';
import { type AddressTable, lonLatAt } from './address-table';

/** The places that are named far out on the map, the largest kind first. */
export function townsOf({ strings, places }: AddressTable): TownDto[] {
  const kinds = TownDto.shape.kind.options;
  const towns = Array.from(places.name, (name, i): TownDto[] => {
    const kind = kinds.find((one) => one === strings[places.kind[i]!]);
    const [lon, lat] = lonLatAt(places, i);
    return kind ? [{ name: strings[name]!, kind, at: [lon, lat] }] : [];
  }).flat();
  return towns.sort((a, b) => kinds.indexOf(a.kind) - kinds.indexOf(b.kind));
}
