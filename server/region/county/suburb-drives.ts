import { chanceOf, noise1, type Chance } from './chance';
import { between, circle, distance, rounded, simplified, type Point } from './plane';
import { numbersAlong, type StreetLine, type StreetSpace } from './street-line';
import type { Terrain } from './terrain';
import type { Town } from './towns';

const DIRECTIONS = circle(48);
/** Streets keep this far from others that they do not join, in metres. */
const APART = 62;
const STEP = 22;
const WANTED = { city: 34, town: 11, village: 5 } as const;

interface SideStreet {
  readonly points: readonly Point[];
  readonly side: 1 | -1;
}

/**
 * Drives that wind out of a town from its last street, with dead-end courts on both sides, of which
 * some neighbours are joined behind.
 */
export function layOutDrives(
  seed: number,
  town: Town,
  terrain: Terrain,
  space: StreetSpace,
): StreetLine[] {
  const chance = chanceOf(seed, 'drives', town.index);
  const wanted = town.isOnBarrier ? 0 : WANTED[town.size];
  const lines: StreetLine[] = [];
  let built = 0;
  for (let tries = 0; tries < wanted * 25 && built < wanted; tries++) {
    const way = chance.pick(DIRECTIONS);
    const out = town.radius * chance.between(0.7, 1.4) + 80;
    const aim: Point = [town.at[0] + way[0] * out, town.at[1] + way[1] * out];
    const foot = space.nearest(aim, 500)?.p;
    if (!foot) continue;
    const drive = winding(foot, aim, chance, terrain, space);
    if (!drive) continue;
    built++;
    const key = `${town.index}/d${tries}`;
    const add = (points: readonly Point[], street: string, part: 'loop' | 'cul'): void => {
      lines.push({
        points,
        streetClass: 'residential',
        street,
        part,
        town: town.index,
        numbers: numbersAlong(points, part === 'loop' ? 100 : 1, 3),
        isBridge: false,
      });
      space.add(points, street);
    };
    const sides = sideStreets(drive, chance, terrain, space);
    add(simplified(drive, 0.8), key, 'loop');
    sides.forEach(({ points }, k) => add(points, `${key}/c${k}`, 'cul'));
    joinedBehind(sides, chance).forEach((points, k) => add(points, `${key}/e${k}`, 'loop'));
  }
  return lines;
}

/** From a street outward, bending, as far as there is room; null when there is hardly any. */
function winding(
  foot: Point,
  aim: Point,
  chance: Chance,
  terrain: Terrain,
  space: StreetSpace,
): Point[] | null {
  const span = distance(foot, aim);
  const length = chance.between(260, 720);
  const bendSeed = chance.below(1_000_000);
  const sway = chance.between(25, 85);
  if (span < 40) return null;
  const dx = (aim[0] - foot[0]) / span;
  const dy = (aim[1] - foot[1]) / span;
  const points: Point[] = [foot];
  for (let way = STEP; way <= length; way += STEP) {
    const sideways = sway * noise1(way / 210, bendSeed) * Math.min(1, way / 130);
    const p: Point = [foot[0] + dx * way - dy * sideways, foot[1] + dy * way + dx * sideways];
    const room = Math.min(APART, way - 12);
    if (terrain.clearance(p) < 112 || space.nearest(p, room) !== null) break;
    points.push(p);
  }
  return points.length * STEP > 210 ? rounded(points, 1, false) : null;
}

/** Courts left and right of a drive, clear of each other and of all other streets. */
function sideStreets(
  drive: readonly Point[],
  chance: Chance,
  terrain: Terrain,
  space: StreetSpace,
): SideStreet[] {
  const found: SideStreet[] = [];
  const walked = distances(drive);
  const end = walked[walked.length - 1]!;
  for (const side of [1, -1] as const) {
    for (let due = chance.between(62, 120); due < end - 30; due += chance.between(64, 118)) {
      const i = walked.findIndex((metres) => metres >= due);
      const [a, b] = [drive[i - 1]!, drive[i]!];
      const foot = b;
      const span = distance(a, b);
      const nx = (-(b[1] - a[1]) / span) * side;
      const ny = ((b[0] - a[0]) / span) * side;
      const length = chance.between(75, 165);
      const bend = chance.between(-0.35, 0.35);
      const tip: Point = [foot[0] + (nx - ny * bend) * length, foot[1] + (ny + nx * bend) * length];
      const knee: Point = [foot[0] + nx * length * 0.5, foot[1] + ny * length * 0.5];
      const points = simplified(rounded([foot, knee, tip], 2, false), 0.5);
      const isClear = [0.4, 0.7, 1].every((share) => {
        const q = between(foot, tip, share);
        return (
          terrain.clearance(q) > 92 &&
          space.nearest(q, 56) === null &&
          found.every((other) => other.points.every((p) => distance(p, q) > 52)) &&
          drive.every((p) => distance(p, q) > Math.min(48, length * share * 0.8))
        );
      });
      if (isClear && chance.happens(0.74)) found.push({ points, side });
    }
  }
  return found;
}

/** Streets from the end of one court to the end of the next. */
function joinedBehind(sides: readonly SideStreet[], chance: Chance): Point[][] {
  const links: Point[][] = [];
  for (let i = 1; i < sides.length; i++) {
    const [one, two] = [sides[i - 1]!, sides[i]!];
    const a = one.points[one.points.length - 1]!;
    const b = two.points[two.points.length - 1]!;
    if (one.side !== two.side || distance(a, b) > 150 || !chance.happens(0.5)) continue;
    links.push([a, b]);
  }
  return links;
}

function distances(points: readonly Point[]): number[] {
  let way = 0;
  return points.map((p, i) => (i === 0 ? 0 : (way += distance(points[i - 1]!, p))));
}
