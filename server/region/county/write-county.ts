import type { OsmData, OsmMember } from '../osm-model';
import { writeOsmPbf } from '../osm-pbf-writer';
import { makeCounty, type County } from './county';
import { OsmBook } from './osm-book';
import { writePower } from './write-power';
import { writeStreets } from './write-streets';

/** A way may hold at most 2,000 nodes (OpenStreetMap's own limit); long shores are cut well below. */
const LONGEST_WAY = 900;

/** The invented county as an `.osm.pbf` file. The same seed gives the same data. */
export const writeCounty = ({ seed }: { readonly seed: number }): Uint8Array =>
  countyToPbf(makeCounty(seed));

export function countyToPbf(county: County): Uint8Array {
  return writeOsmPbf(countyToOsm(county), 'thawline-county');
}

export function countyToOsm(county: County): OsmData {
  const book = new OsmBook();
  writeStreets(county, book);
  writeShores(county, book);
  for (const { at, tags } of county.places.points) book.node(at, tags);
  for (const { ring, kind } of county.places.buildings)
    book.way(book.ring(ring), { building: kind });
  for (const address of county.addresses) {
    book.node(address.at, {
      'addr:housenumber': String(address.number),
      'addr:street': address.streetName,
      'addr:city': county.towns[address.town]!.name,
      'addr:postcode': address.postcode,
      ...(address.flats > 1 ? { 'addr:flats': `1-${address.flats}` } : {}),
    });
  }
  writePower(county, book);
  return book;
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
