import { basename, resolve } from 'node:path';
import { parseArgs } from 'node:util';
import { Refusal } from '@shared/domain/errors';
import { InvalidConfig, readConfig, type Config } from '../config';
import { ensureDemoRegion, listRegions } from './demo-region';
import { inWords } from './disk-trouble';
import { importRegion, OSM_ATTRIBUTION, type ImportedRegion } from './import-region';
import { readReport } from './region-data';
import { isReadable, keyOf } from './region-folder';
import type { ImportStep } from './region-making';
import { isTimeZone } from './time-zones';
import { UnreadableRegion } from './unreadable-region';
import { keyInUse, useFromCommandLine } from './use-from-command-line';

const HELP = `Regions: the county that the application works in.

  import FILE.osm.pbf          makes a region of an OpenStreetMap extract and switches to it
    --addresses FILE           address points beside it, as CSV or GeoJSON
    --name NAME                how the region is called (default: the file's name)
    --time-zone ZONE           IANA zone in which times are shown (default: this machine's)
    --attribution TEXT         shown on the map (default: ${OSM_ATTRIBUTION})
    --attribution-addresses TEXT
                               shown after it, as the address points' licence asks
    --no-use                   makes it without switching to it
  list                         the regions that are kept, and which one is in use
  use ID                       switches to one of them
  demo                         makes the invented county and switches to it
    --tiles FOLDER             where regions live (default: as the server is told, or tiles)
`;

/** sysexits.h: EX_USAGE. */
const EXIT_USAGE = 64;
const REJECTED_SHOWN = 10;

async function main(): Promise<number> {
  const { values, positionals } = parseArgs({
    allowPositionals: true,
    options: {
      addresses: { type: 'string' },
      name: { type: 'string' },
      'time-zone': { type: 'string' },
      attribution: { type: 'string' },
      'attribution-addresses': { type: 'string' },
      'no-use': { type: 'boolean', default: false },
      tiles: { type: 'string' },
      help: { type: 'boolean', default: false },
    },
  });
  const [command, argument] = positionals;
  const config = configIfAny();
  const tiles = resolve(values.tiles ?? config?.tilesFolder ?? 'tiles');
  if (values.help) return say(HELP);
  switch (command) {
    case 'demo':
      return await finish(await ensureDemoRegion(tiles, progress), config, values['no-use']);
    case 'import': {
      if (argument === undefined) break;
      const timeZone = values['time-zone'] ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
      if (!isTimeZone(timeZone))
        throw new UnreadableRegion(`"${timeZone}" is no time zone; America/New_York is one.`);
      const made = await importRegion({
        pbf: resolve(argument),
        outFolder: tiles,
        name: values.name ?? basename(argument).replace(/(\.osm)?\.pbf$/, ''),
        timeZone,
        attribution: values.attribution ?? OSM_ATTRIBUTION,
        addressFile:
          values.addresses === undefined
            ? null
            : {
                path: resolve(values.addresses),
                attribution: values['attribution-addresses'] ?? '',
              },
        onProgress: progress,
      });
      await report(made);
      return await finish(made, config, values['no-use']);
    }
    case 'list':
      return await list(tiles, config);
    case 'use': {
      if (argument === undefined) break;
      return await finish(await oneOf(tiles, argument), config, false);
    }
  }
  process.stderr.write(HELP);
  return EXIT_USAGE;
}

/** The server's settings, when this is run with them; a region can be made without. */
function configIfAny(): Config | null {
  try {
    return readConfig(process.env);
  } catch (error) {
    if (error instanceof InvalidConfig) return null;
    throw error;
  }
}

async function finish(
  region: ImportedRegion,
  config: Config | null,
  isKeptAside: boolean,
): Promise<number> {
  if (isKeptAside) return say(`It is kept aside. To switch to it: use ${keyOf(region)}\n`);
  if (!config)
    return say(
      'It is made. Without the server’s settings (its THAWLINE_… variables) nothing was switched; npm run region sets them.\n',
    );
  const how = await useFromCommandLine(config.database, region);
  return say(
    how === 'switched'
      ? `${region.manifest.name} is in use. If the application runs, it takes it over within seconds and looks up the open storm’s calls; the owner sees which were not found under Office, Region.\n`
      : `${region.manifest.name} is in use already.\n`,
  );
}

async function list(tiles: string, config: Config | null): Promise<number> {
  const regions = await listRegions(tiles);
  if (regions.length === 0) return say(`There is no region in ${tiles} yet.\n`);
  const inUse = config && (await keyInUse(config.database));
  for (const region of regions) {
    const { name, counts } = region.manifest;
    const note =
      keyOf(region) === inUse ? ' (in use)' : isReadable(region) ? '' : ' (import it again)';
    say(`${keyOf(region)}  ${name}${note}: ${String(counts.addresses)} addresses\n`);
  }
  return 0;
}

/** By its id, or by a part of it that only one has. */
async function oneOf(tiles: string, asked: string): Promise<ImportedRegion> {
  const regions = await listRegions(tiles);
  const exact = regions.find((region) => keyOf(region) === asked);
  const like = regions.filter(
    (region) => keyOf(region).includes(asked) || region.manifest.name === asked,
  );
  const found = exact ?? (like.length === 1 ? like[0] : undefined);
  if (found) return found;
  throw new UnreadableRegion(
    like.length > 1
      ? `"${asked}" may be any of ${like.map(keyOf).join(', ')}.`
      : `There is no region "${asked}" in ${tiles}; list shows those that there are.`,
  );
}

async function report(region: ImportedRegion): Promise<void> {
  const { counts, name } = region.manifest;
  const made = await readReport(region.folder);
  say(
    `${name}: ${String(counts.addresses)} addresses, ${String(counts.streets)} streets, ${String(counts.places)} places, ${String(counts.roadKm)} km of road, ${String(counts.tiles)} tiles, ${(counts.bytes / 1e6).toFixed(1)} MB\n`,
  );
  if (!made) return;
  say(`${String(made.seconds)} s, at most ${String(made.peakMegabytes)} MB of memory\n`);
  for (const { what, count, why } of made.leftOut)
    say(`left out: ${what}, ${String(count)}: ${why}\n`);
  const file = made.addressFile;
  if (!file) return;
  say(
    `address file: ${String(file.rows)} rows, ${String(file.added)} new, ${String(file.merged)} known or flats, ${String(file.rejectedCount)} not taken\n`,
  );
  for (const { line, reason } of file.rejected.slice(0, REJECTED_SHOWN))
    say(`  line ${String(line)}: ${reason}\n`);
  if (file.rejectedCount > REJECTED_SHOWN)
    say(`  and ${String(file.rejectedCount - REJECTED_SHOWN)} more\n`);
}

let told = '';
function progress({ step, share }: ImportStep): void {
  const line = `${String(Math.round(share * 100)).padStart(3)} %  ${step}`;
  if (line === told) return;
  told = line;
  process.stderr.write(`${line}\n`);
}

function say(text: string): number {
  process.stdout.write(text);
  return 0;
}

main().then(
  (code) => {
    process.exitCode = code;
  },
  (thrown: unknown) => {
    const error = inWords(thrown);
    const isPlain = error instanceof UnreadableRegion || error instanceof Refusal;
    const isUsage =
      error instanceof TypeError &&
      String((error as { code?: unknown }).code).startsWith('ERR_PARSE_ARGS');
    process.stderr.write(
      `${isPlain || isUsage ? error.message : String(error instanceof Error ? error.stack : error)}\n`,
    );
    process.exitCode = isUsage ? EXIT_USAGE : 1;
  },
);
