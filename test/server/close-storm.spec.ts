import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { PATHS } from '@shared/contract/paths';
import { brokenInvariants } from '../../server/invariants/checks';
import { select } from '../../server/db/sql';
import { PlanRecord } from '../../server/routes/stop-record';
import { aCall } from '../support/calls';
import { act, aStop, aTechnician, aWaitingCall, done, stateOf, until } from '../support/routes';
import { startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
let ines: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  ines = await server.signIn('manager', 'Ines Calder');
});
afterEach(async () => {
  const broken = await brokenInvariants(server.sequelize);
  // No outbox works here, so no text leaves.
  expect(broken.filter((one) => !one.invariant.startsWith('no-text-is-forgotten'))).toEqual([]);
});

const close = (version = 0) =>
  ines.call('closeStorm', {
    params: { stormId: server.stormId },
    body: { commandId: randomUUID(), version },
  });
const stopRow = async (id: string) =>
  (
    await select<{ state: string; ended_because: string | null }>(
      server.sequelize,
      'SELECT state, ended_because FROM stops WHERE id = ?',
      [id],
    )
  )[0];

describe('closing a storm', () => {
  it('takes what is on routes off them, and tells the technicians why', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const first = await done(theo, 'acceptStop', await aStop(server, mara, theo.technicianId));
    const second = await aStop(server, mara, theo.technicianId);
    const phone = await theo.socket();
    const gone: string[] = [];
    phone.on('day:changed', ({ change }) => {
      if (change.kind === 'gone') gone.push(`${change.stopId} ${change.reason}`);
    });

    const reply = await close();
    expect(reply.body).toMatchObject({ state: 'closed', version: 1 });
    const why = 'The storm "Test storm" was closed.';
    for (const { id, callId } of [first, second]) {
      expect(await stopRow(id)).toEqual({ state: 'pulled', ended_because: why });
      expect(await stateOf(server, callId)).toBe('waiting');
    }
    await until(() => gone.length === 2, 'the phone to hear of both stops');
    expect(gone.sort()).toEqual([`${first.id} ${why}`, `${second.id} ${why}`].sort());
    phone.close();
    const audit = await ines.call('audit', { params: { stormId: server.stormId } });
    expect((audit.body as { entries: object[] }).entries[0]).toMatchObject({
      by: 'Ines Calder',
      command: 'closeStorm',
      summary: 'closed the storm; 2 stops were pulled',
    });
  });

  it('is refused while somebody is on the way or there, and changes nothing', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const wren = await aTechnician(server, 'Wren Ashdown');
    const waiting = await aStop(server, mara, wren.technicianId);
    const accepted = await done(theo, 'acceptStop', await aStop(server, mara, theo.technicianId));
    const driving = await done(theo, 'startTravel', accepted, { from: null });

    const refused = await close();
    expect([refused.status, refused.body]).toEqual([
      409,
      expect.objectContaining({
        type: '/problems/technician-busy',
        detail: expect.stringMatching(/^1 technician is .*Theo Larkspur/) as string,
      }),
    ]);
    expect((await stopRow(waiting.id))?.state).toBe('offered');

    const onSite = await done(theo, 'arrive', driving);
    const wrenAccepted = await done(wren, 'acceptStop', waiting);
    await done(wren, 'startTravel', wrenAccepted, { from: null });
    expect((await close()).body).toMatchObject({
      detail: expect.stringMatching(/^2 technicians are .*Theo Larkspur/) as string,
    });
    await done(theo, 'finishStop', onSite, { outcome: 'restored', note: '', partsUsed: [] });
    expect((await close()).status).toBe(409);
  });

  it('sets proposed routes aside', async () => {
    const plan = await PlanRecord.create({
      id: randomUUID(),
      stormId: server.stormId,
      state: 'proposed',
      proposedAt: new Date(server.now()),
      proposedBy: 'Mara Quill',
      body: JSON.stringify(EMPTY_PLAN),
      baseEpoch: 0,
    });
    expect((await close()).status).toBe(200);
    expect((await plan.reload()).state).toBe('overtaken');
  });

  it('twice, or as it was before somebody changed it, is refused', async () => {
    expect((await close(7)).body).toMatchObject({ type: '/problems/stale-version' });
    expect((await close(0)).status).toBe(200);
    expect((await close(1)).body).toMatchObject({ type: '/problems/storm-closed' });
  });
});

const EMPTY_PLAN = (() => {
  const figures = {
    savedCents: 0,
    lostCents: 0,
    driveMinutes: 0,
    driveMiles: 0,
    lateMinutes: 0,
    stops: 0,
    moved: 0,
  };
  return { routes: [], unplanned: [], figures, inForce: figures };
})();

describe('once a storm is closed', () => {
  it('its calls and routes are refused every change', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const waiting = await aWaitingCall(server, mara);
    const taken = (
      await mara.call('takeCall', {
        params: { stormId: server.stormId },
        body: aCall(server.now()),
      })
    ).body as CallDetail;
    const stop = await aStop(server, mara, theo.technicianId);
    expect((await close()).status).toBe(200);

    const { id, version } = taken.row;
    const stamp = () => ({ commandId: randomUUID(), version });
    const storm = { stormId: server.stormId };
    const asked: [keyof typeof PATHS, Record<string, string>, object][] = [
      ['takeCall', storm, aCall(server.now())],
      ['claimCall', { callId: id }, { commandId: randomUUID() }],
      ['releaseCall', { callId: id }, { commandId: randomUUID() }],
      ['amendCall', { callId: id }, { ...stamp(), name: 'Somebody Else' }],
      ['addRemark', { callId: id }, { commandId: randomUUID(), text: 'late' }],
      ['answerPhoneCheck', { callId: id }, { ...stamp(), answers: {} }],
      ['concludeCall', { callId: id }, { ...stamp(), outcome: 'cancelled', reason: '' }],
      ['returnToWaiting', { callId: id }, { ...stamp(), reason: 'parts came' }],
      ['sendMessage', { callId: id }, { commandId: randomUUID(), body: 'Hello' }],
      [
        'addStop',
        { callId: waiting.id },
        {
          commandId: randomUUID(),
          version: waiting.version,
          stopId: randomUUID(),
          technicianId: theo.technicianId,
          position: 0,
        },
      ],
      ['lockStop', { stopId: stop.id }, { ...stamp(), locked: true }],
      [
        'moveStop',
        { stopId: stop.id },
        { ...stamp(), technicianId: theo.technicianId, position: 0 },
      ],
      ['pullStop', { stopId: stop.id }, { ...stamp(), reason: 'late' }],
      ['drawArea', storm, AREA()],
    ];
    for (const [route, params, body] of asked) {
      const reply = await mara.call(route, { params, body });
      expect([route, reply.status, (reply.body as { type: string }).type]).toEqual([
        route,
        409,
        '/problems/storm-closed',
      ]);
    }
    for (const route of ['acceptStop', 'arrive'] as const)
      expect((await act(theo, route, stop)).body).toMatchObject({ type: '/problems/storm-closed' });
    const log = await mara.call('uploadNightLog', {
      params: storm,
      query: { fileName: 'log.csv' },
      bytes: Buffer.from('phone,name\n252-555-0101,Wren\n'),
    });
    expect(log.body).toMatchObject({ type: '/problems/storm-closed' });
  });

  it('what customers wrote can still be read', async () => {
    const taken = (
      await mara.call('takeCall', {
        params: { stormId: server.stormId },
        body: aCall(server.now()),
      })
    ).body as CallDetail;
    await close();
    const read = await mara.call('readMessages', {
      params: { callId: taken.row.id },
      body: { commandId: randomUUID() },
    });
    expect(read.status).toBe(200);
  });
});

const AREA = () => ({
  commandId: randomUUID(),
  areaId: randomUUID(),
  name: 'Pell Harbor',
  shape: [
    [
      [
        [-47.8, 36.3],
        [-47.6, 36.3],
        [-47.6, 36.5],
        [-47.8, 36.3],
      ],
    ],
  ],
  outAt: server.now() - 3_600_000,
  backAt: null,
});
