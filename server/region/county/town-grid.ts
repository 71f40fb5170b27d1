import { chanceOf, noise2, seedOf } from './chance';
import { simplified, type Point } from './plane';
import { numbersAlong, type StreetClass, type StreetLine } from './street-line';
import type { Terrain } from './terrain';
import type { Town } from './towns';

/** An end of a main street, with a point further out that may lie in the water. */
export interface Gate {
  readonly at: Point;
  readonly outside: Point;
  readonly isDry: boolean;
}

export interface TownPlan {
  readonly lines: readonly StreetLine[];
  readonly parks: readonly Point[][];
  /** Where roads from outside meet the town's streets, each with a point further out. */
  readonly gates: readonly Gate[];
}

/** Streets keep this far from water, in metres; the terrain's distances are good to about 40 m. */
const SHORE_MARGIN = 95;
const STEP = 24;

/**
 * Lays out a town: long streets side by side, cross streets between them. Cross streets of
 * neighbouring bands are often offset, and some are missing, so that most junctions are T-shaped,
 * as they are in towns that grew.
 */
export function layOutTown(seed: number, town: Town, terrain: Terrain): TownPlan {
  const chance = chanceOf(seed, 'grid', town.index);
  const warpSeed = seedOf(seed, 'warp', town.index);
  const edgeSeed = seedOf(seed, 'edge', town.index);
  const [ax, ay] = town.along;
  const bendBy = town.isOnBarrier ? 0 : 46;

  /** From the town's own coordinates (along, across) to the plane. */
  const place = (u: number, v: number): Point => {
    const x = town.at[0] + u * ax - v * ay;
    const y = town.at[1] + u * ay + v * ax;
    if (town.isOnBarrier) return [x + terrain.barrierAt(y)[0] - town.at[0], y];
    return [
      x + bendBy * noise2(x / 1_250, y / 1_250, warpSeed),
      y + bendBy * noise2(x / 1_250, y / 1_250, warpSeed + 1),
    ];
  };

  const reach = town.radius * 1.3;
  const bands = Math.ceil(reach / town.blockDepth);
  const parks = chooseParks(town, chance.below(1_000), seed);
  const inPark = (u: number, k: number): boolean =>
    parks.some((park) => u > park.from + 1 && u < park.to - 1 && k > park.low && k < park.high);

  /** Whether the town reaches to this point of long street k. */
  const isBuilt = (u: number, k: number): boolean => {
    const v = k * town.blockDepth;
    const p = place(u, v);
    // The two main streets run through to the edge; the rest ends raggedly.
    const isMain = k === 0 || Math.abs(u) < 1;
    const ragged =
      town.radius * (isMain ? 0.97 : 1 + 0.3 * noise2(p[0] / 620, p[1] / 620, edgeSeed));
    return u * u + v * v < ragged * ragged && terrain.clearance(p) > SHORE_MARGIN;
  };

  // Cross streets, band by band: band k lies between long streets k and k + 1.
  const crossings = new Map<number, number[]>();
  const lines: StreetLine[] = [];
  const across: { u: number; k: number }[] = [];
  let offset = 0;
  for (let k = -bands; k < bands; k++) {
    if (chance.happens(0.24)) offset = chance.pick([0, 0.24, 0.35, 0.5, 0.65]) * town.blockLength;
    const count = Math.ceil(reach / town.blockLength);
    const places = [0];
    for (let m = -count; m <= count; m++) {
      const u = Math.round(m * town.blockLength + offset);
      // The middle street (u = 0) crosses every band; others keep clear of it.
      if (Math.abs(u) < 60 || chance.happens(0.11)) continue;
      places.push(u);
    }
    for (const park of parks) if (k >= park.low && k < park.high) places.push(park.from, park.to);
    const spaced = [...new Set(places)].sort((a, b) => a - b).filter((u) => !inPark(u, k + 0.5));
    crossings.set(
      k,
      dropCrowded(
        spaced,
        parks.flatMap((park) => [park.from, park.to]),
      ),
    );
  }

  for (const [k, places] of crossings) {
    for (const u of places) if (isBuilt(u, k) && isBuilt(u, k + 1)) across.push({ u, k });
  }

  for (let k = -bands; k <= bands; k++) {
    const met = new Set(across.flatMap((own) => (own.k === k || own.k === k - 1 ? [own.u] : [])));
    const stops = new Set<number>([...(crossings.get(k) ?? []), ...(crossings.get(k - 1) ?? [])]);
    for (let u = -Math.ceil(reach / STEP) * STEP; u <= reach; u += STEP) stops.add(u);
    let run: number[] = [];
    const flush = (): void => {
      // Most streets end at a corner, a few run on into the fields.
      if (k !== 0 && chance.happens(0.75)) while (run.length > 0 && !met.has(run[0]!)) run.shift();
      if (k !== 0 && chance.happens(0.75))
        while (run.length > 0 && !met.has(run.at(-1)!)) run.pop();
      const length = run.length > 1 ? run[run.length - 1]! - run[0]! : 0;
      if (length > 150) lines.push(...longStreet(town, k, run, place));
      run = [];
    };
    for (const u of [...stops].sort((a, b) => a - b)) {
      if (isBuilt(u, k) && !inPark(u, k)) run.push(u);
      else flush();
    }
    flush();
  }

  lines.push(...crossStreets(town, across, place));

  return {
    lines,
    parks: parks
      .map((park) => parkRing(park, town, place))
      .filter((ring) => !ring.some((p) => terrain.clearance(p) < 60)),
    gates: gatesOf(town, lines, place, terrain),
  };
}

interface Park {
  readonly from: number;
  readonly to: number;
  /** The long streets that bound it. */
  readonly low: number;
  readonly high: number;
}

function chooseParks(town: Town, number: number, seed: number): Park[] {
  const chance = chanceOf(seed, 'parks', town.index * 1_000 + number);
  const count = town.isOnBarrier ? 0 : town.size === 'city' ? 4 : town.size === 'town' ? 2 : 1;
  const parks: Park[] = [];
  for (let tries = 0; tries < 60 && parks.length < count; tries++) {
    const length = Math.round(chance.between(0.8, 1.5) * town.blockLength);
    const from = Math.round(chance.between(-0.55, 0.55) * town.radius);
    const low = Math.round((chance.between(-0.55, 0.55) * town.radius) / town.blockDepth);
    const park: Park = { from, to: from + length, low, high: low + 2 };
    // The main streets through the middle stay whole.
    if (park.from < 70 && park.to > -70) continue;
    if (park.low < 0 && park.high > 0) continue;
    if (
      parks.some(
        (other) =>
          other.from - 250 < park.to &&
          park.from - 250 < other.to &&
          other.low - 2 < park.high &&
          park.low - 2 < other.high,
      )
    )
      continue;
    parks.push(park);
  }
  return parks;
}

const parkRing = (park: Park, town: Town, place: (u: number, v: number) => Point): Point[] => {
  const inset = 14;
  const low = park.low * town.blockDepth + inset;
  const high = park.high * town.blockDepth - inset;
  const from = park.from + inset;
  const to = park.to - inset;
  const ring: Point[] = [];
  const side = (u0: number, v0: number, u1: number, v1: number): void => {
    for (let i = 0; i < 6; i++)
      ring.push(place(u0 + ((u1 - u0) * i) / 6, v0 + ((v1 - v0) * i) / 6));
  };
  side(from, low, to, low);
  side(to, low, to, high);
  side(to, high, from, high);
  side(from, high, from, low);
  return [...ring, ring[0]!];
};

/** Leaves out cross streets closer than 45 m to one that must stay. */
function dropCrowded(places: readonly number[], fixed: readonly number[]): number[] {
  const stays = (u: number): boolean => u === 0 || fixed.includes(u);
  return places.filter(
    (u) =>
      stays(u) || !places.some((other) => other !== u && Math.abs(other - u) < 45 && stays(other)),
  );
}

/** Whether a long street is one of the pairs beside the city's main street that run one way each. */
export const isOneWay = (town: Town, k: number): boolean =>
  town.size === 'city' && k !== 0 && Math.abs(k) <= 2;

/** One long street, cut at the town's middle where names carry a direction. */
function longStreet(
  town: Town,
  k: number,
  run: readonly number[],
  place: (u: number, v: number) => Point,
): StreetLine[] {
  const streetClass: StreetClass =
    k === 0
      ? town.size === 'city'
        ? 'secondary'
        : 'tertiary'
      : (k % 6 === 0 && town.size !== 'village') || isOneWay(town, k)
        ? 'tertiary'
        : 'residential';
  const v = k * town.blockDepth;
  const line = (us: readonly number[], side: string): StreetLine => ({
    points: us.map((u) => place(u, v)),
    streetClass,
    street: `${town.index}/a${k}${side}`,
    part: 'along',
    town: town.index,
    numbers: us.map((u) => gridNumber(town, u, town.blockLength)),
    isBridge: false,
  });
  if (!town.hasDirections) return [line(run, '')];
  const parts: StreetLine[] = [];
  const low = run.filter((u) => u <= 0);
  const high = run.filter((u) => u >= 0);
  if (low.length > 1) parts.push(line(low, '-'));
  if (high.length > 1) parts.push(line(high, '+'));
  return parts;
}

/** Joins cross streets of bands that line up into one street. */
function crossStreets(
  town: Town,
  across: readonly { u: number; k: number }[],
  place: (u: number, v: number) => Point,
): StreetLine[] {
  const known = new Set(across.map(({ u, k }) => `${u}/${k}`));
  const lines: StreetLine[] = [];
  for (const { u, k } of across) {
    const side = town.hasDirections ? (k < 0 ? '-' : '+') : '';
    const goesOn = known.has(`${u}/${k - 1}`) && !(town.hasDirections && k === 0);
    if (goesOn) continue;
    let end = k;
    while (known.has(`${u}/${end + 1}`) && !(town.hasDirections && end === -1)) end++;
    const vs: number[] = [];
    for (let band = k; band <= end; band++)
      for (let i = 0; i < 4; i++) vs.push((band + i / 4) * town.blockDepth);
    vs.push((end + 1) * town.blockDepth);
    lines.push({
      points: vs.map((v) => place(u, v)),
      streetClass: u === 0 ? (town.size === 'city' ? 'secondary' : 'tertiary') : 'residential',
      street: `${town.index}/x${u}${side}/${columnOf(across, u, k)}`,
      part: 'across',
      town: town.index,
      numbers: vs.map((v) => gridNumber(town, v, town.blockDepth * 2)),
      isBridge: false,
    });
  }
  return lines;
}

/** Streets of one column that are parted by a gap of many bands are different streets. */
function columnOf(across: readonly { u: number; k: number }[], u: number, k: number): number {
  let part = 0;
  let last: number | null = null;
  for (const other of across) {
    if (other.u !== u || other.k > k) continue;
    if (last !== null && other.k - last > 3) part++;
    last = other.k;
  }
  return part;
}

/** A hundred to the block; from the middle outward where names carry a direction, else from one end. */
const gridNumber = (town: Town, way: number, block: number): number =>
  town.hasDirections
    ? 100 + (Math.abs(way) / block) * 100
    : 100 + ((way + town.radius * 1.35) / block) * 100;

function gatesOf(
  town: Town,
  lines: readonly StreetLine[],
  place: (u: number, v: number) => Point,
  terrain: Terrain,
): Gate[] {
  const ends: Point[] = [];
  for (const kind of [`${town.index}/a0`, `${town.index}/x0`]) {
    const points = lines
      .filter(
        (line) => line.street.startsWith(kind) && /^[+\-/]|^$/.test(line.street.slice(kind.length)),
      )
      .flatMap((line) => line.points);
    const isAlong = kind.includes('a');
    const far = (p: Point): number => {
      const dx = p[0] - town.at[0];
      const dy = p[1] - town.at[1];
      return isAlong
        ? dx * town.along[0] + dy * town.along[1]
        : dy * town.along[0] - dx * town.along[1];
    };
    const sorted = [...points].sort((a, b) => far(a) - far(b));
    const first = sorted[0];
    const last = sorted[sorted.length - 1];
    if (first && last) ends.push(first, last);
  }
  const middle = place(0, 0);
  return ends.map((at) => {
    const dx = at[0] - middle[0];
    const dy = at[1] - middle[1];
    const length = Math.max(1, Math.sqrt(dx * dx + dy * dy));
    const outside: Point = [at[0] + (dx / length) * 330, at[1] + (dy / length) * 330];
    return { at, outside, isDry: terrain.clearance(outside) > 190 };
  });
}

/** The street along the shore, where the town reaches it: pieces of the line of equal distance to water. */
export function waterfront(town: Town, shoreLines: readonly Point[][]): StreetLine[] {
  const lines: StreetLine[] = [];
  let piece: Point[] = [];
  const flush = (): void => {
    if (piece.length > 8) {
      const points = simplified(piece, 2);
      const number = lines.length;
      lines.push({
        points,
        streetClass: 'tertiary',
        street: `${town.index}/w${number}`,
        part: 'waterfront',
        town: town.index,
        numbers: numbersAlong(points, 100, 2.2),
        isBridge: false,
      });
    }
    piece = [];
  };
  for (const ring of shoreLines) {
    for (const p of ring) {
      const dx = p[0] - town.at[0];
      const dy = p[1] - town.at[1];
      if (dx * dx + dy * dy < town.radius * town.radius * 0.95) piece.push(p);
      else flush();
    }
    flush();
  }
  return lines;
}
