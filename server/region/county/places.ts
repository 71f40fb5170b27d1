import type { HouseAddress } from './addresses';
import { chanceOf, noise2, seedOf } from './chance';
import type { StreetGraph } from './junctions';
import { nameStock } from './names';
import { circle, distance, rounded, type Point } from './plane';
import type { StreetLine } from './street-line';
import type { Terrain } from './terrain';
import type { Town } from './towns';

/** Something with a name at a point, tagged as OpenStreetMap tags it. */
export interface NamedPlace {
  readonly at: Point;
  readonly tags: Readonly<Record<string, string>>;
}

export interface CountyPlaces {
  readonly points: readonly NamedPlace[];
  readonly woods: readonly Point[][];
  readonly reserve: readonly Point[];
  readonly lakeNames: readonly string[];
  readonly parkName: (number: number) => string;
}

const SERVICES: readonly {
  readonly key: 'amenity' | 'shop';
  readonly value: string;
  readonly word: string;
  readonly in: readonly Town['size'][];
}[] = [
  { key: 'amenity', value: 'clinic', word: 'Clinic', in: ['city', 'town', 'village'] },
  { key: 'amenity', value: 'school', word: 'School', in: ['city', 'town', 'village'] },
  { key: 'shop', value: 'supermarket', word: 'Grocery', in: ['city', 'town', 'village'] },
  { key: 'amenity', value: 'fire_station', word: 'Fire House', in: ['city', 'town'] },
  { key: 'amenity', value: 'pharmacy', word: 'Pharmacy', in: ['city', 'town'] },
  { key: 'amenity', value: 'townhall', word: 'Town Hall', in: ['city', 'town'] },
  { key: 'amenity', value: 'hospital', word: 'General Hospital', in: ['city'] },
  { key: 'amenity', value: 'library', word: 'Library', in: ['city'] },
];

export function makePlaces(
  seed: number,
  terrain: Terrain,
  towns: readonly Town[],
  lines: readonly StreetLine[],
  graph: StreetGraph,
  addresses: readonly HouseAddress[],
): CountyPlaces {
  const lakeName = nameStock(seed, 'lake-names');
  const parkName = nameStock(seed, 'park-names');
  const points: NamedPlace[] = [
    { at: [-3_000, 600], tags: { place: 'county', name: 'Skerry County' } },
    {
      at: terrain.barrierAt(1_500).map((v, i) => (i === 0 ? v - 1_150 : v)) as unknown as Point,
      tags: { natural: 'strait', name: 'Kestrel Sound' },
    },
    { at: [terrain.river[0]![0], -9_500], tags: { natural: 'bay', name: 'Sedge Estuary' } },
    ...towns.map((town): NamedPlace => ({
      at: town.at,
      tags: { place: town.size, name: town.name, postal_code: town.postcodes.join(';') },
    })),
    ...hamlets(seed, towns, lines, graph),
    ...towns.flatMap((town) => services(seed, town, lines, addresses)),
  ];
  return {
    points,
    woods: woods(seed, terrain, towns),
    reserve: reserveOn(terrain),
    lakeNames: terrain.lakes.map(() => lakeName('Lake')),
    parkName: memo(() => parkName('Park')),
  };
}

const memo = (make: () => string): ((number: number) => string) => {
  const made: string[] = [];
  return (number) => {
    while (made.length <= number) made.push(make());
    return made[number]!;
  };
};

/** Small names at crossings far from the towns. */
function hamlets(
  seed: number,
  towns: readonly Town[],
  lines: readonly StreetLine[],
  graph: StreetGraph,
): NamedPlace[] {
  const name = nameStock(seed, 'hamlet-names');
  const degree = new Map<number, number>();
  for (const { line, from, to } of graph.stretches) {
    const { part } = lines[line]!;
    if (part !== 'rural' && part !== 'road' && part !== 'highway') continue;
    for (const node of [from, to]) degree.set(node, (degree.get(node) ?? 0) + 1);
  }
  const found: NamedPlace[] = [];
  graph.nodes.forEach((at, node) => {
    if ((degree.get(node) ?? 0) < 4) return;
    if (towns.some((town) => distance(town.at, at) < town.radius + 1_800)) return;
    if (found.some((other) => distance(other.at, at) < 3_600)) return;
    found.push({ at, tags: { place: 'hamlet', name: name('Corner') } });
  });
  return found;
}

/** What every town has: a school, a clinic, a grocery; a marina where it reaches the shore. */
function services(
  seed: number,
  town: Town,
  lines: readonly StreetLine[],
  addresses: readonly HouseAddress[],
): NamedPlace[] {
  const chance = chanceOf(seed, 'services', town.index);
  const near = addresses.filter(
    (address) => address.town === town.index && distance(address.at, town.at) < town.radius * 0.8,
  );
  const places: NamedPlace[] = [];
  for (const service of SERVICES) {
    if (!service.in.includes(town.size)) continue;
    const house = chance.pick(near);
    places.push({
      at: [house.at[0] + 4, house.at[1] + 4],
      tags: {
        [service.key]: service.value,
        name: `${town.name} ${service.word}`,
        'addr:housenumber': String(house.number),
        'addr:street': house.streetName,
        'addr:city': town.name,
        'addr:postcode': house.postcode,
      },
    });
  }
  const shore = lines.find((line) => line.part === 'waterfront' && line.town === town.index);
  if (shore) {
    const at = shore.points[shore.points.length >> 1]!;
    places.push({
      at: [at[0] + 20, at[1] + 5],
      tags: { leisure: 'marina', name: `${town.name} Marina` },
    });
  }
  return places;
}

function woods(seed: number, terrain: Terrain, towns: readonly Town[]): Point[][] {
  const chance = chanceOf(seed, 'woods');
  const shape = seedOf(seed, 'wood-edges');
  const rays = circle(20);
  const result: Point[][] = [];
  for (let tries = 0; tries < 900 && result.length < 60; tries++) {
    const at: Point = [chance.between(-16_000, 11_000), chance.between(-20_000, 20_000)];
    const radius = chance.between(220, 900);
    if (terrain.clearance(at) < radius * 1.7 + 150) continue;
    if (towns.some((town) => distance(town.at, at) < town.radius * 1.5 + radius * 1.5)) continue;
    const ring = rays.map(([x, y]): Point => {
      const stretch = radius * (1 + 0.5 * noise2(x * 2 + result.length * 9, y * 2, shape));
      return [at[0] + x * stretch, at[1] + y * stretch];
    });
    result.push(rounded([...ring, ring[0]!], 2, true));
  }
  return result;
}

/** A nature reserve on the empty northern part of the barrier. */
function reserveOn(terrain: Terrain): Point[] {
  const north = terrain.inlets[1]! + 1_100;
  const west: Point[] = [];
  const east: Point[] = [];
  for (let y = north; y < north + 4_600; y += 230) {
    const [x] = terrain.barrierAt(y);
    west.push([x - 110, y]);
    east.push([x + 110, y]);
  }
  const ring = [...east, ...west.reverse()];
  return [...ring, ring[0]!];
}
