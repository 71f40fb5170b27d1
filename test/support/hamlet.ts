import type { OsmData } from '../../server/region/osm-model';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';

const house = (
  id: number,
  lon: number,
  lat: number,
  number: string,
  street: string,
  more = {},
) => ({
  id,
  lon,
  lat,
  tags: { 'addr:housenumber': number, 'addr:street': street, ...more },
});

/**
 * Two crossing streets with houses in the open sea, a town and a hamlet, and the boundary of a third
 * town around the western end: enough for whatever an import decides.
 */
export const HAMLET_DATA: OsmData = {
  nodes: [
    { id: 1, lon: -47.7, lat: 36.4, tags: {} },
    { id: 2, lon: -47.69, lat: 36.4, tags: {} },
    { id: 3, lon: -47.695, lat: 36.405, tags: {} },
    { id: 4, lon: -47.695, lat: 36.4, tags: {} },
    house(5, -47.696, 36.4002, '12', 'Larch Lane', {
      'addr:city': 'Sedge Corner',
      'addr:postcode': '00017',
    }),
    house(6, -47.6965, 36.4002, '14', 'Larch Lane', {
      'addr:city': 'Sedge Corner',
      'addr:postcode': '00017',
    }),
    house(7, -47.694, 36.403, '3', 'Heron Street'),
    { id: 8, lon: -47.6955, lat: 36.4001, tags: { place: 'hamlet', name: 'Sedge Corner' } },
    { id: 9, lon: -47.694, lat: 36.4035, tags: { place: 'village', name: 'Upper Sedge' } },
    { id: 10, lon: -47.701, lat: 36.399, tags: {} },
    { id: 11, lon: -47.698, lat: 36.399, tags: {} },
    { id: 12, lon: -47.698, lat: 36.401, tags: {} },
    { id: 13, lon: -47.701, lat: 36.401, tags: {} },
    { id: 14, lon: -47.694, lat: 36.402, tags: { 'addr:housenumber': '9' } },
  ],
  ways: [
    { id: 1, refs: [1, 4, 2, 99], tags: { highway: 'residential', name: 'Larch Lane' } },
    { id: 2, refs: [3, 4], tags: { highway: 'residential', name: 'Heron Street' } },
    { id: 3, refs: [10, 11, 12, 13, 10], tags: {} },
  ],
  relations: [
    {
      id: 1,
      members: [{ type: 'way', ref: 3, role: 'outer' }],
      tags: {
        type: 'boundary',
        boundary: 'administrative',
        admin_level: '8',
        name: 'Rushmere',
      },
    },
  ],
};

export const hamletPbf = (): Uint8Array => writeOsmPbf(HAMLET_DATA, 'test');
