import { chanceOf, noise2, seedOf } from './chance';
import type { Point } from './plane';
import type { StreetClass, StreetLine } from './street-line';
import type { Terrain } from './terrain';
import { gatesOf, type Gate } from './town-edge';
import { chooseParks, parkRing } from './town-parks';
import type { Town } from './towns';

export interface TownPlan {
  readonly lines: readonly StreetLine[];
  readonly parks: readonly Point[][];
  /** Where roads from outside meet the town's streets, each with a point further out. */
  readonly gates: readonly Gate[];
}

/** Streets keep this far from water, in metres; the terrain's distances are good to about 40 m. */
const SHORE_MARGIN = 95;
const STEP = 24;
/** Metres; a river with its margins on both sides, but no lake. */
const LONGEST_TOWN_BRIDGE = 330;

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
    let reachedTo: number | null = null;
    const flush = (): void => {
      // Most streets end at a corner, a few run on into the fields.
      if (k !== 0 && chance.happens(0.75)) while (run.length > 0 && !met.has(run[0]!)) run.shift();
      if (k !== 0 && chance.happens(0.75))
        while (run.length > 0 && !met.has(run.at(-1)!)) run.pop();
      const [from, to] = [run[0], run.at(-1)];
      if (k === 0 && from !== undefined && to !== undefined) {
        if (reachedTo !== null && from - reachedTo < LONGEST_TOWN_BRIDGE)
          lines.push(townBridge(town, reachedTo, from, place));
        reachedTo = to;
      }
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

/** The main street goes on over the river that a town was built at. */
function townBridge(
  town: Town,
  from: number,
  to: number,
  place: (u: number, v: number) => Point,
): StreetLine {
  const side = town.hasDirections ? (from + to < 0 ? '-' : '+') : '';
  return {
    points: [place(from, 0), place((from + to) / 2, 0), place(to, 0)],
    streetClass: town.size === 'city' ? 'secondary' : 'tertiary',
    street: `${town.index}/a0${side}`,
    part: 'along',
    town: town.index,
    numbers: null,
    isBridge: true,
  };
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
