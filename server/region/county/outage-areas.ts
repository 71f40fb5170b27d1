import { chanceOf } from './chance';
import { circle, toLonLat, type Point } from './plane';
import { makeTerrain } from './terrain';
import { placeTowns } from './towns';

export interface OutageAreaPlan {
  readonly name: string;
  /** GeoJSON, [lon, lat], one closed ring. */
  readonly polygon: { readonly type: 'Polygon'; readonly coordinates: [number, number][][] };
}

interface Feeder {
  readonly name: string;
  readonly at: Point;
  readonly reach: number;
}

/**
 * The areas that the demo storm leaves without power, named after invented feeders. They cover
 * the city in three parts and most towns, and never overlap. The same seed gives the same areas.
 */
export function demoOutageAreas(seed: number): OutageAreaPlan[] {
  const chance = chanceOf(seed, 'outage-areas');
  const terrain = makeTerrain(seed);
  const towns = placeTowns(seed, terrain);
  const city = towns[0]!;
  const feeders: Feeder[] = [];
  const add = (name: string, at: Point, reach: number): void =>
    void feeders.push({ name, at, reach });
  for (const [k, [x, y]] of circle(3).entries()) {
    add(
      `Heron ${k + 1}`,
      [city.at[0] + x * city.radius * 0.62, city.at[1] + y * city.radius * 0.62],
      city.radius * 1.05,
    );
  }
  const names = ['Osprey 1', 'Tamarack 2', 'Granite 1', 'Kestrel 4'];
  for (const [k, name] of names.entries()) {
    const town = towns[k + 1]!;
    add(name, town.at, town.radius * 1.75);
  }
  const strip = towns.filter(({ isOnBarrier }) => isOnBarrier);
  const barrier = strip[strip.length - 1]!;
  add('Strand 1', barrier.at, 1_700);

  const rays = circle(28);
  return feeders.map((feeder) => {
    let ring = rays.map(([x, y]): Point => {
      const reach = feeder.reach * chance.between(0.9, 1.1);
      return [feeder.at[0] + x * reach, feeder.at[1] + y * reach];
    });
    for (const other of feeders) if (other !== feeder) ring = nearerHalf(ring, feeder.at, other.at);
    const closed = [...ring, ring[0]!];
    return { name: feeder.name, polygon: { type: 'Polygon', coordinates: [closed.map(toLonLat)] } };
  });
}

/** Cuts a ring by the line of equal distance to two places, keeping the side of the first (Sutherland and Hodgman). */
function nearerHalf(ring: readonly Point[], own: Point, other: Point): Point[] {
  const dx = other[0] - own[0];
  const dy = other[1] - own[1];
  const middle = (dx * (own[0] + other[0]) + dy * (own[1] + other[1])) / 2;
  // 10 m short of the middle, so that rounding cannot make neighbours overlap.
  const limit = middle - 10 * Math.sqrt(dx * dx + dy * dy);
  const side = ([x, y]: Point): number => dx * x + dy * y - limit;
  const kept: Point[] = [];
  ring.forEach((p, i) => {
    const before = ring[(i + ring.length - 1) % ring.length]!;
    const a = side(before);
    const b = side(p);
    if (a <= 0 !== b <= 0) {
      const share = a / (a - b);
      kept.push([before[0] + (p[0] - before[0]) * share, before[1] + (p[1] - before[1]) * share]);
    }
    if (b <= 0) kept.push(p);
  });
  return kept;
}
