import type { OsmRelation, OsmWay, Tags } from './osm-model';
import { readOsmPbf } from './osm-pbf';

export type LonLat = readonly [lon: number, lat: number];

/** A file's content, looked up by id. Coordinates are kept as whole 1e-7 degrees. */
export interface OsmExtract {
  readonly namedNodes: readonly { readonly id: number; readonly at: LonLat; readonly tags: Tags }[];
  readonly ways: ReadonlyMap<number, OsmWay>;
  readonly relations: readonly OsmRelation[];
  readonly bbox: readonly [west: number, south: number, east: number, north: number];
  /** Where a node lies; null when the extract was cut and the node left out. */
  at(node: number): LonLat | null;
}

/** Reads a whole extract. Files may be unsorted and may lack nodes that their ways name. */
export async function readExtract(
  from: string | Uint8Array,
  onProgress?: (share: number) => void,
): Promise<OsmExtract> {
  const places = new NodePlaces();
  const namedNodes: { id: number; at: LonLat; tags: Tags }[] = [];
  const ways = new Map<number, OsmWay>();
  const relations: OsmRelation[] = [];
  await readOsmPbf(
    from,
    {
      node: (id, lon, lat, tags) => {
        places.add(id, lon, lat);
        if (tags) namedNodes.push({ id, at: [lon, lat], tags });
      },
      way: (way) => void ways.set(way.id, way),
      relation: (relation) => void relations.push(relation),
    },
    onProgress,
  );
  places.finish();
  return { namedNodes, ways, relations, bbox: places.bbox, at: (node) => places.at(node) };
}

/** Node ids exceed 32 bits, so they are kept as doubles and found by halving. */
class NodePlaces {
  private ids = new Float64Array(65_536);
  private lons = new Int32Array(65_536);
  private lats = new Int32Array(65_536);
  private count = 0;
  private isSorted = true;
  private west = 180;
  private south = 90;
  private east = -180;
  private north = -90;

  get bbox(): [number, number, number, number] {
    return [this.west, this.south, this.east, this.north];
  }

  add(id: number, lon: number, lat: number): void {
    if (this.count === this.ids.length) this.grow();
    if (this.count > 0 && id <= this.ids[this.count - 1]!) this.isSorted = false;
    this.ids[this.count] = id;
    this.lons[this.count] = Math.round(lon * 1e7);
    this.lats[this.count] = Math.round(lat * 1e7);
    this.count++;
    this.west = Math.min(this.west, lon);
    this.east = Math.max(this.east, lon);
    this.south = Math.min(this.south, lat);
    this.north = Math.max(this.north, lat);
  }

  finish(): void {
    if (this.isSorted) return;
    const order = Array.from({ length: this.count }, (_, i) => i).sort(
      (a, b) => this.ids[a]! - this.ids[b]!,
    );
    this.ids = Float64Array.from(order, (i) => this.ids[i]!);
    this.lons = Int32Array.from(order, (i) => this.lons[i]!);
    this.lats = Int32Array.from(order, (i) => this.lats[i]!);
  }

  at(id: number): LonLat | null {
    let low = 0;
    let high = this.count - 1;
    while (low <= high) {
      const middle = (low + high) >> 1;
      const found = this.ids[middle]!;
      if (found === id) return [this.lons[middle]! / 1e7, this.lats[middle]! / 1e7];
      if (found < id) low = middle + 1;
      else high = middle - 1;
    }
    return null;
  }

  private grow(): void {
    const larger = <T extends Float64Array | Int32Array>(old: T, fresh: T): T => {
      fresh.set(old);
      return fresh;
    };
    const size = this.ids.length * 2;
    this.ids = larger(this.ids, new Float64Array(size));
    this.lons = larger(this.lons, new Int32Array(size));
    this.lats = larger(this.lats, new Int32Array(size));
  }
}

/** A way's line, cut wherever the extract lacks a node; each piece has two points or more. */
export function linesOf(extract: OsmExtract, way: OsmWay): LonLat[][] {
  const lines: LonLat[][] = [];
  let line: LonLat[] = [];
  for (const ref of way.refs) {
    const at = extract.at(ref);
    if (at) line.push(at);
    else {
      if (line.length > 1) lines.push(line);
      line = [];
    }
  }
  if (line.length > 1) lines.push(line);
  return lines;
}
