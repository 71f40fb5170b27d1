import { chanceOf, noise1, noise2, type Chance } from './chance';
import { between, circle, distance, rounded, simplified, type Point } from './plane';
import { numbersAlong, type StreetSpace, type StreetLine } from './street-line';
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
  const wanted = town.isOnBarrier ? 0 : town.size === 'city' ? 7 : town.size === 'town' ? 3 : 1;
  const lines: StreetLine[] = [];
  let built = 0;
  for (let tries = 0; tries < wanted * 30 && built < wanted; tries++) {
    const way = chance.pick(DIRECTIONS);
    const out = town.radius * chance.between(0.75, 1.5) + 150;
    const middle: Point = [town.at[0] + way[0] * out, town.at[1] + way[1] * out];
    const key = `${town.index}/l${tries}`;
    const ring = loopAround(middle, chance);
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
    const through = streetThrough(ring, chance);
    if (through) add(through, `${key}/e9`, 'loop', 100);
    addCuls(ring, middle, key, chance, terrain, space, (points, k) =>
      add(points, `${key}/c${k}`, 'cul', 1),
    );
  }
  return lines;
}

/** A lopsided loop, longer than it is wide. */
function loopAround(middle: Point, chance: Chance): Point[] {
  const radius = chance.between(140, 320);
  const width = chance.between(0.5, 0.95);
  const seed = chance.below(10_000);
  const [ax, ay] = chance.pick(DIRECTIONS);
  const ring = circle(14).map(([x, y]): Point => {
    const stretch = radius * (1 + 0.42 * noise2(x * 1.2 + 5, y * 1.2 + 5, seed));
    const u = x * stretch;
    const v = y * stretch * width;
    return [middle[0] + u * ax - v * ay, middle[1] + u * ay + v * ax];
  });
  return simplified(rounded([...ring, ring[0]!], 2, true), 0.8);
}

/** A bent street that cuts a large loop in two unequal parts; null when the loop is small. */
function streetThrough(ring: readonly Point[], chance: Chance): Point[] | null {
  const from = chance.below(ring.length - 1);
  const to = (from + Math.round(ring.length * chance.between(0.3, 0.42))) % (ring.length - 1);
  const a = ring[from]!;
  const b = ring[to]!;
  if (distance(a, b) < 220) return null;
  const bend = chance.between(-0.14, 0.14);
  const middle = between(a, b, 0.5);
  const bent: Point = [middle[0] - (b[1] - a[1]) * bend, middle[1] + (b[0] - a[0]) * bend];
  return simplified(rounded([a, bent, b], 3, false), 0.5);
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
  for (let i = 1 + chance.below(4); i < ring.length - 1; i += 3 + chance.below(6)) {
    if (!chance.happens(0.5)) continue;
    const foot = ring[i]!;
    const radius = distance(foot, middle);
    const inward = chance.happens(0.25) ? -1 : 1;
    const length =
      inward < 0 ? Math.min(radius * 0.5, chance.between(70, 110)) : chance.between(70, 170);
    if (length < 70) continue;
    const dx = ((foot[0] - middle[0]) / radius) * inward;
    const dy = ((foot[1] - middle[1]) / radius) * inward;
    const bend = chance.between(-0.8, 0.8);
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
