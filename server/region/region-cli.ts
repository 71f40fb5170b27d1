import { basename, resolve } from 'node:path';
import { parseArgs } from 'node:util';
import { ensureDemoRegion } from './demo-region';
import { importRegion, OSM_ATTRIBUTION, type ImportedRegion } from './import-region';
import type { ImportStep } from './region-making';
import { UnreadableRegion } from './unreadable-region';

const HELP = `Makes a region's tiles and address book from OpenStreetMap data.

  demo                     the invented county
  import FILE.osm.pbf      a region of your own
    --name NAME            how the region is called (default: the file's name)
    --time-zone ZONE       IANA zone in which times are shown (default: this machine's)
    --attribution TEXT     shown on the map (default: ${OSM_ATTRIBUTION})
  --tiles FOLDER           where regions live (default: tiles)
`;

async function main(): Promise<number> {
  const { values, positionals } = parseArgs({
    allowPositionals: true,
    options: {
      name: { type: 'string' },
      'time-zone': { type: 'string' },
      attribution: { type: 'string' },
      tiles: { type: 'string', default: 'tiles' },
      help: { type: 'boolean', default: false },
    },
  });
  const [command, file] = positionals;
  const tiles = resolve(values.tiles);
  if (!values.help && command === 'demo') return report(await ensureDemoRegion(tiles, say));
  if (!values.help && command === 'import' && file) {
    const timeZone = values['time-zone'] ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
    if (!isTimeZone(timeZone)) {
      process.stderr.write(`"${timeZone}" is no IANA time zone; America/New_York is one.\n`);
      return 2;
    }
    const name = values.name ?? basename(file).replace(/(\.osm)?\.pbf$/, '');
    return report(
      await importRegion({
        pbf: resolve(file),
        outFolder: tiles,
        name,
        timeZone,
        attribution: values.attribution ?? OSM_ATTRIBUTION,
        onProgress: say,
      }),
    );
  }
  process.stdout.write(HELP);
  return values.help ? 0 : 2;
}

const say = ({ step, share }: ImportStep): void =>
  void process.stderr.write(`${String(Math.round(share * 100)).padStart(3)} %  ${step}\n`);

function report({ manifest, folder }: ImportedRegion): number {
  const { addresses, streets, corners, tiles, bytes } = manifest.counts;
  process.stdout.write(
    `${manifest.name}: ${addresses} addresses, ${streets} streets, ${corners} corners, ${tiles} tiles, ${(bytes / 1e6).toFixed(1)} MB\n${folder}\n`,
  );
  return 0;
}

function isTimeZone(zone: string): boolean {
  try {
    // Throws a RangeError for a zone that it does not know.
    new Intl.DateTimeFormat('en', { timeZone: zone });
    return true;
  } catch {
    return false;
  }
}

main().then(
  (code) => {
    process.exitCode = code;
  },
  (error: unknown) => {
    process.stderr.write(
      `${error instanceof UnreadableRegion ? error.message : String(error instanceof Error ? error.stack : error)}\n`,
    );
    process.exitCode = 1;
  },
);
