import { randomUUID } from 'node:crypto';
import type { CallRow } from '@shared/contract/calls';
import type { BoardPicture } from '@shared/contract/board';
import type { NightLogDto, NightLogPreview, NightLogRowView } from '@shared/contract/night-logs';
import { HOUR_MS } from '@shared/domain/instant';
import { brokenInvariants } from '../../server/invariants/checks';
import { makeNightLog, type LogAddress } from '../../server/night-log/make-night-log';
import { readLog } from '../../server/night-log/read-log';
import { aCall } from '../support/calls';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
beforeAll(async () => {
  server = await startServer({
    // In this thread: the worker's own thread is proved with the workers.
    context: { logReader: { run: (order) => Promise.resolve(readLog(order)) } },
  });
});
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher');
});

const inStorm = () => ({ stormId: server.stormId });
const upload = async (bytes: Uint8Array | string): Promise<NightLogPreview> => {
  const reply = await mara.call('uploadNightLog', {
    params: inStorm(),
    query: { fileName: 'night.csv' },
    bytes: Buffer.from(bytes as Uint8Array),
  });
  expect([reply.status, reply.text.slice(0, 300)]).toEqual([201, expect.anything()]);
  return reply.body as NightLogPreview;
};
const importIt = async ({ log }: NightLogPreview): Promise<NightLogDto> => {
  const started = await mara.call('importNightLog', {
    params: { logId: log.id },
    body: { commandId: randomUUID(), columns: log.columns.map(({ role }) => role) },
  });
  expect(started.status).toBe(200);
  for (;;) {
    const { body } = await mara.call('readNightLog', { params: { logId: log.id } });
    if ((body as NightLogDto).state !== 'importing') return body as NightLogDto;
    await new Promise((resolve) => setTimeout(resolve, 30));
  }
};
const board = async (): Promise<CallRow[]> =>
  ((await mara.call('boardPicture', { params: inStorm() })).body as BoardPicture).calls;

const BY_HAND = `Msg #,Taken,CLI,Caller,Svc Addr,Appl,Msg
1,2:15a,(252) 555-0142,"Ashdown, Wren","12 Larch Ave, Pell Harbor",fridge & chest freezer,"has insulin in the door,
please hurry"
2,2:40a,252.555.0142,Wren Ashdown,12 Larch Ave,fridge,calling again
,,,,,,
4,3:05a,252-555-0150,Otis Fern,1210 n heron st apt 4,deep freeze,burning smell
5,3:30a,,somebody,,washer,wants a washer fixed
`;

describe('a night log', () => {
  it('becomes calls: folded, put aside with the reason, nothing lost', async () => {
    const preview = await upload(BY_HAND);
    expect(preview.log.columns.map(({ role }) => role)).toEqual(
      expect.arrayContaining([
        'receivedTime',
        'phone',
        'callerName',
        'address',
        'unitKind',
        'remarks',
      ]),
    );
    expect(await board()).toEqual([]);
    expect(preview.log.counts).toEqual({ calls: 2, folded: 1, aside: 1, empty: 1, known: 0 });
    const log = await importIt(preview);
    expect(log).toMatchObject({
      state: 'imported',
      rowCount: 5,
      doneCount: 5,
      counts: { calls: 2, folded: 1, aside: 1, empty: 1, known: 0 },
    });
    const [wren, otis] = await board();
    expect(wren).toMatchObject({
      name: 'Wren Ashdown',
      phone: '+12525550142',
      source: 'night-log',
      address: { text: '12 Larch Ave, Pell Harbor', kind: 'rooftop' },
    });
    expect(wren?.units.flatMap(({ compartments }) => compartments.map(({ kind }) => kind))).toEqual(
      expect.arrayContaining(['fresh-food', 'freezer', 'medicine']),
    );
    expect(otis).toMatchObject({
      danger: true,
      address: { unitNo: expect.stringMatching(/4/) as string },
    });
    const { rows } = (await mara.call('listAsides', { params: inStorm() })).body as {
      rows: NightLogRowView[];
    };
    expect(rows).toHaveLength(1);
    expect(rows[0]?.logId).toBe(log.id);
    expect(rows[0]?.reason).not.toBe('');
    expect(rows[0]?.cells).toContain('wants a washer fixed');
    expect(await brokenInvariants(server.sequelize)).toEqual([]);
  });

  it('changes nothing when it comes again, and takes only what is new when it has grown', async () => {
    await importIt(await upload(BY_HAND));
    const before = await board();
    const seen = await upload(BY_HAND);
    expect(seen.log.counts).toEqual({ calls: 0, folded: 0, aside: 0, empty: 1, known: 4 });
    expect(seen.rows.map(({ outcome }) => outcome).sort()).toEqual([
      'empty',
      ...Array<string>(4).fill('known'),
    ]);
    const again = await importIt(seen);
    expect(again.counts).toEqual({ calls: 0, folded: 0, aside: 0, empty: 1, known: 4 });
    expect(await board()).toEqual(before);
    const grown = await importIt(
      await upload(`${BY_HAND}6,4:00a,252-555-0160,Nell Dunmere,12 Larch Ave,fridge,new\n`),
    );
    expect(grown.counts).toMatchObject({ calls: 1, known: 4 });
  });

  it('folds a household into the call that somebody took by phone', async () => {
    const taken = await mara.call('takeCall', {
      params: inStorm(),
      body: aCall(NIGHT, { phone: '+12525550142' }),
    });
    expect(taken.status).toBe(201);
    const log = await importIt(await upload(BY_HAND));
    expect(log.counts).toMatchObject({ calls: 1, folded: 2 });
    expect(await board()).toHaveLength(2);
  });

  it('lets a person settle a row that was put aside, once', async () => {
    await importIt(await upload(BY_HAND));
    const { rows } = (await mara.call('listAsides', { params: inStorm() })).body as {
      rows: NightLogRowView[];
    };
    const settle = () =>
      mara.call('settleNightLogRow', {
        params: { rowId: rows[0]?.id ?? '' },
        body: { commandId: randomUUID(), callId: null, note: 'not ours' },
      });
    expect((await settle()).body).toMatchObject({ outcome: 'settled', reason: 'not ours' });
    expect((await settle()).status).toBe(409);
  });

  it('of another make, with 600 rows, agrees with what its maker knows', async () => {
    server.setNow(NIGHT + 12 * HOUR_MS);
    const addresses: LogAddress[] = Array.from({ length: 700 }, (_, i) => ({
      number: String(100 + i),
      street: ['Heron St', 'Larch Ave', 'Pell Rd'][i % 3] ?? '',
      city: 'Pell Harbor',
      postcode: '00010',
      lon: -47.7 + i * 1e-4,
      lat: 36.4,
    }));
    const { bytes, truth } = makeNightLog({
      seed: 11,
      rows: 600,
      addresses,
      night: { fromAt: NIGHT, toAt: NIGHT + 9 * HOUR_MS },
      zone: 'America/New_York',
    });
    const log = await importIt(await upload(bytes));
    const { calls, folded, aside, empty } = log.counts;
    expect(calls + folded + aside + empty).toBe(log.rowCount);
    expect(log.doneCount).toBe(log.rowCount);
    expect(truth.length).toBeGreaterThan(500);
    expect(await board()).toHaveLength(calls);
    expect(await brokenInvariants(server.sequelize)).toEqual([]);
  });

  it('that is no log is refused with the reason', async () => {
    const reply = await mara.call('uploadNightLog', {
      params: inStorm(),
      query: { fileName: 'x.csv' },
      bytes: Buffer.from(' \n\n'),
    });
    expect(reply.status).toBe(422);
    expect(reply.body).toMatchObject({ type: '/problems/log-not-readable' });
  });
});
