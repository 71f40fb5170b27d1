import { randomUUID } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';
import { existsSync, mkdirSync, readdirSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import request from 'supertest';
import type { ReplyOf } from '@shared/contract/http';
import { CallRecord } from '../../server/calls/call-record';
import { importRegion, type ImportedRegion } from '../../server/region/import-region';
import type { OsmData } from '../../server/region/osm-model';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { dropAbandoned } from '../../server/region/workshop';
import { insert } from '../../server/db/sql';
import { keyOf } from '../../server/region/region-folder';
import { openRegion } from '../../server/region/open-region';
import { demoCountyPbf } from '../support/demo-county';
import { aCall } from '../support/calls';
import { HAMLET_DATA, hamletPbf } from '../support/hamlet';
import { importerProgram, type ImporterProgram } from '../support/importer-program';
import { temporaryFolder } from '../support/region-files';
import { startServer, type TestPerson, type TestServer } from '../support/server';

const folder = temporaryFolder();
const tiles = join(folder.path, 'tiles');
const laid = join(folder.path, 'laid');
let program: ImporterProgram;
let home: ImportedRegion;
let server: TestServer;
let owner: TestPerson;

beforeAll(async () => {
  mkdirSync(laid, { recursive: true });
  program = await importerProgram('regions');
  home = await importRegion({
    pbf: hamletPbf(),
    outFolder: tiles,
    name: 'Sedge Corner',
    timeZone: 'America/New_York',
    attribution: 'invented',
  });
  server = await startServer({
    config: {
      tilesFolder: tiles,
      dataFolder: join(folder.path, 'data'),
      regionFilesFolder: laid,
      mostRegionUploadBytes: 200_000,
    },
    context: { region: await openRegion(home), regionImporter: program.port },
  });
});
beforeEach(async () => {
  await server.reset();
  owner = await server.signIn('owner');
});
afterAll(async () => {
  await server.close();
  program.remove();
  folder.remove();
});

type Listed = ReplyOf<'listRegions'>;
const list = async (): Promise<Listed> => (await owner.call('listRegions')).body as Listed;

/** Sends a file and imports it; waits for the end. */
async function importFile(
  pbf: Uint8Array,
  name: string,
  more: object = {},
): Promise<ReplyOf<'readRegionImport'>> {
  const sent = await owner.call('uploadRegionFile', {
    query: { fileName: 'county.osm.pbf' },
    bytes: Buffer.from(pbf),
  });
  expect(sent.status).toBe(201);
  const importId = randomUUID();
  const begun = await owner.call('importRegion', {
    body: {
      commandId: randomUUID(),
      importId,
      name,
      timeZone: 'America/Chicago',
      extract: { name: (sent.body as { name: string }).name, from: 'upload' },
      addresses: null,
      addressesAttribution: '',
      ...more,
    },
  });
  expect([begun.status, begun.body]).toMatchObject([201, { state: 'running' }]);
  return ended(importId);
}

async function ended(importId: string): Promise<ReplyOf<'readRegionImport'>> {
  for (;;) {
    const { body } = await owner.call('readRegionImport', { params: { importId } });
    const found = body as ReplyOf<'readRegionImport'>;
    if (found.state !== 'running') return found;
    await pause(50);
  }
}

/** The same streets far away: a region of its own. */
const elsewhere = (): Uint8Array => shiftedPbf(3);
const shifted = (degrees: number) => ({
  ...HAMLET_DATA,
  nodes: HAMLET_DATA.nodes.map((node) => ({ ...node, lon: node.lon + degrees })),
});

const pbfOf = (data: OsmData): Uint8Array => writeOsmPbf(data, 'test');
const shiftedPbf = (degrees: number): Uint8Array => pbfOf(shifted(degrees));

const use = (key: string) => owner.call('useRegion', { body: { commandId: randomUUID(), key } });

describe('an import', () => {
  it('makes a region of a sent file aside, tells how it goes, and clears the file away', async () => {
    const socket = await owner.socket();
    const told: string[] = [];
    socket.on('region:import-progressed', ({ state }) => told.push(state));
    const done = await importFile(elsewhere(), 'Far Corner');
    expect(done).toMatchObject({ state: 'done', share: 1, trouble: null });
    const { regions, files, latestImport } = await list();
    expect(regions.find(({ key }) => key === done.regionKey)).toMatchObject({
      name: 'Far Corner',
      timeZone: 'America/Chicago',
      isInUse: false,
      isOutdated: false,
      counts: { addresses: 3, streets: 3, places: 2 },
      report: { leftOut: [{ what: 'House numbers' }, { what: 'Ends of roads' }] },
    });
    expect([files, latestImport?.id]).toEqual([[], done.id]);
    expect(server.context.region.dto.name).toBe('Sedge Corner');
    expect(told.at(-1)).toBe('done');
    socket.disconnect();
  });

  it('takes files that lie in the server’s folder, with addresses', async () => {
    writeFileSync(join(laid, 'laid.osm.pbf'), shiftedPbf(4));
    writeFileSync(
      join(laid, 'points.csv'),
      'LON,LAT,NUMBER,STREET\n-43.692,36.4003,20,Larch Lane\n,,,\n',
    );
    writeFileSync(join(laid, 'notes.md'), 'none of this');
    expect((await list()).files.map(({ name }) => name).sort()).toEqual([
      'laid.osm.pbf',
      'points.csv',
    ]);
    const importId = randomUUID();
    await owner.call('importRegion', {
      body: {
        commandId: randomUUID(),
        importId,
        name: 'Laid Corner',
        timeZone: 'UTC',
        extract: { name: 'laid.osm.pbf', from: 'folder' },
        addresses: { name: 'points.csv', from: 'folder' },
        addressesAttribution: 'Points of nobody',
      },
    });
    const done = await ended(importId);
    expect(done.trouble).toBeNull();
    const made = (await list()).regions.find(({ key }) => key === done.regionKey);
    expect(made).toMatchObject({
      attribution: '© OpenStreetMap contributors; Points of nobody',
      counts: { addresses: 4 },
      report: { addressFile: { rows: 2, added: 1, rejectedCount: 1 } },
    });
    expect(existsSync(join(laid, 'laid.osm.pbf'))).toBe(true);
  });

  it.each<[string, () => Uint8Array, RegExp]>([
    ['a text', () => Buffer.from('a county, once\n'.repeat(40)), /no \.osm\.pbf file/],
    ['XML', () => Buffer.from('<?xml version="1.0"?><osm version="0.6"></osm>'), /XML.*osmium cat/],
    ['something packed by gzip', () => Buffer.from([0x1f, 0x8b, 8, 0, 0, 0, 0, 0]), /gzip.*Unpack/],
    ['a cut file', () => hamletPbf().slice(0, -30), /ends in the middle/],
    ['a file without roads', () => pbfOf({ ...HAMLET_DATA, ways: [], relations: [] }), /no roads/],
  ])('refuses %s in words, and leaves nothing', async (_what, pbf, words) => {
    const before = readdirSync(tiles);
    const failed = await importFile(pbf(), 'Nowhere');
    expect(failed).toMatchObject({ state: 'failed', regionKey: null });
    expect(failed.trouble).toMatch(words);
    expect(readdirSync(tiles)).toEqual(before);
  });

  describe('that takes a while', () => {
    const begin = (importId: string) => {
      writeFileSync(join(laid, 'county.osm.pbf'), county);
      return owner.call('importRegion', {
        body: {
          commandId: randomUUID(),
          importId,
          name: 'A county',
          timeZone: 'UTC',
          extract: { name: 'county.osm.pbf', from: 'folder' },
          addresses: null,
          addressesAttribution: '',
        },
      });
    };
    const county = demoCountyPbf();

    it('keeps another from beginning, and can be stopped', async () => {
      const before = readdirSync(tiles);
      const importId = randomUUID();
      expect((await begin(importId)).status).toBe(201);
      const second = await begin(randomUUID());
      expect([second.status, (second.body as { type: string }).type]).toEqual([
        409,
        '/problems/region-busy',
      ]);
      await program.atWork(tiles);
      const stop = () =>
        owner.call('cancelRegionImport', {
          params: { importId },
          body: { commandId: randomUUID() },
        });
      expect((await stop()).body).toMatchObject({ state: 'cancelled' });
      expect((await ended(importId)).state).toBe('cancelled');
      expect((await stop()).status).toBe(409);
      while ((await dropAbandoned(tiles)) === 0) await pause(20);
      expect(readdirSync(tiles)).toEqual(before);
    });

    it('says so when it is killed, and its remains go at the next start', async () => {
      const before = readdirSync(tiles);
      const importId = randomUUID();
      await begin(importId);
      await program.atWork(tiles);
      expect(await dropAbandoned(tiles)).toBe(0);
      program.kill();
      expect(await ended(importId)).toMatchObject({
        state: 'failed',
        trouble: expect.stringMatching(/ended from outside \(SIGKILL\).*untouched/),
      });
      expect(readdirSync(tiles).length).toBe(before.length + 1);
      expect(await dropAbandoned(tiles)).toBe(1);
      expect(readdirSync(tiles)).toEqual(before);
      expect(server.context.region.dto.name).toBe('Sedge Corner');
    });

    it('is not taken for running when its server is gone', async () => {
      const importId = randomUUID();
      await insert(
        server.sequelize,
        `INSERT INTO region_imports (id, name, state, started_at, heard_at)
         VALUES (?, 'Left', 'running', UTC_TIMESTAMP(3), UTC_TIMESTAMP(3) - INTERVAL 31 SECOND)`,
        [importId],
      );
      await server.app.regions.imports.endSilent();
      expect(await ended(importId)).toMatchObject({
        state: 'failed',
        trouble: expect.stringMatching(/server was stopped/),
      });
    });
  });

  it('refuses a zone that does not exist and a file that is not there', async () => {
    const ask = (body: object) =>
      owner.call('importRegion', {
        body: {
          commandId: randomUUID(),
          importId: randomUUID(),
          name: 'X',
          timeZone: 'UTC',
          extract: { name: 'none.osm.pbf', from: 'folder' },
          addresses: null,
          addressesAttribution: '',
          ...body,
        },
      });
    expect((await ask({})).status).toBe(404);
    expect((await ask({ timeZone: 'Mars/Olympus' })).status).toBe(422);
  });
});

describe('files for an import', () => {
  it('are refused when they are too large, announced or not, and leave nothing', async () => {
    const uploads = join(folder.path, 'data', 'region-uploads');
    const before = existsSync(uploads) ? readdirSync(uploads) : [];
    const reply = await owner.call('uploadRegionFile', {
      query: { fileName: 'big.osm.pbf' },
      bytes: Buffer.alloc(200_001),
    });
    expect([reply.status, (reply.body as { detail: string }).detail]).toEqual([
      422,
      expect.stringMatching(/larger than 0 MB|THAWLINE_REGION_UPLOAD_MB/),
    ]);
    expect(
      (await owner.call('uploadRegionFile', { query: { fileName: 'x' }, bytes: Buffer.alloc(0) }))
        .status,
    ).toBe(422);
    expect(existsSync(uploads) ? readdirSync(uploads) : []).toEqual(before);
  });

  it.each(['../secret.pbf', '/etc/passwd', '.hidden.pbf', 'link.osm.pbf', 'folder.pbf'])(
    'are taken from their folder only, not %s',
    async (name) => {
      writeFileSync(join(folder.path, 'secret.pbf'), 'x');
      mkdirSync(join(laid, 'folder.pbf'), { recursive: true });
      if (!existsSync(join(laid, 'link.osm.pbf')))
        symlinkSync(join(folder.path, 'secret.pbf'), join(laid, 'link.osm.pbf'));
      const reply = await owner.call('importRegion', {
        body: {
          commandId: randomUUID(),
          importId: randomUUID(),
          name: 'X',
          timeZone: 'UTC',
          extract: { name, from: 'folder' },
          addresses: null,
          addressesAttribution: '',
        },
      });
      expect(reply.status).toBe(404);
    },
  );
});

describe('a switch', () => {
  const take = async (address: object): Promise<string> => {
    const call = aCall(server.now());
    const reply = await owner.call('takeCall', {
      params: { stormId: server.stormId },
      body: { ...call, address: { ...call.address, ...address } },
    });
    expect(reply.status).toBe(201);
    return call.callId;
  };
  it('gives every reader the other region at once, locates the calls, and back again', async () => {
    const far = await importFile(elsewhere(), 'Far Corner');
    const mara = await server.signIn('dispatcher');
    const socket = await mara.socket();
    const told: string[] = [];
    socket.on('region:changed', ({ name }) => told.push(name));
    const calls = [
      await take({
        text: '12 Larch Lane, Sedge Corner',
        lonLat: [-47.696, 36.4002],
        kind: 'rooftop',
      }),
      await take({ text: '7 Nowhere Road', lonLat: [-47.695, 36.401], kind: 'pin' }),
      await take({ text: 'by the old mill', lonLat: null, kind: 'unlocated' }),
    ];
    const points = async () =>
      (await CallRecord.findAll({ order: [['number', 'ASC']] })).map((call) => call.address());
    const before = await points();
    expect(calls.length).toBe(3);

    const switched = await use(far.regionKey!);
    expect(switched.body).toMatchObject({ toName: 'Far Corner', total: 3 });
    await server.app.regions.settled();
    expect(server.context.region.dto).toMatchObject({
      name: 'Far Corner',
      timeZone: 'America/Chicago',
    });
    expect((await mara.call('region')).body).toMatchObject({
      name: 'Far Corner',
      towns: [{ name: 'Upper Sedge', kind: 'village', at: [-44.694, 36.4035] }],
    });
    const tile = await request(server.url).get(
      server.context.region.dto.tilesUrl.replace('{z}/{x}/{y}', '8/0/0'),
    );
    expect(tile.status).toBe(204);

    expect(await points()).toEqual([
      { ...before[0], lonLat: [-44.696, 36.4002], kind: 'rooftop' },
      before[1],
      before[2],
    ]);
    const { body } = await owner.call('unlocatedCalls', {
      params: { switchId: (switched.body as { id: string }).id },
    });
    expect(body).toMatchObject({
      change: { state: 'done', done: 3, located: 1, returned: 0, kept: 0, outside: 2 },
      calls: [
        { number: 2, address: '7 Nowhere Road', outcome: 'outside' },
        { number: 3, address: 'by the old mill', outcome: 'outside' },
      ],
    });

    const household = async (phone: string) =>
      (await owner.call('findHousehold', { params: { stormId: server.stormId }, query: { phone } }))
        .body as { household: { address: object } };
    const phones = (await CallRecord.findAll({ order: [['number', 'ASC']] })).map(
      ({ phone }) => phone ?? '',
    );
    expect((await household(phones[0]!)).household.address).toMatchObject({
      text: '12 Larch Lane, Sedge Corner',
      lonLat: [-44.696, 36.4002],
    });
    expect((await household(phones[1]!)).household.address).toMatchObject({
      text: '7 Nowhere Road',
      lonLat: null,
      kind: 'unlocated',
    });

    const back = await use(keyOf(home));
    await server.app.regions.settled();
    expect(await points()).toEqual(before);
    expect((await list()).latestSwitch).toMatchObject({
      id: (back.body as { id: string }).id,
      state: 'done',
      returned: 3,
      outside: 0,
    });
    expect(told).toEqual(['Far Corner', 'Sedge Corner']);
    socket.disconnect();
    const { body: trail } = await owner.call('officeAudit');
    expect(JSON.stringify(trail)).toMatch(/switched to the region Far Corner/);
  });

  it('leaves a pin where a person set it when the new region has the same ground', async () => {
    const again = await importFile(
      pbfOf({
        ...HAMLET_DATA,
        nodes: [
          ...HAMLET_DATA.nodes,
          { id: 50, lon: -47.6953, lat: 36.4, tags: { place: 'locality', name: 'New' } },
        ],
      }),
      'Sedge Corner again',
    );
    await take({ text: '12 Larch Lane, Sedge Corner', lonLat: [-47.6951, 36.401], kind: 'pin' });
    await take({ text: '99 Gone Street', lonLat: [-47.6952, 36.401], kind: 'street' });
    const { body } = await use(again.regionKey!);
    await server.app.regions.settled();
    const { body: left } = await owner.call('unlocatedCalls', {
      params: { switchId: (body as { id: string }).id },
    });
    expect(left).toMatchObject({
      change: { located: 1, kept: 1 },
      calls: [{ number: 2, outcome: 'kept' }],
    });
    expect((await CallRecord.findOne({ where: { number: 1 } }))?.address().lonLat).toEqual([
      -47.6951, 36.401,
    ]);
    await use(keyOf(home));
    await server.app.regions.settled();
  });

  it('is refused for a region in use, for one that is gone, and for one that an earlier version made', async () => {
    server.context.region.switchTo(await openRegion(home));
    expect((await use(keyOf(home))).status).toBe(409);
    expect((await use('none-000')).status).toBe(404);
    const old = join(tiles, 'old-000');
    mkdirSync(old, { recursive: true });
    writeFileSync(
      join(old, 'region.json'),
      JSON.stringify({ ...home.manifest, id: 'old', hash: '000', importer: 1 }),
    );
    expect((await use('old-000')).status).toBe(422);
    expect((await list()).regions.find(({ key }) => key === 'old-000')?.isOutdated).toBe(true);
    expect(
      (await owner.call('removeRegion', { body: { commandId: randomUUID(), key: 'old-000' } }))
        .status,
    ).toBe(200);
  });

  it('keeps the one in use from being removed, and removes another wholly', async () => {
    const far = await importFile(elsewhere(), 'Far Corner');
    const remove = (key: string) =>
      owner.call('removeRegion', { body: { commandId: randomUUID(), key } });
    expect((await remove(server.context.region.key)).status).toBe(409);
    expect((await remove(far.regionKey!)).body).toEqual({ done: true });
    for (let i = 0; i < 100 && readdirSync(tiles).some((name) => name.includes('far-corner')); i++)
      await pause(20);
    expect((await list()).regions.map(({ key }) => key)).not.toContain(far.regionKey);
    expect(existsSync(join(tiles, far.regionKey!))).toBe(false);
  });

  it('says which technicians live outside', async () => {
    await server.signIn('technician', 'Noor');
    expect((await list()).techniciansOutside).toEqual([]);
    const far = await importFile(elsewhere(), 'Far Corner');
    await use(far.regionKey!);
    await server.app.regions.settled();
    expect((await list()).techniciansOutside).toEqual(['Noor']);
    await use(keyOf(home));
    await server.app.regions.settled();
  });
});
