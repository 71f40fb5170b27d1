import { deflateSync } from 'node:zlib';
import { join } from 'node:path';
import { PbfWriter } from 'pbf';
import type { OsmData, OsmNode } from '../../server/region/osm-model';
import { readOsmPbf, type OsmVisitor } from '../../server/region/osm-pbf';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { UnreadableRegion } from '../../server/region/unreadable-region';
import { readAll } from '../support/region-files';

const SMALL: OsmData = {
  nodes: [
    { id: 7, lon: -47.6999999, lat: 36.4, tags: {} },
    { id: 3, lon: -47.7, lat: 36.4000001, tags: { place: 'town', name: 'Sedgehölm' } },
    { id: 5_000_000_000, lon: 12.5, lat: -8.25, tags: { 'addr:housenumber': '12' } },
  ],
  ways: [
    { id: 4, refs: [7, 3, 5_000_000_000], tags: { highway: 'residential', name: 'Heron Street' } },
  ],
  relations: [
    {
      id: 9,
      members: [
        { type: 'way', ref: 4, role: 'outer' },
        { type: 'node', ref: 3, role: '' },
      ],
      tags: { type: 'multipolygon' },
    },
  ],
};

const IGNORE: OsmVisitor = {
  node: () => undefined,
  way: () => undefined,
  relation: () => undefined,
};

/** A block as another program might write it: field by field after the format's own description. */
function blob(type: string, content: Uint8Array, packing: 'raw' | 'zlib' | 'lzma' = 'raw'): Buffer {
  const body = new PbfWriter();
  if (packing === 'raw') body.writeBytesField(1, content);
  else {
    body.writeVarintField(2, content.length);
    body.writeBytesField(packing === 'zlib' ? 3 : 4, deflateSync(content));
  }
  const bytes = Buffer.from(body.finish());
  const header = new PbfWriter();
  header.writeStringField(1, type);
  header.writeVarintField(3, bytes.length);
  const head = Buffer.from(header.finish());
  const length = Buffer.alloc(4);
  length.writeUInt32BE(head.length);
  return Buffer.concat([length, head, bytes]);
}

function headerBlob(feature = 'OsmSchema-V0.6'): Buffer {
  const pbf = new PbfWriter();
  pbf.writeStringField(4, feature);
  return blob('OSMHeader', pbf.finish());
}

/** A node of the plain kind and a relation before it, with a granularity and offsets of its own. */
function foreignBlock(): Uint8Array {
  const node = new PbfWriter();
  node.writeSVarintField(1, 42);
  node.writePackedVarint(2, [1]);
  node.writePackedVarint(3, [2]);
  node.writeSVarintField(8, 12_345);
  node.writeSVarintField(9, -54_321);
  const relation = new PbfWriter();
  relation.writeVarintField(1, 1);
  relation.writePackedVarint(8, [3]);
  relation.writePackedSVarint(9, [42]);
  relation.writePackedVarint(10, [0]);
  const group = (tag: number, content: Uint8Array): Uint8Array => {
    const pbf = new PbfWriter();
    pbf.writeBytesField(tag, content);
    return Buffer.from(pbf.finish());
  };
  const strings = new PbfWriter();
  for (const text of ['', 'name', 'Gullwick', 'label']) strings.writeStringField(1, text);
  const pbf = new PbfWriter();
  pbf.writeBytesField(1, Buffer.from(strings.finish()));
  pbf.writeBytesField(2, group(4, Buffer.from(relation.finish())));
  pbf.writeBytesField(2, group(1, Buffer.from(node.finish())));
  pbf.writeVarintField(17, 1_000);
  pbf.writeVarintField(19, 36_000_000_000);
  pbf.writeVarintField(20, -47_000_000_000);
  return Buffer.from(pbf.finish());
}

describe('readOsmPbf', () => {
  it('reads what the writer wrote, to the last digit', async () => {
    const read = await readAll(writeOsmPbf(SMALL, 'test'));
    expect([...read.nodes.keys()]).toEqual([3, 7, 5_000_000_000]);
    for (const node of SMALL.nodes) {
      expect(read.nodes.get(node.id)).toEqual({
        ...node,
        lon: expect.closeTo(node.lon, 9),
        lat: expect.closeTo(node.lat, 9),
      });
    }
    expect(read.ways).toEqual(SMALL.ways);
    expect(read.relations).toEqual(SMALL.relations);
  });

  it('reads more than one block of each kind', async () => {
    const nodes = Array.from({ length: 20_001 }, (_, i): OsmNode => ({
      id: i + 1,
      lon: i / 1e5,
      lat: -i / 1e5,
      tags: i % 3 ? {} : { ele: String(i) },
    }));
    const read = await readAll(writeOsmPbf({ nodes, ways: [], relations: [] }, 'test'));
    expect(read.nodes.size).toBe(20_001);
    expect(read.nodes.get(19_999)).toEqual({
      id: 19_999,
      lon: expect.closeTo(0.19998, 9),
      lat: expect.closeTo(-0.19998, 9),
      tags: { ele: '19998' },
    });
  });

  it.each(['raw', 'zlib'] as const)(
    'reads %s blocks of another program: plain nodes, unsorted, with offsets',
    async (packing) => {
      const read = await readAll(
        Buffer.concat([
          headerBlob(),
          blob('Unknown', Buffer.from('x')),
          blob('OSMData', foreignBlock(), packing),
        ]),
      );
      // (36e9 + 1000 x 12345) and (-47e9 + 1000 x -54321) nanodegrees
      expect(read.nodes.get(42)).toEqual({
        id: 42,
        lat: expect.closeTo(36.012345, 9),
        lon: expect.closeTo(-47.054321, 9),
        tags: { name: 'Gullwick' },
      });
      expect(read.relations).toEqual([
        { id: 1, members: [{ type: 'node', ref: 42, role: 'label' }], tags: {} },
      ]);
    },
  );

  const good = Buffer.from(writeOsmPbf(SMALL, 'test'));
  const refusals: [string, Uint8Array, RegExp][] = [
    ['an empty file', Buffer.alloc(0), /empty/],
    ['a text', Buffer.from('{"type":"FeatureCollection","features":[]}'), /no \.osm\.pbf/],
    ['a file that was cut', good.subarray(0, good.length - 20), /ends in the middle/],
    [
      'a file with a flipped byte',
      Buffer.from(good.map((byte, i) => (i === good.length - 12 ? byte ^ 0xff : byte))),
      /damaged/,
    ],
    ['lzma', Buffer.concat([headerBlob(), blob('OSMData', foreignBlock(), 'lzma')]), /lzma/],
    ['a history file', headerBlob('HistoricalInformation'), /HistoricalInformation/],
    ['data without a header', blob('OSMData', foreignBlock()), /header/i],
    ['a block that claims too much', Buffer.concat([headerBlob(), oversized()]), /allows/],
  ];
  it.each(refusals)('refuses %s in words', async (_, bytes, words) => {
    const reading = readOsmPbf(bytes, IGNORE);
    await expect(reading).rejects.toThrow(UnreadableRegion);
    await expect(reading).rejects.toThrow(words);
  });

  it('never fails otherwise, whatever byte is wrong', async () => {
    for (let i = 0; i < good.length; i += 3) {
      const bytes = Buffer.from(good);
      bytes[i] = (bytes[i]! + 101) & 0xff;
      // Some bytes change only a name or a place; all others must end in the one kind of error.
      await readOsmPbf(bytes, IGNORE).catch((error: unknown) =>
        expect(error).toBeInstanceOf(UnreadableRegion),
      );
    }
  });

  it('says how far it has come', async () => {
    const shares: number[] = [];
    await readOsmPbf(good, IGNORE, (share) => shares.push(share));
    expect(shares[shares.length - 1]).toBe(1);
    expect(shares).toEqual([...shares].sort((a, b) => a - b));
  });
});

function oversized(): Buffer {
  const header = new PbfWriter();
  header.writeStringField(1, 'OSMData');
  header.writeVarintField(3, 64 * 1024 * 1024);
  const head = Buffer.from(header.finish());
  const length = Buffer.alloc(4);
  length.writeUInt32BE(head.length);
  return Buffer.concat([length, head]);
}

const extracts = process.env['THAWLINE_TEST_DATA'];
(extracts ? describe : describe.skip)('real extracts (need THAWLINE_TEST_DATA)', () => {
  // Counts as published beside the extracts.
  it('reads Queens Village whole', async () => {
    const counts = { nodes: 0, ways: 0 };
    await readOsmPbf(join(extracts ?? '', 'osm/queens-village.osm.pbf'), {
      ...IGNORE,
      node: () => void counts.nodes++,
      way: () => void counts.ways++,
    });
    expect(counts).toEqual({ nodes: 279_371, ways: 53_381 });
  });
});
