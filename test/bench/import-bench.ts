import { mkdtemp, rm, stat, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import type { OsmNode, OsmWay } from '../../server/region/osm-model';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { findRegion } from '../../server/region/region-folder';
import { readReport } from '../../server/region/region-data';
import { createRegionImporter } from '../../server/region/region-importer';

/**
 * A county on a grid, as large as a populous one: streets every 200 m over 40 km, a point each 40 m of
 * them, a house number at each point of the streets that run east, a building at every other house.
 */
const STREETS = 200;
const POINTS = 1_000;
const DEGREES_APART = 0.0018;
const PER_WAY = 20;
const TOWNS_ACROSS = 4;
const [WEST, SOUTH] = [-47.9, 36.1];
const HOUSE_SETBACK = 0.0002;
const HALF_HOUSE = 0.00005;

interface Extract {
  readonly nodes: OsmNode[];
  readonly ways: OsmWay[];
  readonly csv: string;
  readonly addresses: number;
}

function makeExtract(): Extract {
  const nodes: OsmNode[] = [];
  const ways: OsmWay[] = [];
  const rows = ['LON,LAT,NUMBER,STREET,UNIT,CITY,DISTRICT,REGION,POSTCODE,ID,HASH'];
  const add = (lon: number, lat: number, tags: OsmNode['tags'] = {}): number =>
    nodes.push({ id: nodes.length + 1, lon, lat, tags });
  const step = (DEGREES_APART * STREETS) / POINTS;
  const perBlock = POINTS / STREETS;
  const crossings = new Map<number, number>();
  const nameOf = (street: number): string =>
    `${WORDS[street % WORDS.length]!} ${KINDS[Math.floor(street / WORDS.length) % KINDS.length]!}`;

  const addStreet = (refs: readonly number[], name: string, i: number): void => {
    const highway = i % 40 === 0 ? 'primary' : i % 10 === 0 ? 'tertiary' : 'residential';
    for (let from = 0; from < refs.length - 1; from += PER_WAY)
      ways.push({
        id: ways.length + 1,
        refs: refs.slice(from, from + PER_WAY + 1),
        tags: { highway, name },
      });
  };
  for (let row = 0; row < STREETS; row++) {
    const lat = SOUTH + row * DEGREES_APART;
    const name = nameOf(row);
    const refs: number[] = [];
    for (let i = 0; i < POINTS; i++) {
      const lon = WEST + i * step;
      const node = add(lon, lat);
      refs.push(node);
      if (i % perBlock === 0) crossings.set(row * STREETS + i / perBlock, node);
      const town =
        Math.floor((row * TOWNS_ACROSS) / STREETS) * TOWNS_ACROSS +
        Math.floor((i * TOWNS_ACROSS) / POINTS);
      const houseLat = lat + (i % 2 === 0 ? HOUSE_SETBACK : -HOUSE_SETBACK);
      add(lon, houseLat, {
        'addr:housenumber': String(100 + i),
        'addr:street': name,
        'addr:city': `${WORDS[town]!}ton`,
        'addr:postcode': `000${String(10 + town)}`,
      });
      // Five metres off, as another survey of the same doors would be.
      rows.push(
        `${lon.toFixed(7)},${(houseLat + 0.00004).toFixed(7)},${String(100 + i)},${name.toUpperCase()},,,,,000${String(10 + town)},,`,
      );
      if (i % 2 === 0 || i % 10 === 1) {
        const corners = (
          [
            [-1, -1],
            [1, -1],
            [1, 1],
            [-1, 1],
          ] as const
        ).map(([x, y]) => add(lon + x * HALF_HOUSE, houseLat + y * HALF_HOUSE));
        ways.push({
          id: ways.length + 1,
          refs: [...corners, corners[0]!],
          tags: { building: 'yes' },
        });
      }
    }
    addStreet(refs, name, row);
  }
  for (let column = 0; column < STREETS; column++) {
    const lon = WEST + column * perBlock * step;
    const refs: number[] = [];
    for (let i = 0; i < POINTS; i++) {
      const crossing =
        i % perBlock === 0 ? crossings.get((i / perBlock) * STREETS + column) : undefined;
      refs.push(crossing ?? add(lon, SOUTH + i * step));
    }
    addStreet(refs, `North ${nameOf(column)}`, column);
  }
  for (let town = 0; town < TOWNS_ACROSS ** 2; town++) {
    const size = (DEGREES_APART * STREETS) / TOWNS_ACROSS;
    add(
      WEST + ((town % TOWNS_ACROSS) + 0.5) * size,
      SOUTH + (Math.floor(town / TOWNS_ACROSS) + 0.5) * size,
      { place: 'town', name: `${WORDS[town]!}ton` },
    );
  }
  return { nodes, ways, csv: rows.join('\n'), addresses: rows.length - 1 };
}

const WORDS = [
  'Heron',
  'Larch',
  'Pell',
  'Sedge',
  'Tern',
  'Osprey',
  'Alder',
  'Rush',
  'Mica',
  'Plover',
  'Juniper',
  'Marl',
  'Dunlin',
  'Hazel',
  'Basalt',
  'Kelp',
  'Willet',
  'Rowan',
  'Slate',
  'Spruce',
];
const KINDS = [
  'Street',
  'Avenue',
  'Road',
  'Lane',
  'Drive',
  'Court',
  'Place',
  'Way',
  'Terrace',
  'Trail',
];

interface Measured {
  readonly seconds: number;
  readonly peakMegabytes: number;
  readonly secondsPerMillionNodes: number;
  readonly megabytesPerMillionNodes: number;
  readonly steps: Readonly<Record<string, number>>;
  readonly addresses: number;
  readonly tiles: number;
  readonly tileMegabytes: number;
}

/** Imports in a process of its own, as the server does, and reads what it measured of itself. */
async function measure(
  folder: string,
  pbf: string,
  nodes: number,
  addressFile: string | null,
): Promise<Measured> {
  const outFolder = path.join(folder, addressFile ? 'with-file' : 'alone');
  // A bench is bundled beside the server's programs.
  const importer = createRegionImporter(path.resolve('dist/server/import-program.js'));
  const key = await importer.start(
    {
      pbf,
      outFolder,
      name: 'Grid County',
      timeZone: 'UTC',
      attribution: 'invented',
      addressFile: addressFile === null ? null : { path: addressFile, attribution: '' },
    },
    ({ step, share }) =>
      process.stderr.write(`\r  ${String(Math.round(share * 100)).padStart(3)} %  ${step}     `),
  ).key;
  process.stderr.write('\n');
  const region = await findRegion(outFolder, key);
  const report = region && (await readReport(region.folder));
  if (!report) throw new Error('the import left no report');
  const millions = nodes / 1e6;
  return {
    seconds: report.seconds,
    peakMegabytes: report.peakMegabytes,
    secondsPerMillionNodes: round(report.seconds / millions),
    megabytesPerMillionNodes: Math.round(report.peakMegabytes / millions),
    steps: Object.fromEntries(report.steps.map(({ step, seconds }) => [step, seconds])),
    addresses: region.manifest.counts.addresses,
    tiles: region.manifest.counts.tiles,
    tileMegabytes: round(region.manifest.counts.bytes / 1e6),
  };
}

const round = (value: number): number => Math.round(value * 10) / 10;

async function main(): Promise<void> {
  const folder = await mkdtemp(path.join(tmpdir(), 'thawline-import-bench-'));
  try {
    const { nodes, ways, csv, addresses } = makeExtract();
    const pbf = path.join(folder, 'grid.osm.pbf');
    const file = path.join(folder, 'grid.csv');
    await writeFile(pbf, writeOsmPbf({ nodes, ways, relations: [] }, 'bench'));
    await writeFile(file, csv);
    const figures = {
      nodes: nodes.length,
      ways: ways.length,
      addresses,
      extractMegabytes: round((await stat(pbf)).size / 1e6),
      extractAlone: await measure(folder, pbf, nodes.length, null),
      withAddressFile: await measure(folder, pbf, nodes.length, file),
    };
    process.stdout.write(`${JSON.stringify(figures)}\n`);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

void main();
