import { chanceOf } from './chance';
import type { FerryCrossing } from './ferry';
import { between, distance, type Point } from './plane';
import type { StreetClass, StreetPart } from './street-line';
import { HALF_HEIGHT, HALF_WIDTH, type Terrain } from './terrain';
import type { TownPlan } from './town-grid';
import type { Town } from './towns';

const FORD_NORTHING = 6_300;

/** A road that is wanted; the ground decides where it runs. */
export interface Wish {
  readonly from: Point;
  readonly to: Point;
  /** Ends of town streets to join on; null at a crossing in the country. */
  readonly fromGate: Point | null;
  readonly toGate: Point | null;
  readonly streetClass: StreetClass;
  readonly part: StreetPart;
  readonly street: string;
  /** How many times dearer a metre over water is. */
  readonly waterCost: number;
  /** Whether it lies so low by the shore that a storm floods it. */
  readonly floods?: boolean;
}

/** Pairs of towns with no third town inside the circle over them (Gabriel's graph), the barrier apart. */
export function townLinks(towns: readonly Town[], plans: readonly TownPlan[]): Wish[] {
  const pairs: { a: Town; b: Town; length: number }[] = [];
  for (const a of towns) {
    for (const b of towns) {
      if (b.index <= a.index || a.isOnBarrier !== b.isOnBarrier) continue;
      const middle = between(a.at, b.at, 0.5);
      const length = distance(a.at, b.at);
      if (
        towns.some(
          (c) =>
            c !== a &&
            c !== b &&
            c.isOnBarrier === a.isOnBarrier &&
            distance(c.at, middle) < length / 2,
        )
      )
        continue;
      pairs.push({ a, b, length });
    }
  }
  const mainland = towns.filter((town) => !town.isOnBarrier);
  const rank = (pair: { a: Town; b: Town }): number =>
    pair.a.size === 'city' ? 0 : pair.a.size === 'town' && pair.b.size === 'town' ? 1 : 2;
  pairs.sort(
    (p, q) =>
      rank(p) - rank(q) || p.length - q.length || p.a.index - q.a.index || p.b.index - q.b.index,
  );
  const wishes: Wish[] = [];
  const link = (
    a: Town,
    b: Town,
    streetClass: StreetClass,
    part: StreetPart,
    waterCost: number,
    { mayStartOnShore = false, floods = false } = {},
  ): void => {
    const [fromGate, from] = gateToward(plans[a.index]!, a, b.at, mayStartOnShore);
    const [toGate, to] = gateToward(plans[b.index]!, b, a.at, mayStartOnShore);
    wishes.push({
      from,
      to,
      fromGate,
      toGate,
      streetClass,
      part,
      street: `c/${a.index}-${b.index}`,
      waterCost,
      floods,
    });
  };
  for (const pair of pairs.filter(({ a }) => !a.isOnBarrier)) {
    const kind = rank(pair);
    link(pair.a, pair.b, kind === 0 ? 'primary' : 'secondary', kind === 0 ? 'highway' : 'road', 11);
  }
  // Inlets stay without a bridge: water is dearer along the strip than any way round.
  const [southern, middle, northern] = towns.filter((town) => town.isOnBarrier) as [
    Town,
    Town,
    Town,
  ];
  link(middle, northern, 'secondary', 'road', 60);
  for (const village of [southern, northern]) {
    const nearest = [...mainland].sort(
      (a, b) => distance(a.at, village.at) - distance(b.at, village.at),
    )[0]!;
    // The northern causeway is the city's main street, carried on over the sound; the southern one
    // is older and lies low.
    link(nearest, village, 'primary', 'highway', 5, {
      mayStartOnShore: village === northern,
      floods: village === southern,
    });
  }
  return wishes;
}

/** The gate of a town that faces a place best, with the point outside it. */
function gateToward(
  plan: TownPlan,
  town: Town,
  goal: Point,
  mayBeOnShore: boolean,
): [Point, Point] {
  const dry = plan.gates.filter(({ isDry }) => isDry);
  const gates = mayBeOnShore || dry.length === 0 ? plan.gates : dry;
  let best = gates[0]!;
  let bestScore = -Infinity;
  for (const gate of gates) {
    const gx = gate.outside[0] - town.at[0];
    const gy = gate.outside[1] - town.at[1];
    const score =
      (gx * (goal[0] - town.at[0]) + gy * (goal[1] - town.at[1])) / Math.sqrt(gx * gx + gy * gy);
    if (score > bestScore) {
      bestScore = score;
      best = gate;
    }
  }
  return [best.at, best.outside];
}

/** Roads from the nearest towns to the landings of the ferry. */
export function ferryLinks(
  towns: readonly Town[],
  plans: readonly TownPlan[],
  { west, east }: FerryCrossing,
): Wish[] {
  return [west, east].map((landing, k) => {
    const isOwnSide = (town: Town): boolean => town.at[0] > west[0] === (landing === east);
    const town = towns
      .filter((candidate) => !candidate.isOnBarrier && isOwnSide(candidate))
      .sort((a, b) => distance(a.at, landing) - distance(b.at, landing))[0]!;
    const [fromGate, from] = gateToward(plans[town.index]!, town, landing, false);
    return {
      from,
      // The lattice's nearest place to the landing itself may lie in the water.
      to: [landing[0] + (landing === east ? 300 : -300), landing[1]],
      fromGate,
      toGate: landing,
      streetClass: 'tertiary',
      part: 'rural',
      street: `r/f${k}`,
      waterCost: 60,
    };
  });
}

/** A back road through the river where it is a brook. */
export function fordLink(terrain: Terrain): Wish {
  const brook = terrain.river.find(([, y]) => y > FORD_NORTHING) ?? terrain.river.at(-1)!;
  const bank = (off: number): Point => [brook[0] + off, brook[1]];
  return { ...ruralWish(bank(-1_500), bank(1_500), 'r/ford', 'unclassified'), waterCost: 3 };
}

/** A loose lattice of crossings in open country, each joined to a few neighbours. */
export function ruralLinks(
  seed: number,
  towns: readonly Town[],
  terrain: Terrain,
  isOpenCountry: (p: Point) => boolean,
): Wish[] {
  const chance = chanceOf(seed, 'rural');
  const spots: Point[] = [];
  const pitch = 2_000;
  for (let y = -HALF_HEIGHT; y < HALF_HEIGHT; y += pitch) {
    for (let x = -HALF_WIDTH; x < HALF_WIDTH; x += pitch) {
      const p: Point = [x + chance.between(-650, 650), y + chance.between(-650, 650)];
      if (Math.abs(p[0] - terrain.barrierAt(p[1])[0]) < 900) continue;
      if (isOpenCountry(p)) spots.push(p);
    }
  }
  const wishes: Wish[] = [];
  spots.forEach((a, i) => {
    spots.forEach((b, j) => {
      if (j <= i) return;
      const length = distance(a, b);
      if (length > 3_600) return;
      const middle = between(a, b, 0.5);
      if (spots.some((c) => c !== a && c !== b && distance(c, middle) < length / 2)) return;
      if (!chance.happens(0.72)) return;
      wishes.push(
        ruralWish(a, b, `r/${i}-${j}`, chance.happens(0.4) ? 'tertiary' : 'unclassified'),
      );
    });
  });
  // Towns get a country road or two besides the ones to other towns.
  for (const town of towns.filter(({ isOnBarrier }) => !isOnBarrier)) {
    const near = spots
      .map((p) => ({ p, metres: distance(p, town.at) }))
      .filter(({ metres }) => metres < town.radius + 2_600)
      .sort((a, b) => a.metres - b.metres)
      .slice(0, 2);
    near.forEach(({ p }, k) => {
      const other = spots.find((q) => q !== p && distance(p, q) < 2_800);
      if (other) wishes.push(ruralWish(p, other, `r/t${town.index}-${k}`, 'tertiary'));
    });
  }
  return wishes;
}

const ruralWish = (from: Point, to: Point, street: string, streetClass: StreetClass): Wish => ({
  from,
  to,
  fromGate: null,
  toGate: null,
  streetClass,
  part: 'rural',
  street,
  waterCost: 14,
});
