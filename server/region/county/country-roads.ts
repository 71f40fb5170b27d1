import { mix, noise2, seedOf } from './chance';
import { ferryLinks, fordLink, ruralLinks, townLinks, type Wish } from './country-links';
import type { FerryCrossing } from './ferry';
import { CheapestFirst } from './least-cost';
import { BRIDGE_CLEARANCE, linesByGround } from './road-ground';
import { between, distance, rounded, type Point } from './plane';
import { numbersAlong, type StreetLine } from './street-line';
import { HALF_HEIGHT, HALF_WIDTH, type Terrain } from './terrain';
import type { TownPlan } from './town-grid';
import type { Town } from './towns';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { min, max, round } = Math;

/** Metres between the places through which a road may pass. */
const CELL = 260;
const COLUMNS = Math.floor((2 * HALF_WIDTH) / CELL);
const ROWS = Math.floor((2 * HALF_HEIGHT) / CELL);
/** One rural house number per so many metres. */
const METRES_PER_NUMBER = 4;

/**
 * Roads between towns and through the country. Each is the cheapest way over rough ground, where
 * water is dear and roads that exist already are cheap, so that roads bend, join and share.
 */
export function layOutCountry(
  seed: number,
  towns: readonly Town[],
  plans: readonly TownPlan[],
  terrain: Terrain,
  ferry: FerryCrossing | null,
): StreetLine[] {
  const network = new RoadNetwork(seed, towns, terrain);
  for (const wish of townLinks(towns, plans)) network.build(wish);
  if (ferry) for (const wish of ferryLinks(towns, plans, ferry)) network.build(wish);
  network.build(fordLink(terrain));
  const rural = ruralLinks(seed, towns, terrain, (p) => network.isOpenCountry(p));
  for (const wish of rural) network.build(wish);
  return network.lines();
}

class RoadNetwork {
  private readonly places: Point[] = [];
  private readonly clearances: Float64Array;
  private readonly isTown: Uint8Array;
  private readonly built = new Set<number>();
  private readonly runs: {
    wish: Wish;
    nodes: number[];
    gateAtStart: Point | null;
    gateAtEnd: Point | null;
  }[] = [];

  constructor(
    private readonly seed: number,
    towns: readonly Town[],
    private readonly terrain: Terrain,
  ) {
    const jitter = seedOf(seed, 'road-places');
    this.clearances = new Float64Array(COLUMNS * ROWS);
    this.isTown = new Uint8Array(COLUMNS * ROWS);
    for (let j = 0; j < ROWS; j++) {
      for (let i = 0; i < COLUMNS; i++) {
        const k = j * COLUMNS + i;
        const p: Point = [
          i * CELL - HALF_WIDTH + (mix(i, j, jitter) / 4294967296 - 0.5) * CELL * 0.55,
          j * CELL - HALF_HEIGHT + (mix(i, j, jitter + 1) / 4294967296 - 0.5) * CELL * 0.55,
        ];
        this.places.push(p);
        this.clearances[k] = terrain.clearance(p);
        if (
          towns.some(
            (town) => distance(p, town.at) < town.radius * (town.isOnBarrier ? 1 : 1.12) + 60,
          )
        )
          this.isTown[k] = 1;
      }
    }
  }

  isOpenCountry(p: Point): boolean {
    const k = this.cellAt(p);
    return this.isTown[k] === 0 && this.clearances[k]! > 260;
  }

  build(wish: Wish): void {
    const path = this.cheapest(this.cellAt(wish.from), this.cellAt(wish.to), wish.waterCost);
    if (!path) return;
    // Only stretches that did not exist yet become lines of this road.
    let run: number[] = [];
    let isFirst = true;
    const flush = (isLast: boolean): void => {
      if (run.length > 1 || (isFirst && wish.fromGate) || (isLast && wish.toGate)) {
        const nodes = run.length > 0 ? run : [isLast ? path[path.length - 1]! : path[0]!];
        this.runs.push({
          wish,
          nodes,
          gateAtStart: isFirst ? wish.fromGate : null,
          gateAtEnd: isLast ? wish.toGate : null,
        });
      }
      isFirst = false;
      run = [];
    };
    for (let i = 1; i < path.length; i++) {
      const edge = edgeKey(path[i - 1]!, path[i]!);
      if (this.built.has(edge)) {
        if (run.length > 0 || isFirst) flush(false);
        continue;
      }
      this.built.add(edge);
      if (run.length === 0) run.push(path[i - 1]!);
      run.push(path[i]!);
    }
    flush(true);
  }

  /** All roads as smooth lines, cut where others join so that joints stay joints. */
  lines(): StreetLine[] {
    const degree = new Map<number, number>();
    const count = (node: number, by: number): void =>
      void degree.set(node, (degree.get(node) ?? 0) + by);
    for (const { nodes, gateAtStart, gateAtEnd } of this.runs) {
      nodes.forEach((node, i) => count(node, i === 0 || i === nodes.length - 1 ? 1 : 2));
      if (gateAtStart) count(nodes[0]!, 1);
      if (gateAtEnd) count(nodes[nodes.length - 1]!, 1);
    }
    this.relax();
    const result: StreetLine[] = [];
    const measured = new Map<string, number>();
    for (const { wish, nodes, gateAtStart, gateAtEnd } of this.runs) {
      const pieces: Point[][] = [];
      let piece: Point[] = gateAtStart ? [gateAtStart] : [];
      nodes.forEach((node, i) => {
        const p = this.places[node]!;
        piece.push(p);
        if (piece.length > 1 && i < nodes.length - 1 && (degree.get(node) ?? 0) > 2) {
          pieces.push(piece);
          piece = [p];
        }
      });
      if (gateAtEnd) piece.push(gateAtEnd);
      if (piece.length > 1) pieces.push(piece);
      for (const points of pieces) {
        const smooth = rounded(points, 3, false);
        const first = measured.get(wish.street) ?? 100;
        const numbers = numbersAlong(smooth, first, METRES_PER_NUMBER);
        measured.set(wish.street, Math.ceil(numbers[numbers.length - 1]! / 2) * 2 + 10);
        result.push(...linesByGround(wish, smooth, numbers, this.terrain));
      }
    }
    return result;
  }

  /** Draws each road's bends out a little; shared places stay shared. */
  private relax(): void {
    for (let round = 0; round < 3; round++) {
      for (const { nodes } of this.runs) {
        for (let i = 1; i < nodes.length - 1; i++) {
          const p = this.places[nodes[i]!]!;
          const middle = between(this.places[nodes[i - 1]!]!, this.places[nodes[i + 1]!]!, 0.5);
          const moved = between(p, middle, 0.45);
          const isDry = this.terrain.clearance(p) > 120;
          if (!isDry || this.terrain.clearance(moved) > 120) this.places[nodes[i]!] = moved;
        }
      }
    }
  }

  private cheapest(start: number, goal: number, waterCost: number): number[] | null {
    const best = new Map<number, number>([[start, 0]]);
    const before = new Map<number, number>();
    const open = new CheapestFirst();
    const goalAt = this.places[goal]!;
    // 0.25 is below the least factor a metre can have, so the estimate never exceeds the truth.
    const estimate = (node: number): number => distance(this.places[node]!, goalAt) * 0.25;
    open.push(estimate(start), start);
    for (let top = open.pop(); top; top = open.pop()) {
      const node = top.item;
      if (node === goal) break;
      const soFar = best.get(node)!;
      if (top.cost > soFar + estimate(node) + 1e-6) continue;
      const i = node % COLUMNS;
      const j = (node - i) / COLUMNS;
      for (let dj = -1; dj <= 1; dj++) {
        for (let di = -1; di <= 1; di++) {
          const ni = i + di;
          const nj = j + dj;
          if ((di === 0 && dj === 0) || ni < 0 || nj < 0 || ni >= COLUMNS || nj >= ROWS) continue;
          const next = nj * COLUMNS + ni;
          const cost = soFar + this.edgeCost(node, next, waterCost);
          if (cost < (best.get(next) ?? Infinity)) {
            best.set(next, cost);
            before.set(next, node);
            open.push(cost + estimate(next), next);
          }
        }
      }
    }
    if (!best.has(goal)) return null;
    const path = [goal];
    for (let node = before.get(goal); node !== undefined; node = before.get(node)) path.push(node);
    return path.reverse();
  }

  private edgeCost(a: number, b: number, waterCost: number): number {
    const pa = this.places[a]!;
    const pb = this.places[b]!;
    const length = distance(pa, pb);
    if (this.built.has(edgeKey(a, b))) return length * 0.4;
    const middle = between(pa, pb, 0.5);
    const dry = min(this.clearances[a]!, this.clearances[b]!, this.terrain.clearance(middle));
    const rough = 1.15 + 0.5 * noise2(middle[0] / 1_300, middle[1] / 1_300, this.seed + 11);
    const shore = dry < BRIDGE_CLEARANCE ? waterCost : dry < 170 ? 2.6 : 1;
    const town = this.isTown[a] || this.isTown[b] ? 7 : 1;
    return length * rough * shore * town;
  }

  private cellAt([x, y]: Point): number {
    const i = min(COLUMNS - 1, max(0, round((x + HALF_WIDTH) / CELL)));
    const j = min(ROWS - 1, max(0, round((y + HALF_HEIGHT) / CELL)));
    return j * COLUMNS + i;
  }
}

const edgeKey = (a: number, b: number): number => min(a, b) * (COLUMNS * ROWS) + max(a, b);
