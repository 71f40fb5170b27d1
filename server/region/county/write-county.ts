import type { OsmMember, OsmNode, OsmRelation, OsmWay, Tags } from '../osm-model';
import { writeOsmPbf } from '../osm-pbf-writer';
import { makeCounty, type County } from './county';
import { toLonLat, type Point } from './plane';

/** A way may hold at most 2,000 nodes (OpenStreetMap's own limit); long shores are cut well below. */
const LONGEST_WAY = 900;

/** The invented county as an `.osm.pbf` file. The same seed gives the same data. */
export const writeCounty = ({ seed }: { readonly seed: number }): Uint8Array =>
  countyToPbf(makeCounty(seed));

export function countyToPbf(county: County): Uint8Array {
  return writeOsmPbf(countyToOsm(county), 'thawline-county');
}

export function countyToOsm(county: County): {
  nodes: OsmNode[];
  ways: OsmWay[];
  relations: OsmRelation[];
} {
  const book = new OsmBook();
  writeStreets(county, book);
  writeShores(county, book);
  for (const { at, tags } of county.places.points) book.node(at, tags);
  for (const address of county.addresses) {
    book.node(address.at, {
      'addr:housenumber': String(address.number),
      'addr:street': address.streetName,
      'addr:city': county.towns[address.town]!.name,
      'addr:postcode': address.postcode,
      ...(address.flats > 1 ? { 'addr:flats': `1-${address.flats}` } : {}),
    });
  }
  return book;
}

class OsmBook {
  readonly nodes: OsmNode[] = [];
  readonly ways: OsmWay[] = [];
  readonly relations: OsmRelation[] = [];

  node(at: Point, tags: Tags = {}): number {
    const [lon, lat] = toLonLat(at);
    const id = this.nodes.length + 1;
    this.nodes.push({ id, lon, lat, tags });
    return id;
  }

  way(refs: readonly number[], tags: Tags): number {
    const id = this.ways.length + 1;
    this.ways.push({ id, refs, tags });
    return id;
  }

  relation(members: readonly OsmMember[], tags: Tags): void {
    this.relations.push({ id: this.relations.length + 1, members, tags });
  }

  /** A closed ring's nodes; the last is the first. */
  ring(points: readonly Point[]): number[] {
    const refs = points.slice(0, -1).map((p) => this.node(p));
    return [...refs, refs[0]!];
  }
}

/** Stretches that follow each other along one street become one way. */
function writeStreets(county: County, book: OsmBook): void {
  const junctions = county.graph.nodes.map((at) => book.node(at));
  let refs: number[] = [];
  let line = -1;
  let end = -1;
  const flush = (): void => {
    if (refs.length > 1) book.way(refs, streetTags(county, line));
    refs = [];
  };
  for (const stretch of county.graph.stretches) {
    if (stretch.line !== line || stretch.from !== end) {
      flush();
      line = stretch.line;
      refs = [junctions[stretch.from]!];
    }
    for (const p of stretch.points.slice(1, -1)) refs.push(book.node(p));
    refs.push(junctions[stretch.to]!);
    end = stretch.to;
  }
  flush();
}

function streetTags(county: County, index: number): Tags {
  const line = county.lines[index]!;
  const name = county.streetNames.get(line.street);
  return {
    highway: line.streetClass,
    ...(name ? { name: name.name } : {}),
    ...(name?.ref ? { ref: name.ref } : {}),
    ...(line.isBridge ? { bridge: 'yes', layer: '1' } : {}),
  };
}

function writeShores({ terrain, parks, places }: County, book: OsmBook): void {
  for (const ring of terrain.coast) {
    for (const refs of cutLong(book.ring(ring))) book.way(refs, { natural: 'coastline' });
  }
  terrain.lakes.forEach((ring, i) => {
    const tags = { natural: 'water', water: 'lake', name: places.lakeNames[i] ?? '' };
    const parts = cutLong(book.ring(ring));
    if (parts.length === 1) book.way(parts[0]!, tags);
    else {
      const members = parts.map((refs): OsmMember => ({
        type: 'way',
        ref: book.way(refs, {}),
        role: 'outer',
      }));
      book.relation(members, { type: 'multipolygon', ...tags });
    }
  });
  book.way(book.ring(terrain.riverBanks), { natural: 'water', water: 'river' });
  book.way(
    terrain.river.map((p) => book.node(p)),
    { waterway: 'river', name: 'Merganser River' },
  );
  parks.forEach((ring, i) =>
    book.way(book.ring(ring), { leisure: 'park', name: places.parkName(i) }),
  );
  for (const ring of places.woods) book.way(book.ring(ring), { natural: 'wood' });
  book.way(book.ring(places.reserve), { leisure: 'nature_reserve', name: 'Whimbrel Strand' });
}

/** Cuts a long run of nodes into ways that share their end nodes. */
function cutLong(refs: readonly number[]): number[][] {
  if (refs.length <= LONGEST_WAY) return [[...refs]];
  const parts: number[][] = [];
  for (let from = 0; from < refs.length - 1; from += LONGEST_WAY - 1)
    parts.push(refs.slice(from, from + LONGEST_WAY));
  return parts;
}
