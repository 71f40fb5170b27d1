import { execFile } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import { mkdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { promisify } from 'node:util';
import { build } from 'esbuild';
import type { ReplyOf } from '@shared/contract/http';
import { change, select } from '../../server/db/sql';
import { seedDemo } from '../../server/demo/seed-demo';
import { listRegions } from '../../server/region/demo-region';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { keyOf } from '../../server/region/region-folder';
import { demoRegionIn } from '../support/demo-county';
import { importerProgram, type ImporterProgram } from '../support/importer-program';
import { temporaryFolder } from '../support/region-files';
import { startServer, type TestPerson, type TestServer } from '../support/server';

jest.setTimeout(300_000);

const data = process.env['THAWLINE_TEST_DATA'];
const extracts = path.join(data ?? '', 'osm');

(data ? describe : describe.skip)('with real extracts (need THAWLINE_TEST_DATA)', () => {
  const folder = temporaryFolder();
  const tiles = path.join(folder.path, 'tiles');
  let program: ImporterProgram;
  let server: TestServer;
  let owner: TestPerson;

  beforeAll(async () => {
    program = await importerProgram('real');
    const demo = await demoRegionIn(tiles);
    server = await startServer({
      config: {
        tilesFolder: tiles,
        dataFolder: folder.path,
        regionFilesFolder: extracts,
        isDemo: true,
      },
      context: { region: await openRegion(demo), regionImporter: program.port },
    });
    // The demo makes people and a storm of its own.
    await change(server.sequelize, 'DELETE FROM storms', []);
    await seedDemo(server.context, (await readAddressBook(demo.folder)).addresses);
    owner = await server.signIn('owner');
  });
  afterAll(async () => {
    await server.close();
    program.remove();
    folder.remove();
  });

  const importOf = async (name: string, file: string): Promise<ReplyOf<'readRegionImport'>> => {
    const importId = randomUUID();
    const begun = await owner.call('importRegion', {
      body: {
        commandId: randomUUID(),
        importId,
        name,
        timeZone: 'America/New_York',
        extract: { name: file, from: 'folder' },
        addresses: null,
        addressesAttribution: '',
      },
    });
    expect(begun.status).toBe(201);
    for (;;) {
      const { body } = await owner.call('readRegionImport', { params: { importId } });
      if ((body as { state: string }).state !== 'running')
        return body as ReplyOf<'readRegionImport'>;
      await pause(100);
    }
  };

  const use = async (key: string): Promise<ReplyOf<'unlocatedCalls'>> => {
    const { body } = await owner.call('useRegion', { body: { commandId: randomUUID(), key } });
    await server.app.regions.settled();
    const left = await owner.call('unlocatedCalls', {
      params: { switchId: (body as { id: string }).id },
    });
    return left.body as ReplyOf<'unlocatedCalls'>;
  };

  /** Everything that a switch might touch, except the count of changes. */
  const stand = (): Promise<object[]> =>
    select(
      server.sequelize,
      `SELECT id, number, state, address_text, unit_no, lon, lat, address_kind, area_id,
              power_out_at, power_back_at FROM calls ORDER BY number`,
    );

  it('goes to Queens with the demo storm’s calls, and back as if nothing had been', async () => {
    const home = server.context.region.key;
    const before = await stand();
    const queens = await importOf('Queens Village', 'queens-village.osm.pbf');
    expect(queens).toMatchObject({ state: 'done', trouble: null });

    const there = await use(queens.regionKey!);
    expect(there.change).toMatchObject({
      state: 'done',
      total: before.length,
      done: before.length,
    });
    expect(there.calls.length).toBe(there.change.kept + there.change.outside);
    // No address of an invented county is in Queens; whatever is listed keeps text and point.
    expect(there.change.outside).toBeGreaterThan(before.length * 0.9);
    expect(server.context.region.dto.name).toBe('Queens Village');
    expect(server.context.region.locate('218-09 94th Road, Queens Village')).toMatchObject({
      kind: 'rooftop',
    });
    const listed = new Set(there.calls.map(({ number }) => number));
    const after = await stand();
    const kept = (rows: object[]): object[] =>
      rows.filter((row) => listed.has((row as { number: number }).number));
    expect(kept(after)).toEqual(kept(before));
    const { body } = await owner.call('listRegions');
    expect((body as ReplyOf<'listRegions'>).techniciansOutside.length).toBeGreaterThan(0);
    expect((body as ReplyOf<'listRegions'>).areasOutside.length).toBeGreaterThan(0);

    const back = await use(home);
    expect(back.change).toMatchObject({ returned: before.length, kept: 0, outside: 0 });
    expect(await stand()).toEqual(before);
  });

  it('imports Harrisburg from the command line', async () => {
    const bundle = path.join(__dirname, '../../.data', `region-cli-${String(process.pid)}`);
    mkdirSync(bundle, { recursive: true });
    try {
      await build({
        entryPoints: [path.join(__dirname, '../../server/region/region-cli.ts')],
        outfile: path.join(bundle, 'region-cli.cjs'),
        bundle: true,
        platform: 'node',
        packages: 'external',
        tsconfig: path.join(__dirname, '../../tsconfig.json'),
        logLevel: 'error',
      });
      const { stdout, stderr } = await promisify(execFile)(process.execPath, [
        path.join(bundle, 'region-cli.cjs'),
        'import',
        path.join(extracts, 'harrisburg.osm.pbf'),
        '--name',
        'Harrisburg',
        '--time-zone',
        'America/New_York',
        '--tiles',
        tiles,
        '--no-use',
      ]);
      expect(stdout).toMatch(
        /^Harrisburg: \d+ addresses, \d+ streets, \d+ places, [\d.]+ km of road/,
      );
      expect(stdout).toMatch(/kept aside.*use harrisburg-[0-9a-f]{12}/);
      expect(stderr).toMatch(/100 % {2}done/);
      expect((await listRegions(tiles)).map(keyOf).join(' ')).toMatch(/harrisburg-[0-9a-f]{12}/);
    } finally {
      rmSync(bundle, { recursive: true, force: true });
    }
  });
});
