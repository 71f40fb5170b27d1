import type { OsmExtract } from './osm-extract';
import type { OsmWay } from './osm-model';
import { isFord, isInTheWay, roadWayOf, type RoadWay } from './road-tags';
import { greatCircleKm } from '@shared/domain/travel/great-circle';

/** A stretch of one way between two nodes that matter. */
export interface RoadPiece {
  readonly way: number;
  readonly road: RoadWay;
  readonly isFord: boolean;
  /** Numbers of its end nodes; a barrier splits a node into one for each piece. */
  readonly from: number;
  readonly to: number;
  readonly alongMs: number;
  readonly againstMs: number;
  readonly metres: number;
  readonly lons: readonly number[];
  readonly lats: readonly number[];
}

export interface RoadPieces {
  readonly pieces: readonly RoadPiece[];
  readonly nodes: number;
  /** The number of a node of the extract; undefined for one that no piece ends at. */
  readonly numberOf: ReadonlyMap<number, number>;
}

/**
 * Cuts the drivable ways where they meet, at the nodes that the extract lacks, beside fords and at
 * barriers. What a barrier parts is not joined again.
 */
export function roadPieces(extract: OsmExtract, keep: ReadonlySet<number>): RoadPieces {
  const roads: { readonly way: OsmWay; readonly road: RoadWay }[] = [];
  const uses = new Map<number, number>();
  for (const way of extract.ways.values()) {
    const road = roadWayOf(way.tags);
    if (!road) continue;
    roads.push({ way, road });
    way.refs.forEach((ref, i) => {
      const isEnd = i === 0 || i === way.refs.length - 1;
      uses.set(ref, (uses.get(ref) ?? 0) + (isEnd ? 2 : 1));
    });
  }
  const barriers = new Set<number>();
  const fords = new Set<number>();
  for (const { id, tags } of extract.namedNodes) {
    if (!uses.has(id)) continue;
    if (isInTheWay(tags)) barriers.add(id);
    if (isFord(tags)) fords.add(id);
  }
  const cutter = new Cutter(extract, barriers, fords, (ref) => uses.get(ref)! > 1 || keep.has(ref));
  for (const { way, road } of roads) cutter.cut(way, road);
  return { pieces: cutter.pieces, nodes: cutter.nodes, numberOf: cutter.numberOf };
}

class Cutter {
  readonly pieces: RoadPiece[] = [];
  readonly numberOf = new Map<number, number>();
  nodes = 0;

  constructor(
    private readonly extract: OsmExtract,
    private readonly barriers: ReadonlySet<number>,
    private readonly fords: ReadonlySet<number>,
    private readonly matters: (ref: number) => boolean,
  ) {}

  cut(way: OsmWay, road: RoadWay): void {
    const places = way.refs.map((ref) => this.extract.at(ref));
    const whole = road.minutes === null ? 0 : lengthOf(places);
    let begin = 0;
    for (let i = 1; i < way.refs.length; i++) {
      if (!places[i] || !places[i - 1]) {
        begin = i;
        continue;
      }
      const isNearFord = this.fords.has(way.refs[i]!) || this.fords.has(way.refs[i - 1]!);
      const isNextNearFord = this.fords.has(way.refs[i]!) || this.fords.has(way.refs[i + 1] ?? -1);
      const ends =
        i === way.refs.length - 1 ||
        !places[i + 1] ||
        this.matters(way.refs[i]!) ||
        this.barriers.has(way.refs[i]!) ||
        isNearFord !== isNextNearFord;
      if (!ends) continue;
      this.add(way, road, places as readonly (readonly [number, number])[], begin, i, {
        isFord: road.isFord || isNearFord,
        whole,
      });
      begin = i;
    }
  }

  private add(
    way: OsmWay,
    road: RoadWay,
    places: readonly (readonly [number, number])[],
    begin: number,
    end: number,
    { isFord: ford, whole }: { readonly isFord: boolean; readonly whole: number },
  ): void {
    const line = places.slice(begin, end + 1);
    const metres = lengthOf(line);
    const ms = (kmh: number): number => {
      if (kmh === 0) return 0;
      const taken =
        road.minutes !== null && whole > 0
          ? (road.minutes * 60_000 * metres) / whole
          : (metres * 3600) / kmh;
      return Math.max(1, Math.round(taken));
    };
    this.pieces.push({
      way: way.id,
      road,
      isFord: ford,
      from: this.number(way.refs[begin]!),
      to: this.number(way.refs[end]!),
      alongMs: ms(road.alongKmh),
      againstMs: ms(road.againstKmh),
      metres,
      lons: line.map(([lon]) => Math.round(lon * 1e7)),
      lats: line.map(([, lat]) => Math.round(lat * 1e7)),
    });
  }

  private number(ref: number): number {
    if (this.barriers.has(ref)) return this.nodes++;
    const known = this.numberOf.get(ref);
    if (known !== undefined) return known;
    this.numberOf.set(ref, this.nodes);
    return this.nodes++;
  }
}

function lengthOf(places: readonly (readonly [number, number] | null)[]): number {
  let km = 0;
  for (let i = 1; i < places.length; i++) {
    const [a, b] = [places[i - 1], places[i]];
    if (a && b) km += greatCircleKm(a, b);
  }
  return km * 1000;
}
