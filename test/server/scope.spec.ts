import { randomUUID } from 'node:crypto';
import { StopCard, TechnicianDay } from '@shared/contract/routes';
import { HTTP, type RouteSpec } from '@shared/contract/http';
import { PATHS, type RouteName } from '@shared/contract/paths';
import type { DayChange } from '@shared/contract/realtime';
import { CallRecord } from '../../server/calls/call-record';
import { select } from '../../server/db/sql';
import { TechnicianRecord } from '../../server/technicians/technician-record';
import { act, aStop, aTechnician, aWaitingCall, dayOf, done, until } from '../support/routes';
import { startServer, type TestPerson, type TestServer } from '../support/server';

type Technician = Awaited<ReturnType<typeof aTechnician>>;

let server: TestServer;
let mara: TestPerson;
let theo: Technician;
let wren: Technician;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  theo = await aTechnician(server, 'Theo Larkspur');
  wren = await aTechnician(server, 'Wren Ashdown');
});

const WRENS_CUSTOMER = {
  name: 'Odile Fennimore',
  phone: '+12525550177',
  address: {
    text: '41 Heron Quay, Pell Harbor',
    unitNo: '',
    lonLat: [-47.71, 36.41] as [number, number],
    kind: 'rooftop' as const,
  },
  remark: 'The key lies under the blue pot.',
};
/** What would show that Theo saw something of Wren's work. */
const MARKS = ['Fennimore', '5550177', 'Heron Quay', 'blue pot'];
const wrensStop = () => aStop(server, mara, wren.technicianId, WRENS_CUSTOMER);

const forTechnicians = (Object.keys(PATHS) as RouteName[]).filter((name) => {
  const { who }: RouteSpec = HTTP[name];
  return who !== 'anyone' && who.includes('technician');
});

describe('a technician and the stops of another', () => {
  const BODIES: Partial<Record<RouteName, object>> = {
    acceptStop: {},
    declineStop: { reason: 'other', note: '' },
    startTravel: { from: null },
    tellEta: { etaAt: Date.UTC(2026, 9, 3, 7) },
    arrive: {},
    finishStop: { outcome: 'restored', note: '', partsUsed: [] },
  };

  it('there is a body here for every route of a technician that names a stop', () => {
    const named = forTechnicians.filter((name) => PATHS[name][1].includes(':'));
    expect(named.sort()).toEqual(Object.keys(BODIES).sort());
  });

  it.each(Object.keys(BODIES) as RouteName[])(
    '%s: the stop does not exist for them, in any state, and stays as it is',
    async (route) => {
      let stop = await wrensStop();
      const steps: [RouteName, object][] = [
        ['acceptStop', {}],
        ['startTravel', { from: null }],
        ['arrive', {}],
      ];
      for (const [step, body] of [...steps, [null, {}] as const]) {
        const before = await rowOf(stop.id);
        for (const version of [stop.version, stop.version + 1]) {
          const reply = await act(theo, route, { id: stop.id, version }, BODIES[route]);
          expect([stop.state, reply.status]).toEqual([stop.state, 404]);
          for (const mark of [...MARKS, stop.callId]) expect(reply.text).not.toContain(mark);
        }
        expect(await rowOf(stop.id)).toEqual(before);
        if (step) stop = await done(wren, step, stop, body);
      }
    },
  );

  it('a stop that was theirs says nothing more once it is another’s', async () => {
    const stop = await aStop(server, mara, theo.technicianId, WRENS_CUSTOMER);
    const moved = await done(mara, 'moveStop', stop, {
      technicianId: wren.technicianId,
      position: 0,
    });
    const remark = { commandId: randomUUID(), text: 'Wren has the spare key.' };
    await mara.call('addRemark', { params: { callId: stop.callId }, body: remark });
    for (const { version } of [stop, moved]) {
      const reply = await act(theo, 'acceptStop', { id: stop.id, version });
      expect(reply.status).toBe(404);
      for (const mark of [...MARKS, 'spare key']) expect(reply.text).not.toContain(mark);
    }
  });

  it('a position is the sender’s own, whoever it names', async () => {
    const position = { lonLat: [-47.7, 36.4], at: server.now(), accuracyMeters: 10 };
    const forged = await theo.call('reportPosition', {
      body: { position, technicianId: wren.technicianId },
    });
    expect(forged.status).toBe(422);
    expect((await theo.call('reportPosition', { body: { position } })).status).toBe(200);
    expect((await TechnicianRecord.findByPk(wren.technicianId))?.positionAt).toBeNull();
  });

  async function rowOf(stopId: string): Promise<object | undefined> {
    const [row] = await select<object>(server.sequelize, 'SELECT * FROM stops WHERE id = ?', [
      stopId,
    ]);
    return row;
  }
});

describe('what a technician is shown', () => {
  it('is the stop’s card and nothing of the call beyond it', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    await wrensStop();
    const reply = await theo.call('technicianDay');
    // Strict schemas: a field that the contract does not name fails.
    const day = TechnicianDay.parse(reply.body);
    expect(Object.keys(day.stops[0] ?? {}).sort()).toEqual(Object.keys(StopCard.shape).sort());
    expect(day.stops.map((card) => card.stop.id)).toEqual([stop.id]);
    expect(day.technician.id).toBe(theo.technicianId);
    const call = await CallRecord.findByPk(stop.callId);
    for (const hidden of [
      call?.householdId,
      mara.userId,
      'phoneCheck',
      'claim',
      'mayText',
      'history',
      'duplicateOf',
      ...MARKS,
    ])
      expect(reply.text).not.toContain(hidden);
  });

  it.each([
    ['a state', { state: 'done' }],
    ['another technician', { technicianId: 'wren' }],
    ['an actor', { actor: 'machine' }],
    ['a prototype', JSON.parse('{"__proto__":{"role":"owner"}}') as object],
  ])('and they cannot set %s with a stop', async (_what, extra) => {
    const stop = await aStop(server, mara, theo.technicianId);
    const reply = await act(theo, 'acceptStop', stop, extra);
    expect([reply.status, (await dayOf(theo)).stops[0]?.stop.state]).toEqual([422, 'offered']);
  });

  it('comes over the socket for their own stops only, while everybody works', async () => {
    const phone = await theo.socket();
    const board = await mara.socket();
    const heard: string[] = [];
    phone.onAny((event: string, ...rest: unknown[]) =>
      heard.push(JSON.stringify([event, ...rest])),
    );
    const boardHeard: string[] = [];
    board.onAny((...all: unknown[]) => boardHeard.push(JSON.stringify(all)));
    // Rooms are the server's; a client that names one gets nothing.
    const anyEvent = phone as unknown as { emit(event: string, ...rest: unknown[]): void };
    anyEvent.emit('join', 'desk');
    anyEvent.emit('join', `technician:${wren.technicianId}`);
    anyEvent.emit('board:resume', { stormId: server.stormId, after: 0, stream: 'board' }, () => 0);

    const own: string[] = [];
    for (let round = 0; round < 3; round++) {
      const mine = await aStop(server, mara, theo.technicianId, { name: `Own ${String(round)}` });
      own.push(mine.id);
      const theirs = await aStop(server, mara, wren.technicianId, {
        ...WRENS_CUSTOMER,
        phone: `+1252555017${String(round)}`,
      });
      if (round > 0) continue;
      const accepted = await done(wren, 'acceptStop', theirs);
      const driving = await done(wren, 'startTravel', accepted, { from: null });
      await wren.call('reportPosition', {
        body: {
          position: { lonLat: [-47.7, 36.4], at: server.now(), accuracyMeters: 10 },
        },
      });
      await done(wren, 'arrive', driving);
      await aWaitingCall(server, mara, { name: 'Nobody’s yet' });
    }
    await until(
      () => own.every((id) => heard.some((one) => one.includes(id))),
      'the phone to hear of its own stops',
    );
    // The board heard of all that, so it was there to be heard.
    for (const mark of ['Fennimore', 'technician:moved', 'Nobody’s yet'])
      expect(boardHeard.join('')).toContain(mark);
    const all = heard.join('');
    for (const mark of ['Fennimore', 'Heron Quay', 'blue pot', wren.technicianId, 'Nobody’s yet'])
      expect(all).not.toContain(mark);
    expect(new Set(heard.map((one) => (JSON.parse(one) as string[])[0]))).toEqual(
      new Set(['day:changed']),
    );
    phone.close();
    board.close();
  });

  it('is not the board: asking for it ends the socket, and asking for a day gets their own', async () => {
    await wrensStop();
    const mine = await aStop(server, mara, theo.technicianId);
    const phone = await theo.socket();
    const missed = await phone.emitWithAck('day:resume', { stormId: server.stormId, after: 0 });
    const cards = (missed.kind === 'changes' ? missed.changes : []).flatMap(
      ({ change }: { change: DayChange }) => (change.kind === 'stop' ? [change.card] : []),
    );
    expect(new Set(cards.map((card) => card.stop.id))).toEqual(new Set([mine.id]));
    const ended = new Promise<string>((resolve) => phone.once('session:ended', resolve));
    phone.emit('board:resume', { stormId: server.stormId, after: 0 }, () => {
      throw new Error('a technician got the board');
    });
    expect(await ended).toBe('Sign in again.');
  });
});
