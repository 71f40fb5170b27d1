import type { HouseAddress } from './addresses';
import { chanceOf, noise2, seedOf } from './chance';
import type { FerryCrossing } from './ferry';
import type { StreetGraph } from './junctions';
import { nameStock } from './names';
import { circle, distance, rounded, type Point } from './plane';
import { services, type Building } from './services';
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
  readonly buildings: readonly Building[];
  readonly woods: readonly Point[][];
  readonly reserve: readonly Point[];
  readonly lakeNames: readonly string[];
  readonly parkName: (number: number) => string;
}

export function makePlaces(
  seed: number,
  terrain: Terrain,
  towns: readonly Town[],
  lines: readonly StreetLine[],
  graph: StreetGraph,
  addresses: readonly HouseAddress[],
  ferry: FerryCrossing | null,
): CountyPlaces {
  const serving = towns.map((town) => services(seed, town, lines, addresses));
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
    ...farms(seed, lines, new Set(graph.stretches.map(({ line }) => line))),
    ...serving.flatMap(({ places }) => places),
    ...ferryTerminals(ferry),
  ];
  return {
    points,
    buildings: serving.flatMap(({ buildings }) => buildings),
    woods: woods(seed, terrain, towns),
    reserve: reserveOn(terrain),
    lakeNames: terrain.lakes.map(() => lakeName('Lake')),
    parkName: memo(() => parkName('Park')),
  };
}

function ferryTerminals(ferry: FerryCrossing | null): NamedPlace[] {
  if (!ferry) return [];
  return (['west', 'east'] as const).map((side) => ({
    at: [ferry[side][0], ferry[side][1] + 15],
    tags: {
      amenity: 'ferry_terminal',
      name: `${side === 'west' ? 'West' : 'East'} Estuary Ferry Landing`,
    },
  }));
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

/** Farms at the ends of the lanes, each with the name of its own. */
function farms(
  seed: number,
  lines: readonly StreetLine[],
  isBuilt: ReadonlySet<number>,
): NamedPlace[] {
  const chance = chanceOf(seed, 'farms');
  const name = nameStock(seed, 'farm-names');
  return lines.flatMap((line, index): NamedPlace[] => {
    const end = line.points[line.points.length - 1];
    if (line.part !== 'lane' || !isBuilt.has(index) || !end || !chance.happens(0.35)) return [];
    return [{ at: [end[0] + 18, end[1] + 12], tags: { place: 'farm', name: name('Farm') } }];
  });
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
