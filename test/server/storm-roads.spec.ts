import { randomUUID } from 'node:crypto';
import type { Numbered, BoardChange } from '@shared/contract/realtime';
import type { BoardPicture } from '@shared/contract/board';
import type { RouteName } from '@shared/contract/paths';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { HOUR_MS } from '@shared/domain/instant';
import { brokenInvariants } from '../../server/invariants/checks';
import { until } from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara');
});

const LINE = {
  type: 'line',
  points: [
    [-47.7, 36.4],
    [-47.69, 36.41],
  ],
};
const add = (told: object = {}, person = mara) =>
  person.call('addStormRoad', {
    params: { stormId: server.stormId },
    body: {
      commandId: randomUUID(),
      stormRoadId: randomUUID(),
      kind: 'closed',
      name: 'Pell Bridge',
      notes: 'Deck under water',
      shape: LINE,
      startsAt: NIGHT - HOUR_MS,
      endsAt: null,
      speedShare: null,
      ...told,
    },
  });
const added = async (told: object = {}): Promise<StormRoadDto> => {
  const reply = await add(told);
  if (reply.status !== 201) throw new Error(reply.text);
  return reply.body as StormRoadDto;
};
const act = (name: RouteName, road: StormRoadDto, told: object = {}, person = mara) =>
  person.call(name, {
    params: { stormRoadId: road.id },
    body: { commandId: randomUUID(), version: road.version, ...told },
  });
const onBoard = async (): Promise<readonly StormRoadDto[]> => {
  const reply = await mara.call('boardPicture', { params: { stormId: server.stormId } });
  return (reply.body as BoardPicture).stormRoads;
};

describe('a storm road', () => {
  it('that was added is on every board at once, with who added it', async () => {
    const socket = await mara.socket();
    const heard: Numbered<BoardChange>[] = [];
    socket.on('board:changed', (change) => heard.push(change));
    const road = await added();
    expect(road).toMatchObject({ by: 'Mara', state: 'confirmed', canUndo: true, version: 0 });
    await until(() => heard.length > 0, 'the board hears of the road');
    expect(heard[0]?.change).toEqual({ kind: 'storm-roads', roads: [road], gone: [] });
    expect(await onBoard()).toEqual([road]);
    socket.disconnect();
  });

  it.each([
    ['an end before its beginning', { endsAt: NIGHT - 2 * HOUR_MS }, /ends before/],
    ['a slow road without a speed', { kind: 'slow' }, /what share/],
    ['a speed for a closed road', { speedShare: 0.5 }, /no speed/],
    [
      'a stretch without a length',
      { shape: { type: 'line', points: [LINE.points[0], LINE.points[0]] } },
      /no length/,
    ],
  ])('is refused with %s, in words', async (_what, told, words) => {
    const reply = await add(told);
    expect([reply.status, (reply.body as { type: string }).type]).toEqual([
      422,
      '/problems/storm-road-unfit',
    ]);
    expect((reply.body as { detail: string }).detail).toMatch(words);
    expect(await onBoard()).toEqual([]);
  });

  it.each([
    ['more than nine tenths of the speed', { kind: 'slow', speedShare: 0.95 }],
    ['less than a tenth of the speed', { kind: 'slow', speedShare: 0.09 }],
    ['an unknown kind', { kind: 'icy' }],
    ['no name', { name: '  ' }],
    [
      'an outline that is not closed',
      { shape: { type: 'area', ring: [...LINE.points, [-47, 36], [-46, 36]] } },
    ],
    ['a line of one point', { shape: { type: 'line', points: [LINE.points[0]] } }],
    [
      'a place that is none',
      {
        shape: {
          type: 'line',
          points: [
            [-47, 36],
            [-47, 136],
          ],
        },
      },
    ],
  ])('does not fit the contract with %s', async (_what, told) => {
    const reply = await add(told);
    expect([reply.status, (reply.body as { type: string }).type]).toEqual([
      422,
      '/problems/invalid-request',
    ]);
  });

  it('is refused when its outline crosses itself', async () => {
    const bow = [
      [0, 0],
      [1, 1],
      [1, 0],
      [0, 1],
      [0, 0],
    ];
    const reply = await add({ kind: 'flooded', shape: { type: 'area', ring: bow } });
    expect(reply.body).toMatchObject({ type: '/problems/outline-crosses-itself' });
  });

  it('tells the second of two writers what changed, and keeps the first one’s', async () => {
    const road = await added();
    expect((await act('changeStormRoad', road, { name: 'Pell Bridge, north' })).status).toBe(200);
    const second = await act('changeStormRoad', road, { name: 'Pell Bridge, south' });
    expect(second.status).toBe(409);
    expect(second.body).toMatchObject({
      type: '/problems/stale-version',
      current: { name: 'Pell Bridge, north', version: 1 },
    });
    expect((await act('liftStormRoad', road)).status).toBe(409);
    expect((await act('undoStormRoad', road)).status).toBe(409);
  });

  it('is held to the rules when it is changed, too', async () => {
    const road = await added();
    const reply = await act('changeStormRoad', road, { kind: 'slow' });
    expect(reply.body).toMatchObject({ type: '/problems/storm-road-unfit' });
    expect(await onBoard()).toEqual([road]);
  });

  it('that is lifted ends now, stays to be taken back, and comes back as it was', async () => {
    const road = await added();
    const lifted = (await act('liftStormRoad', road)).body as StormRoadDto;
    expect(lifted).toMatchObject({ state: 'lifted', liftedAt: NIGHT, endsAt: NIGHT, version: 1 });
    expect((await act('changeStormRoad', lifted, { name: 'x' })).body).toMatchObject({
      type: '/problems/illegal-transition',
    });
    const back = (await act('undoStormRoad', lifted)).body as { road: StormRoadDto };
    expect(back.road).toEqual({ ...road, version: 2 });
  });

  it('takes back change after change, and the adding last', async () => {
    const road = await added();
    const slow = (await act('changeStormRoad', road, { kind: 'slow', speedShare: 0.4 }))
      .body as StormRoadDto;
    const named = (await act('changeStormRoad', slow, { name: 'Causeway' })).body as StormRoadDto;
    const once = ((await act('undoStormRoad', named)).body as { road: StormRoadDto }).road;
    expect(once).toMatchObject({ name: 'Pell Bridge', kind: 'slow', speedShare: 0.4 });
    const twice = ((await act('undoStormRoad', once)).body as { road: StormRoadDto }).road;
    expect(twice).toMatchObject({ kind: 'closed', speedShare: null, version: 4 });
    expect((await act('undoStormRoad', twice)).body).toEqual({ road: null });
    expect(await onBoard()).toEqual([]);
  });

  it('is only for the desk: a technician reports, and a dispatcher confirms', async () => {
    const tech = await server.signIn('technician', 'Noor');
    expect((await add({}, tech)).status).toBe(403);
    const report = await tech.call('reportStormRoad', {
      body: {
        commandId: randomUUID(),
        stormRoadId: randomUUID(),
        kind: 'flooded',
        at: [-47.7, 36.4],
        notes: 'Knee-deep',
      },
    });
    expect([report.status, report.body]).toEqual([201, { done: true }]);
    const [road] = await onBoard();
    expect(road).toMatchObject({
      state: 'reported',
      by: 'Noor',
      kind: 'flooded',
      notes: 'Knee-deep',
    });
    expect((await act('confirmStormRoad', road!, {}, tech)).status).toBe(403);
    expect((await act('confirmStormRoad', road!)).body).toMatchObject({ state: 'confirmed' });
    const [confirmed] = await onBoard();
    expect((await act('confirmStormRoad', confirmed!)).status).toBe(409);
  });

  it('is not changed in a storm that is closed', async () => {
    const road = await added();
    const manager = await server.signIn('manager');
    const closed = await manager.call('closeStorm', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), version: 0 },
    });
    expect(closed.status).toBe(200);
    for (const name of ['changeStormRoad', 'liftStormRoad', 'undoStormRoad'] as const)
      expect((await act(name, road)).body).toMatchObject({ type: '/problems/storm-closed' });
    expect((await add()).body).toMatchObject({ type: '/problems/storm-closed' });
  });

  it('breaks no invariant on its way', async () => {
    const road = await added();
    const slow = (await act('changeStormRoad', road, { kind: 'slow', speedShare: 0.4 }))
      .body as StormRoadDto;
    await act('liftStormRoad', slow);
    expect(await brokenInvariants(server.sequelize)).toEqual([]);
  });
});
