import type {
  AddressBook,
  AddressPoint,
  NamedStreet,
  PlaceName,
  StreetCorner,
} from '../../server/region/address-points';
import { chanceOf, type Chance } from '../../server/region/county/chance';

const FIRST =
  `Heron Tern Osprey Plover Egret Curlew Gannet Petrel Merlin Linnet Pipit Avocet Pelican Grebe Eider Larch Alder Birch Maple
  Hemlock Spruce Cypress Hickory Chestnut Sycamore Juniper Cedar Laurel Holly Myrtle Willow Aspen Poplar Linden Rowan Hazel
  Anchor Capstan Halyard Rudder Compass Lantern Beacon Buoy Harbor Bowline Sextant Mizzen Ballast Cutter Sloop Quartz Mica
  Garnet Agate Jasper Opal Onyx Granite Slate Marble Basalt Flint Topaz Amber Cobalt Copper Clover Sorrel Yarrow Tansy Heather
  Bracken Fern Sedge Thistle Primrose Lupine Aster Otter Badger Marten Beaver Bison Caribou Lynx Puffin Walrus Herring Sturgeon`
    .split(/\s+/)
    .filter((word) => word !== '');
const SECOND =
  'wood field brook ridge dale view crest mere bank stone water side gate well bury ton ford hurst ley combe'.split(
    ' ',
  );
const LANDFORMS = 'Marsh Hollow Point Neck Hill Run Creek Ferry Mill Meadow Landing Pond'.split(
  ' ',
);
const TYPES = 'Street Avenue Road Drive Lane Court Place Way Circle Terrace Boulevard'.split(' ');
const PLACES = 'Clinic School Grocery Pharmacy Library Marina'.split(' ');

/** About these many houses of a made-up county, its streets' names repeating from town to town. */
export function madeAddressBook({ seed, count }: { seed: number; count: number }): AddressBook {
  const chance = chanceOf(seed, 'made-book');
  const names = streetNames(chance);
  const towns = Array.from({ length: Math.max(4, Math.round(count / 3_000)) }, (_, i) => ({
    name: `${FIRST[i % FIRST.length]!}${['haven', 'wick', 'mouth', 'holm', 'moor', 'stead'][Math.floor(i / FIRST.length) % 6]!}`,
    postcode: String(i + 10).padStart(5, '0'),
    at: [-47.9 + (i % 20) * 0.02, 36.1 + Math.floor(i / 20) * 0.02] as const,
  }));
  const addresses: AddressPoint[] = [];
  const streets: NamedStreet[] = [];
  const corners: StreetCorner[] = [];
  const places: PlaceName[] = [];
  for (const town of towns) {
    const own = new Set<string>();
    const wanted = Math.round((count / towns.length / 40) * chance.between(0.8, 1.2));
    while (own.size < wanted) own.add(streetName(names, chance));
    let last: string | null = null;
    for (const name of own) {
      const [lon, lat] = [
        town.at[0] + chance.between(0, 0.018),
        town.at[1] + chance.between(0, 0.018),
      ];
      streets.push({ name, city: town.name, at: [round(lon), round(lat)] });
      let number = chance.pick([1, 100, 200, 1000]) + chance.below(20);
      for (let house = 0; house < 40; house++) {
        addresses.push({
          at: [round(lon + house * 0.0002), round(lat + (number % 2) * 0.0002)],
          number: String(number),
          street: name,
          city: town.name,
          postcode: town.postcode,
          flats: 1,
        });
        number += 1 + chance.below(5);
      }
      if (last)
        corners.push({ first: last, second: name, city: town.name, at: [round(lon), round(lat)] });
      last = name;
    }
    for (const kind of PLACES)
      places.push({
        name: `${town.name} ${kind}`,
        kind: kind.toLowerCase(),
        city: town.name,
        at: [...town.at],
      });
  }
  return { addresses, streets, corners, places };
}

const round = (degrees: number): number => Math.round(degrees * 1e7) / 1e7;

function streetNames(chance: Chance): string[] {
  const names = [...FIRST];
  for (const first of FIRST) {
    for (const second of SECOND) names.push(first + second);
    for (const form of LANDFORMS) names.push(`${first} ${form}`);
  }
  for (let i = 1; i < 100; i++) names.push(ordinal(i));
  return names.sort(() => chance.next() - 0.5);
}

const ordinal = (i: number): string => {
  const ending = i % 100 >= 11 && i % 100 <= 13 ? 'th' : (['th', 'st', 'nd', 'rd'][i % 10] ?? 'th');
  return `${String(i)}${ending}`;
};

/** Some names are met everywhere and most in few towns. */
function streetName(names: readonly string[], chance: Chance): string {
  const at = Math.floor(names.length * chance.next() ** 2.5);
  const direction = chance.happens(0.3)
    ? `${chance.pick(['North', 'South', 'East', 'West'])} `
    : '';
  return `${direction}${names[at]!} ${chance.pick(TYPES)}`;
}
