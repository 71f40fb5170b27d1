import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { AreaDto } from '@shared/contract/areas';
import { HOUR_MS } from '@shared/domain/instant';
import { aCall, aUnit } from '../support/calls';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher');
});

const around = (lon: number, lat: number, half: number): [number, number][] => [
  [lon - half, lat - half],
  [lon + half, lat - half],
  [lon + half, lat + half],
  [lon - half, lat + half],
  [lon - half, lat - half],
];
const draw = (told: object = {}) =>
  mara.call('drawArea', {
    params: { stormId: server.stormId },
    body: {
      commandId: randomUUID(),
      areaId: randomUUID(),
      name: 'Heron 2',
      shape: [[around(-47.7, 36.4, 0.05)]],
      outAt: NIGHT - 5 * HOUR_MS,
      backAt: NIGHT - HOUR_MS,
      ...told,
    },
  });
const take = async (told: object = {}): Promise<CallDetail> =>
  (
    await mara.call('takeCall', {
      params: { stormId: server.stormId },
      body: aCall(NIGHT, { timesFrom: 'area', ...told }),
    })
  ).body as CallDetail;
const read = async (call: CallDetail): Promise<CallDetail> =>
  (await mara.call('readCall', { params: { callId: call.row.id } })).body as CallDetail;

describe('outage areas', () => {
  it('give their times to the calls inside that follow them, and wind the clocks', async () => {
    const [inside, told, outside] = [
      await take(),
      await take({ timesFrom: 'caller' }),
      await take({
        address: { text: 'Far Rd 1', unitNo: '', lonLat: [-47.5, 36.2], kind: 'pin' },
      }),
    ];
    const area = (await draw()).body as AreaDto;
    expect((await read(inside)).row).toMatchObject({
      areaId: area.id,
      lostAt: NIGHT - 5 * HOUR_MS,
      version: 1,
    });
    expect((await read(inside)).row.units[0]?.compartments[0]?.saveByAt).toBe(NIGHT + 19 * HOUR_MS);
    // What a caller said of their own home outranks the feeder's time.
    expect((await read(told)).row).toMatchObject({
      areaId: area.id,
      lostAt: told.row.lostAt,
    });
    expect((await read(outside)).row).toMatchObject({ areaId: null, version: 0 });
  });

  it('of two that overlap the later restoration wins, and being still out is the latest', async () => {
    const call = await take();
    await draw({ name: 'early', backAt: NIGHT - 2 * HOUR_MS, outAt: NIGHT - 6 * HOUR_MS });
    const out = (await draw({ name: 'still out', backAt: null, outAt: NIGHT - 4 * HOUR_MS }))
      .body as AreaDto;
    expect(await read(call)).toMatchObject({
      row: { areaId: out.id, lostAt: NIGHT - 4 * HOUR_MS },
      powerBackAt: null,
    });
  });

  it('may have several parts and holes, which rules and changes follow', async () => {
    const call = await take();
    const hole = around(-47.7, 36.4, 0.01);
    const shape = [[around(-47.7, 36.4, 0.05), hole], [around(-47, 36, 0.02)]];
    const area = (await draw({ shape })).body as AreaDto;
    expect(area.shape).toEqual(shape);
    expect((await read(call)).row).toMatchObject({ areaId: null });
    const filled = await mara.call('changeArea', {
      params: { areaId: area.id },
      body: { commandId: randomUUID(), version: 0, shape: [[around(-47.7, 36.4, 0.05)]] },
    });
    expect(filled.status).toBe(200);
    expect((await read(call)).row).toMatchObject({ areaId: area.id });
  });

  it('that nest give way to the later restoration, and come back when it is removed', async () => {
    const call = await take();
    const outer = (await draw({ name: 'outer', backAt: NIGHT - HOUR_MS })).body as AreaDto;
    const inner = (
      await draw({
        name: 'inner',
        shape: [[around(-47.7, 36.4, 0.01)]],
        backAt: NIGHT - HOUR_MS / 2,
      })
    ).body as AreaDto;
    expect((await read(call)).row).toMatchObject({ areaId: inner.id });
    await mara.call('removeArea', {
      params: { areaId: inner.id },
      body: { commandId: randomUUID(), version: 0 },
    });
    expect((await read(call)).row).toMatchObject({ areaId: outer.id });
  });

  it('are refused with more points than anybody can use', async () => {
    const ring = Array.from({ length: 4001 }, (_, i) => {
      const angle = (2 * Math.PI * (i % 4000)) / 4000;
      return [-47.7 + Math.cos(angle) / 10, 36.4 + Math.sin(angle) / 10];
    });
    const reply = await draw({ shape: [[ring]] });
    expect(reply.status).toBe(422);
    expect(reply.body).toMatchObject({ type: '/problems/invalid-request' });
  });

  it('are refused when the outline crosses itself or the times are backwards', async () => {
    const bow = [
      [0, 0],
      [1, 1],
      [1, 0],
      [0, 1],
      [0, 0],
    ];
    expect((await draw({ shape: [[bow]] })).body).toMatchObject({
      type: '/problems/outline-crosses-itself',
    });
    expect((await draw({ backAt: NIGHT - 9 * HOUR_MS })).body).toMatchObject({
      type: '/problems/times-disagree',
    });
  });

  it('tell the second of two editors what changed', async () => {
    const area = (await draw()).body as AreaDto;
    const change = (name: string) =>
      mara.call('changeArea', {
        params: { areaId: area.id },
        body: { commandId: randomUUID(), version: area.version, name },
      });
    expect((await change('Heron 3')).status).toBe(200);
    const second = await change('Heron 4');
    expect(second.status).toBe(409);
    expect(second.body).toMatchObject({ current: { name: 'Heron 3', version: 1 } });
  });

  it('move sixty calls of two units each in one command', async () => {
    const ids = await Promise.all(
      Array.from({ length: 60 }, () => take({ units: [aUnit(), aUnit()] })),
    );
    const reply = await draw();
    expect(reply.status).toBe(201);
    for (const call of ids.slice(0, 3))
      expect((await read(call)).row.lostAt).toBe(NIGHT - 5 * HOUR_MS);
  });
});
