import { chanceOf, noise1, noise2, type Chance } from './chance';
import { between, circle, distance, rounded, simplified, type Point } from './plane';
import { numbersAlong, StreetSpace, type StreetLine } from './street-line';
import type { Terrain } from './terrain';
import type { Town } from './towns';

const DIRECTIONS = circle(48);
/** Streets of a suburb keep this far from others that they do not join, in metres. */
const APART = 58;

/**
 * Rings of houses at a town's edge: a loop, joined to the nearest streets that exist, with
 * dead-end streets off it.
 */
export function layOutSuburbs(
  seed: number,
  town: Town,
  terrain: Terrain,
  space: StreetSpace,
): StreetLine[] {
  const chance = chanceOf(seed, 'suburbs', town.index);
  const wanted = town.isOnBarrier ? 0 : town.size === 'city' ? 24 : town.size === 'town' ? 9 : 4;
  const lines: StreetLine[] = [];
  let built = 0;
  for (let tries = 0; tries < wanted * 30 && built < wanted; tries++) {
    const way = chance.pick(DIRECTIONS);
    const out = town.radius * chance.between(0.75, 1.45) + 150;
    const middle: Point = [town.at[0] + way[0] * out, town.at[1] + way[1] * out];
    const radius = chance.between(105, 270);
    const key = `${town.index}/l${tries}`;
    const ring = loopAround(middle, radius, chance.below(10_000));
    if (ring.some((p) => terrain.clearance(p) < 110 || space.nearest(p, APART) !== null)) continue;
    const links = linksToStreets(ring, terrain, space, chance);
    if (links.length === 0) continue;
    built++;
    const add = (
      points: readonly Point[],
      street: string,
      part: 'loop' | 'cul',
      first: number,
    ): void => {
      lines.push({
        points,
        streetClass: 'residential',
        street,
        part,
        town: town.index,
        numbers: numbersAlong(points, first, 3),
        isBridge: false,
      });
      space.add(points, street);
    };
    add(ring, key, 'loop', 100);
    links.forEach((points, k) => add(points, `${key}/e${k}`, 'loop', 10));
    addCuls(ring, middle, key, chance, terrain, space, (points, k) =>
      add(points, `${key}/c${k}`, 'cul', 1),
    );
  }
  return lines;
}

function loopAround(middle: Point, radius: number, seed: number): Point[] {
  const ring = circle(16).map(([x, y]): Point => {
    const stretch = radius * (1 + 0.28 * noise2(x * 1.3 + 5, y * 1.3 + 5, seed));
    return [middle[0] + x * stretch * 1.2, middle[1] + y * stretch];
  });
  return simplified(rounded([...ring, ring[0]!], 2, true), 0.8);
}

/** One or two short streets from the loop to the nearest streets, without crossing anything. */
function linksToStreets(
  ring: readonly Point[],
  terrain: Terrain,
  space: StreetSpace,
  chance: Chance,
): Point[][] {
  const near = ring
    .map((p) => ({ p, found: space.nearest(p, 420) }))
    .flatMap(({ p, found }) => (found ? [{ p, to: found.p, metres: found.metres }] : []))
    .sort((a, b) => a.metres - b.metres);
  const links: Point[][] = [];
  for (const { p, to } of near) {
    if (links.length === (chance.happens(0.6) ? 2 : 1)) break;
    if (links.some((link) => distance(link[0]!, p) < 170 || distance(link[1]!, to) < 130)) continue;
    const isClear = [0.2, 0.4, 0.6, 0.8].every((share) => {
      const q = between(p, to, share);
      const room = Math.min(APART, distance(q, to) - 4);
      return terrain.clearance(q) > 90 && (room <= 0 || space.nearest(q, room) === null);
    });
    if (isClear) links.push([p, to]);
  }
  return links;
}

function addCuls(
  ring: readonly Point[],
  middle: Point,
  key: string,
  chance: Chance,
  terrain: Terrain,
  space: StreetSpace,
  add: (points: readonly Point[], number: number) => void,
): void {
  let count = 0;
  for (let i = 2; i < ring.length - 1; i += 5) {
    const foot = ring[i]!;
    const radius = distance(foot, middle);
    const inward = chance.happens(0.4) ? -1 : 1;
    const length =
      inward < 0 ? Math.min(radius * 0.55, chance.between(70, 130)) : chance.between(75, 190);
    if (length < 70) continue;
    const dx = ((foot[0] - middle[0]) / radius) * inward;
    const dy = ((foot[1] - middle[1]) / radius) * inward;
    const bend = chance.between(-0.35, 0.35);
    const tip: Point = [foot[0] + (dx - dy * bend) * length, foot[1] + (dy + dx * bend) * length];
    const middleOfWay: Point = [foot[0] + dx * length * 0.5, foot[1] + dy * length * 0.5];
    const points = simplified(rounded([foot, middleOfWay, tip], 2, false), 0.5);
    const isClear = [0.55, 0.8, 1].every((share) => {
      const q: Point = [foot[0] + (tip[0] - foot[0]) * share, foot[1] + (tip[1] - foot[1]) * share];
      const own = (street: string): boolean =>
        !street.startsWith(key) || distance(q, foot) > APART + 10;
      return terrain.clearance(q) > 90 && space.nearest(q, 50, own) === null;
    });
    if (!isClear) continue;
    add(points, count++);
  }
}

/** Dead-end lanes off the country roads, to the farms behind. */
export function layOutLanes(
  seed: number,
  roads: readonly StreetLine[],
  terrain: Terrain,
  space: StreetSpace,
): StreetLine[] {
  const chance = chanceOf(seed, 'lanes');
  const lines: StreetLine[] = [];
  for (const road of roads) {
    if (road.isBridge || (road.part !== 'rural' && road.part !== 'road')) continue;
    for (let i = 6; i < road.points.length - 3; i += 3 + chance.below(16)) {
      if (!chance.happens(0.5)) continue;
      const foot = road.points[i]!;
      const ahead = road.points[i + 1]!;
      const span = distance(foot, ahead);
      if (span < 1) continue;
      const side = chance.happens(0.5) ? 1 : -1;
      const nx = (-(ahead[1] - foot[1]) / span) * side;
      const ny = ((ahead[0] - foot[0]) / span) * side;
      const length = chance.between(250, 850);
      const bendSeed = chance.below(1_000_000);
      const points: Point[] = [];
      for (let way = 0; way <= length; way += 35) {
        const sideways = 70 * noise1(way / 260, bendSeed) * Math.min(1, way / 200);
        points.push([foot[0] + nx * way - ny * sideways, foot[1] + ny * way + nx * sideways]);
      }
      const isClear = points.every(
        (p, k) =>
          k < 3 ||
          (terrain.clearance(p) > 110 &&
            space.nearest(p, Math.min(85, distance(p, foot) - 10)) === null),
      );
      if (!isClear) continue;
      const street = `lane/${lines.length}`;
      const smooth = simplified(rounded(points, 1, false), 1);
      lines.push({
        points: smooth,
        streetClass: 'residential',
        street,
        part: 'lane',
        town: null,
        numbers: numbersAlong(smooth, 10, 4),
        isBridge: false,
      });
      space.add(smooth, street);
    }
  }
  return lines;
}
