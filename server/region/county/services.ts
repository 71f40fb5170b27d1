import type { HouseAddress } from './addresses';
import { chanceOf, shuffled, type Chance } from './chance';
import { nameStock } from './names';
import type { NamedPlace } from './places';
import { distance, type Point } from './plane';
import type { StreetLine } from './street-line';
import type { Town, TownSize } from './towns';

/** A public building: its outline on the ground, and what it is. */
export interface Building {
  readonly ring: readonly Point[];
  readonly kind: string;
}

interface Service {
  readonly key: 'amenity' | 'shop';
  readonly value: string;
  readonly word: string;
  /** OpenStreetMap's value for the building. */
  readonly building: string;
  /** How many stand in a city, a town, a village. */
  readonly count: readonly [city: number, town: number, village: number];
  /** How far from the middle they may stand, as a share of the town's radius. */
  readonly within: number;
}

const SERVICES: readonly Service[] = [
  service('amenity', 'hospital', 'General Hospital', 'hospital', [1, 0, 0], 0.6),
  service('amenity', 'townhall', 'Town Hall', 'civic', [1, 1, 0], 0.3),
  service('amenity', 'clinic', 'Clinic', 'clinic', [3, 1, 1], 0.5),
  service('amenity', 'fire_station', 'Fire House', 'fire_station', [3, 1, 1], 0.6),
  service('amenity', 'police', 'Police Station', 'civic', [1, 1, 0], 0.35),
  service('amenity', 'library', 'Library', 'civic', [2, 1, 0], 0.4),
  service('amenity', 'pharmacy', 'Pharmacy', 'retail', [3, 1, 0], 0.5),
  service('amenity', 'school', 'School', 'school', [5, 2, 1], 0.8),
  service('shop', 'supermarket', 'Grocery', 'retail', [5, 2, 1], 0.8),
  service('amenity', 'place_of_worship', 'Church', 'church', [5, 2, 1], 0.7),
];
const COUNT_OF: Readonly<Record<TownSize, 0 | 1 | 2>> = { city: 0, town: 1, village: 2 };
const APART = 90;

function service(
  key: Service['key'],
  value: string,
  word: string,
  building: string,
  count: Service['count'],
  within: number,
): Service {
  return { key, value, word, building, count, within };
}

/** What a town needs, on its streets; a marina where it reaches the shore. */
export function services(
  seed: number,
  town: Town,
  lines: readonly StreetLine[],
  addresses: readonly HouseAddress[],
): { places: NamedPlace[]; buildings: Building[] } {
  const chance = chanceOf(seed, 'services', town.index);
  const name = nameStock(seed, `service-names ${town.index}`);
  const partOf = new Map(lines.map(({ street, part }) => [street, part]));
  const onGrid = shuffled(
    addresses.filter(({ town: own, street }) => {
      const part = partOf.get(street);
      return own === town.index && (part === 'along' || part === 'across');
    }),
    chance,
  );
  const places: NamedPlace[] = [];
  const buildings: Building[] = [];
  for (const own of SERVICES) {
    for (let k = 0; k < own.count[COUNT_OF[town.size]]; k++) {
      const house = onGrid.find(
        ({ at }) =>
          distance(at, town.at) < town.radius * own.within &&
          places.every((other) => distance(other.at, at) > APART),
      );
      if (!house) continue;
      places.push({
        at: house.at,
        tags: {
          [own.key]: own.value,
          // The first is the town's own; the others are called after something nearby.
          name: k === 0 ? `${town.name} ${own.word}` : name(own.word),
          'addr:housenumber': String(house.number),
          'addr:street': house.streetName,
          'addr:city': town.name,
          'addr:postcode': house.postcode,
        },
      });
      buildings.push({
        ring: outline(house, town, partOf.get(house.street) === 'along', chance),
        kind: own.building,
      });
    }
  }
  const shore = lines.find((line) => line.part === 'waterfront' && line.town === town.index);
  if (shore) {
    const at = shore.points[shore.points.length >> 1]!;
    places.push({
      at: [at[0] + 20, at[1] + 5],
      tags: { leisure: 'marina', name: `${town.name} Marina` },
    });
  }
  return { places, buildings };
}

/** A rectangle that stands along its street, no deeper than the house plot is. */
function outline(
  { at }: HouseAddress,
  { along: [ax, ay] }: Town,
  isAlong: boolean,
  chance: Chance,
): Point[] {
  const half = chance.between(10, 13);
  const deep = chance.between(7.5, 10.5);
  const [u, v] = isAlong ? [half, deep] : [deep, half];
  const corner = (i: 1 | -1, j: 1 | -1): Point => [
    at[0] + i * u * ax - j * v * ay,
    at[1] + i * u * ay + j * v * ax,
  ];
  return [corner(-1, -1), corner(1, -1), corner(1, 1), corner(-1, 1), corner(-1, -1)];
}
