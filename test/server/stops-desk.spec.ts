import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { BoardChange, DayChange, Numbered } from '@shared/contract/realtime';
import type { StopDto } from '@shared/contract/routes';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { aCall } from '../support/calls';
import { atOnce } from '../support/at-once';
import { select } from '../../server/db/sql';
import { TechnicianRecord } from '../../server/technicians/technician-record';
import {
  act,
  aStop,
  aTechnician,
  aWaitingCall,
  dayOf,
  done,
  put,
  stateOf,
  until,
} from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
let theo: Awaited<ReturnType<typeof aTechnician>>;
let ilse: Awaited<ReturnType<typeof aTechnician>>;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  theo = await aTechnician(server, 'Theo Larkspur');
  ilse = await aTechnician(server, 'Ilse Rowan');
});

const routeOf = async (technician: TestPerson) =>
  (await dayOf(technician)).stops.map(({ stop }) => [stop.id, stop.state, stop.position]);
const move = (stop: StopDto, technicianId: string, position: number) =>
  act(mara, 'moveStop', stop, { technicianId, position });
const problem = (code: string) => ({ type: `/problems/${code}` });

describe('POST /api/calls/:callId/stop', () => {
  it('puts a waiting call on a route, at the asked place, with the drive and the times', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const last = await aStop(server, mara, theo.technicianId);
    const call = await aWaitingCall(server, mara, {
      address: { text: '9 Gull Rd', unitNo: '', lonLat: [-47.7, 36.45], kind: 'rooftop' },
    });
    const reply = await put(mara, call, theo.technicianId, 1);
    expect(reply.status).toBe(201);
    const { stop } = reply.body as { stop: StopDto };
    expect(stop).toMatchObject({
      state: 'planned',
      position: 1,
      because: 'Put here by Mara Quill.',
    });
    const minutes = ((5.56 * 1.35) / (25 * 1.609344)) * 60 + 2;
    expect(stop.driveMinutes).toBeCloseTo(minutes, 0);
    expect((stop.arriveAt - first.finishAt) / MINUTE_MS).toBeCloseTo(minutes, 0);
    expect(stop.finishAt - stop.arriveAt).toBe(45 * MINUTE_MS);
    expect(await routeOf(theo)).toEqual([
      [first.id, 'offered', 0],
      [stop.id, 'planned', 1],
      [last.id, 'planned', 2],
    ]);
    expect(await stateOf(server, call.id)).toBe('planned');
  });

  it('takes an offer back when another stop is put before it', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const reply = await put(mara, await aWaitingCall(server, mara), theo.technicianId, 0);
    const { stop } = reply.body as { stop: StopDto };
    expect(await routeOf(theo)).toEqual([
      [stop.id, 'offered', 0],
      [first.id, 'planned', 1],
    ]);
    expect(await stateOf(server, first.callId)).toBe('planned');
  });

  it('never puts a stop before one that is accepted', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    await done(theo, 'acceptStop', first);
    const reply = await put(mara, await aWaitingCall(server, mara), theo.technicianId, 0);
    const { stop } = reply.body as { stop: StopDto };
    expect(await routeOf(theo)).toEqual([
      [first.id, 'accepted', 0],
      [stop.id, 'planned', 1],
    ]);
  });

  it('refuses a call that is on a route, settled, not yet checked or older than it looks', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const [row] = await select<{ version: number }>(
      server.sequelize,
      'SELECT version FROM calls WHERE id = ?',
      [stop.callId],
    );
    const onRoute = await put(
      mara,
      { id: stop.callId, version: row?.version ?? 0 },
      ilse.technicianId,
    );
    expect(onRoute.status).toBe(409);
    expect(onRoute.body).toMatchObject(problem('already-on-a-route'));

    const fresh = await mara.call('takeCall', {
      params: { stormId: server.stormId },
      body: aCall(NIGHT),
    });
    const { row: unchecked } = fresh.body as CallDetail;
    const tooEarly = await put(mara, unchecked, ilse.technicianId);
    expect(tooEarly.body).toMatchObject(problem('illegal-transition'));

    const gone = await aWaitingCall(server, mara);
    const settled = await mara.call('concludeCall', {
      params: { callId: gone.id },
      body: {
        commandId: randomUUID(),
        version: gone.version,
        outcome: 'running-again',
        reason: '',
      },
    });
    const tooLate = await put(mara, (settled.body as CallDetail).row, ilse.technicianId);
    expect(tooLate.body).toMatchObject(problem('call-not-open'));

    const call = await aWaitingCall(server, mara);
    const stale = await put(mara, { ...call, version: call.version - 1 }, ilse.technicianId);
    expect(stale.status).toBe(409);
    expect(stale.body).toMatchObject({ ...problem('stale-version'), current: { id: call.id } });

    const nobody = await put(mara, call, randomUUID());
    const noCall = await put(mara, { id: randomUUID(), version: 0 }, ilse.technicianId);
    expect([nobody.status, noCall.status]).toEqual([404, 404]);
  });

  it('refuses a technician without the skill, and one who is not at work', async () => {
    await TechnicianRecord.update({ skills: ['electrical'] }, { where: { id: theo.technicianId } });
    await TechnicianRecord.update({ active: false }, { where: { id: ilse.technicianId } });
    const call = await aWaitingCall(server, mara, { skills: ['sealed-system'] });
    const unskilled = await put(mara, call, theo.technicianId);
    expect(unskilled.body).toMatchObject({
      ...problem('skill-missing'),
      detail: expect.stringContaining('sealed-system') as string,
    });
    const away = await put(mara, call, ilse.technicianId);
    expect([unskilled.status, away.status]).toEqual([409, 409]);
    expect(await stateOf(server, call.id)).toBe('waiting');
  });

  it('refuses while another dispatcher holds the call', async () => {
    const jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
    const call = await aWaitingCall(server, mara);
    const claimed = await mara.call('claimCall', {
      params: { callId: call.id },
      body: { commandId: randomUUID() },
    });
    const { version } = (claimed.body as { row: { version: number } }).row;
    const reply = await put(jonas, { id: call.id, version }, theo.technicianId);
    expect(reply.status).toBe(409);
    expect(reply.body).toMatchObject(problem('claimed-by-another'));
  });

  it('gives a call to one of two dispatchers who press at once', async () => {
    const jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
    const call = await aWaitingCall(server, mara);
    const storm = { table: 'storms', id: server.stormId } as const;
    const replies = await atOnce(server, storm, [
      () => put(mara, call, theo.technicianId),
      () => put(jonas, call, ilse.technicianId),
    ]);
    const [won, lost] = replies.sort((one, other) => one.status - other.status);
    expect([won?.status, lost?.status]).toEqual([201, 409]);
    expect(lost?.body).toMatchObject(problem('stale-version'));
    const stops = await select<{ id: string }>(
      server.sequelize,
      'SELECT id FROM stops WHERE call_id = ?',
      [call.id],
    );
    expect(stops).toEqual([{ id: (won?.body as { stop: StopDto }).stop.id }]);
  });
});

describe('a route on which desk and technician act at once', () => {
  it.each(['the desk', 'the technician'])('stays in order when %s comes first', async (first) => {
    const here = await aStop(server, mara, theo.technicianId);
    const next = await aStop(server, mara, theo.technicianId);
    const accepted = await done(theo, 'acceptStop', here);
    const onTheWay = await done(theo, 'startTravel', accepted, { from: null });
    const there = await done(theo, 'arrive', onTheWay);
    const call = await aWaitingCall(server, mara);
    const add = () => put(mara, call, theo.technicianId, 1);
    const finish = () =>
      act(theo, 'finishStop', there, { outcome: 'restored', note: '', partsUsed: [] });
    const replies = await atOnce(
      server,
      { table: 'technicians', id: theo.technicianId },
      first === 'the desk' ? [add, finish] : [finish, add],
    );
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 201]);
    const route = await routeOf(theo);
    expect(route.map(([, state, position]) => [state, position])).toEqual([
      ['offered', 0],
      ['planned', 1],
    ]);
    expect(route.map(([id]) => id)).toContain(next.id);
  });
});

describe('POST /api/stops/:stopId/move', () => {
  it('changes the order of a route and the times of all that follow', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    const third = await aStop(server, mara, theo.technicianId);
    const reply = await move(third, theo.technicianId, 0);
    expect(reply.status).toBe(200);
    const day = (await dayOf(theo)).stops.map(({ stop }) => stop);
    expect(day.map((stop) => [stop.id, stop.state])).toEqual([
      [third.id, 'offered'],
      [first.id, 'planned'],
      [second.id, 'planned'],
    ]);
    const starts = day.map((stop) => stop.arriveAt);
    expect(starts).toEqual([...starts].sort((a, b) => a - b));
    day.slice(1).forEach((stop, i) => expect(stop.arriveAt).toBe(day[i]?.finishAt));
  });

  it('gives a stop to another technician: both phones and the board are told', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const [theos, ilses, board] = [await theo.socket(), await ilse.socket(), await mara.socket()];
    const heard: { theo: DayChange[]; ilse: DayChange[]; board: BoardChange[] } = {
      theo: [],
      ilse: [],
      board: [],
    };
    theos.on('day:changed', (one: Numbered<DayChange>) => heard.theo.push(one.change));
    ilses.on('day:changed', (one: Numbered<DayChange>) => heard.ilse.push(one.change));
    board.on('board:changed', (one: Numbered<BoardChange>) => heard.board.push(one.change));
    const reply = await move(stop, ilse.technicianId, 0);
    expect((reply.body as { stop: StopDto }).stop).toMatchObject({
      id: stop.id,
      technicianId: ilse.technicianId,
      state: 'offered',
    });
    await until(() => heard.ilse.length > 0 && heard.theo.length > 0, 'both phones hear of it');
    expect(heard.theo).toEqual([
      expect.objectContaining({ kind: 'gone', stopId: stop.id }) as DayChange,
    ]);
    expect(heard.ilse).toEqual([
      expect.objectContaining({
        kind: 'stop',
        card: expect.objectContaining({ stop: expect.objectContaining({ state: 'offered' }) }),
      }) as DayChange,
    ]);
    await until(() => heard.board.some(({ kind }) => kind === 'stops'), 'the board hears of it');
    expect(heard.board).toContainEqual(
      expect.objectContaining({
        kind: 'calls',
        calls: [expect.objectContaining({ technicianId: ilse.technicianId })],
      }),
    );
    for (const socket of [theos, ilses, board]) socket.close();
  });

  it.each(['accepted', 'travelling', 'on-site'])('refuses a stop that is %s', async (state) => {
    let stop = await done(theo, 'acceptStop', await aStop(server, mara, theo.technicianId));
    if (state !== 'accepted') stop = await done(theo, 'startTravel', stop, { from: null });
    if (state === 'on-site') stop = await done(theo, 'arrive', stop);
    const moved = await move(stop, ilse.technicianId, 0);
    const locked = await act(mara, 'lockStop', stop, { locked: true });
    expect([moved.status, locked.status]).toEqual([409, 409]);
    expect(moved.body).toMatchObject(problem('stop-is-firm'));
    expect(await routeOf(theo)).toEqual([[stop.id, state, 0]]);
  });

  it('refuses a technician without the skill and an older version', async () => {
    const stop = await aStop(server, mara, theo.technicianId, { skills: ['commercial'] });
    await TechnicianRecord.update({ skills: [] }, { where: { id: ilse.technicianId } });
    const unskilled = await move(stop, ilse.technicianId, 0);
    expect(unskilled.body).toMatchObject(problem('skill-missing'));
    const stale = await move({ ...stop, version: stop.version + 7 }, theo.technicianId, 0);
    expect(stale.status).toBe(409);
    expect(stale.body).toMatchObject({ ...problem('stale-version'), current: { id: stop.id } });
  });

  it('is for one of two dispatchers who move it at once', async () => {
    const jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
    const stop = await aStop(server, mara, theo.technicianId);
    const replies = await atOnce(server, { table: 'storms', id: server.stormId }, [
      () => move(stop, ilse.technicianId, 0),
      () => act(jonas, 'moveStop', stop, { technicianId: ilse.technicianId, position: 0 }),
    ]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
  });
});

describe('POST /api/stops/:stopId/pull', () => {
  it('puts the call back to waiting, tells the phone why and offers the next stop', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    const phone = await theo.socket();
    const heard: DayChange[] = [];
    phone.on('day:changed', (one) => heard.push(one.change));
    const reply = await act(mara, 'pullStop', first, { reason: 'nobody at home until noon' });
    expect(reply.status).toBe(200);
    expect((reply.body as { stop: StopDto }).stop.state).toBe('pulled');
    expect(await stateOf(server, first.callId)).toBe('waiting');
    expect(await routeOf(theo)).toEqual([[second.id, 'offered', 0]]);
    await until(() => heard.some(({ kind }) => kind === 'gone'), 'the phone hears of it');
    expect(heard).toContainEqual({
      kind: 'gone',
      stopId: first.id,
      reason: 'Pulled by Mara Quill: nobody at home until noon',
    });
    phone.close();
  });

  it('takes an accepted stop too, for a person with a name: the audit trail says who', async () => {
    const stop = await done(theo, 'acceptStop', await aStop(server, mara, theo.technicianId));
    const reply = await act(mara, 'pullStop', stop, { reason: 'the customer has rung' });
    expect(reply.status).toBe(200);
    const entries = await select<{ actor: string; user_id: string; summary: string }>(
      server.sequelize,
      "SELECT actor, user_id, summary FROM audit_entries WHERE command = 'pullStop'",
    );
    expect(entries).toEqual([
      { actor: 'Mara Quill', user_id: mara.userId, summary: 'pulled the accepted stop of call 1' },
    ]);
  });

  it('leaves a stop alone that the technician is driving to or at', async () => {
    let stop = await done(theo, 'acceptStop', await aStop(server, mara, theo.technicianId));
    stop = await done(theo, 'startTravel', stop, { from: null });
    const onTheWay = await act(mara, 'pullStop', stop, { reason: 'changed my mind' });
    stop = await done(theo, 'arrive', stop);
    const there = await act(mara, 'pullStop', stop, { reason: 'changed my mind' });
    for (const reply of [onTheWay, there]) {
      expect(reply.status).toBe(409);
      expect(reply.body).toMatchObject(problem('stop-is-firm'));
    }
  });

  it('needs a reason', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    expect((await act(mara, 'pullStop', stop, { reason: '   ' })).status).toBe(422);
    expect((await act(mara, 'pullStop', stop)).status).toBe(422);
  });
});

describe('POST /api/stops/:stopId/lock', () => {
  it('locks and frees, and each board sees it', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const board = await mara.socket();
    const heard: BoardChange[] = [];
    board.on('board:changed', (one) => heard.push(one.change));
    const locked = await done(mara, 'lockStop', stop, { locked: true });
    expect(locked).toMatchObject({ locked: true, version: stop.version + 1 });
    const freed = await done(mara, 'lockStop', locked, { locked: false });
    expect(freed).toMatchObject({ locked: false, version: stop.version + 2 });
    const seen = (): boolean[] =>
      heard.flatMap((one) => (one.kind === 'stops' ? one.stops.map((now) => now.locked) : []));
    await until(() => seen().length === 2, 'the board hears of both');
    expect(seen()).toEqual([true, false]);
    board.close();
  });
});

describe('a call that is settled by phone', () => {
  it('leaves the route, the technician is told, and the next stop is offered', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    const [row] = await select<{ version: number }>(
      server.sequelize,
      'SELECT version FROM calls WHERE id = ?',
      [first.callId],
    );
    const reply = await mara.call('concludeCall', {
      params: { callId: first.callId },
      body: {
        commandId: randomUUID(),
        version: row?.version,
        outcome: 'running-again',
        reason: 'it runs',
      },
    });
    expect(reply.status).toBe(200);
    expect(await routeOf(theo)).toEqual([[second.id, 'offered', 0]]);
    expect(await stateOf(server, first.callId)).toBe('running-again');
  });
});

describe('the desk alone', () => {
  it('may touch routes, in any of its roles', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const call = await aWaitingCall(server, mara);
    const refused = [
      await put(theo, call, theo.technicianId),
      await act(theo, 'moveStop', stop, { technicianId: theo.technicianId, position: 0 }),
      await act(theo, 'pullStop', stop, { reason: 'mine' }),
      await act(theo, 'lockStop', stop, { locked: true }),
    ];
    expect(refused.map((reply) => reply.status)).toEqual([403, 403, 403, 403]);
    let now = stop;
    for (const role of ['manager', 'owner'] as const)
      now = await done(await server.signIn(role), 'lockStop', now, {
        locked: role === 'manager',
      });
    expect(now.locked).toBe(false);
  });

  it('is refused what does not fit, and stops that are not there', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const call = await aWaitingCall(server, mara);
    const replies = [
      await put(mara, call, theo.technicianId, -1),
      await move(stop, 'nobody', 0),
      await move(stop, theo.technicianId, 1.5),
      await act(mara, 'lockStop', stop, { locked: 'yes' }),
      await act(mara, 'lockStop', { id: randomUUID(), version: 0 }, { locked: true }),
    ];
    expect(replies.map((reply) => reply.status)).toEqual([422, 422, 422, 422, 404]);
  });

  it('cannot work on the routes of a closed storm', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const ines = await server.signIn('manager');
    await ines.call('closeStorm', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), version: 0 },
    });
    const byDesk = await act(mara, 'pullStop', stop, { reason: 'late' });
    const byTechnician = await act(theo, 'acceptStop', stop);
    expect([byDesk.status, byTechnician.status]).toEqual([409, 409]);
    expect(byTechnician.body).toMatchObject(problem('storm-closed'));
    expect((await dayOf(theo)).stops).toEqual([]);
    server.setNow(NIGHT + HOUR_MS);
  });
});
