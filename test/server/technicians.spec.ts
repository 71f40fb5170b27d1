import { randomUUID } from 'node:crypto';
import type { BoardChange, DayChange, Numbered } from '@shared/contract/realtime';
import type { Position, StopDto, TechnicianDto } from '@shared/contract/routes';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { select } from '../../server/db/sql';
import { MessageRecord } from '../../server/texts/message-record';
import {
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
let ines: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  ines = await server.signIn('manager', 'Ines Calloway');
});

const shift = (fromHours: number, toHours: number) => ({
  startsAt: NIGHT + fromHours * HOUR_MS,
  endsAt: NIGHT + toHours * HOUR_MS,
});
const aNewTechnician = (told: object = {}) => ({
  commandId: randomUUID(),
  technicianId: randomUUID(),
  name: 'Bram Hollis',
  phone: '+12525550133',
  skills: ['electrical'],
  van: { 'start-relay': 2 },
  start: [-47.7, 36.4],
  shifts: [shift(0, 8)],
  ...told,
});
const add = (by: TestPerson, told: object = {}) =>
  by.call('addTechnician', { body: aNewTechnician(told) });
const change = (technician: { id: string; version: number }, told: object, by = ines) =>
  by.call('changeTechnician', {
    params: { technicianId: technician.id },
    body: { commandId: randomUUID(), version: technician.version, ...told },
  });
const problem = (code: string) => ({ type: `/problems/${code}` });
const position = (km: number, at: number, accuracyMeters: number | null = 10): Position => ({
  lonLat: [-47.7, 36.4 + km / 111.2],
  at,
  accuracyMeters,
});

describe('POST /api/technicians', () => {
  it('adds a technician with shifts, and every board hears of it', async () => {
    const board = await mara.socket();
    const heard: Numbered<BoardChange>[] = [];
    board.on('board:changed', (one) => heard.push(one));
    const reply = await add(ines);
    expect(reply.status).toBe(201);
    expect(reply.body).toMatchObject({
      name: 'Bram Hollis',
      shifts: [shift(0, 8)],
      active: true,
      position: null,
      version: 0,
    });
    await until(() => heard.length > 0, 'the board hears of it');
    expect(heard[0]?.change).toEqual({ kind: 'technicians', technicians: [reply.body] });
    board.close();
  });

  it('is for managers and the owner', async () => {
    const statuses = [];
    for (const role of ['dispatcher', 'technician', 'manager', 'owner'] as const)
      statuses.push((await add(await server.signIn(role))).status);
    expect(statuses).toEqual([403, 403, 201, 201]);
  });

  it('refuses shifts that overlap or end before they begin, ids in use, and what does not fit', async () => {
    const overlap = await add(ines, { shifts: [shift(0, 8), shift(7, 12)] });
    const backwards = await add(ines, { shifts: [shift(8, 0)] });
    expect([overlap.status, backwards.status]).toEqual([422, 422]);
    expect(overlap.body).toMatchObject(problem('times-disagree'));
    expect(await select(server.sequelize, 'SELECT id FROM technicians')).toEqual([]);

    const technicianId = randomUUID();
    await add(ines, { technicianId });
    const twice = await add(ines, { technicianId });
    expect(twice.status).toBe(409);
    expect(twice.body).toMatchObject(problem('already-used'));
    const odd = await add(ines, {
      phone: '12',
      skills: ['juggling'],
      van: { spoon: 1 },
      name: ' ',
    });
    expect(odd.status).toBe(422);
  });
});

describe('PATCH /api/technicians/:technicianId', () => {
  it('changes only what is named and tells board and phone', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const phone = await theo.socket();
    const heard: DayChange[] = [];
    phone.on('day:changed', (one) => heard.push(one.change));
    const { technician } = await dayOf(theo);
    const reply = await change(technician, { van: { overload: 3 } });
    expect(reply.status).toBe(200);
    expect(reply.body).toEqual({ ...technician, van: { overload: 3 }, version: 1 });
    await until(() => heard.length > 0, 'the phone hears of it');
    expect(heard).toEqual([{ kind: 'technician', technician: reply.body as TechnicianDto }]);
    phone.close();
  });

  it('refuses an older version and shows what is there now', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const { technician } = await dayOf(theo);
    await change(technician, { van: { overload: 3 } });
    const reply = await change(technician, { van: {} });
    expect(reply.status).toBe(409);
    expect(reply.body).toMatchObject({
      ...problem('stale-version'),
      current: { van: { overload: 3 }, version: 1 },
    });
  });

  it('times the route anew when the shift moves', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const stop = await aStop(server, mara, theo.technicianId);
    const { technician } = await dayOf(theo);
    await change(technician, { shifts: [shift(2, 10)] });
    const [moved] = (await dayOf(theo)).stops;
    expect(moved?.stop.arriveAt).toBe(NIGHT + 2 * HOUR_MS);
    expect(moved?.stop.version).toBe(stop.version + 1);
  });

  it('takes the open stops of whoever stops working off the route, but not an accepted one', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const stop = await aStop(server, mara, theo.technicianId);
    await done(theo, 'acceptStop', stop);
    const { technician } = await dayOf(theo);
    const firm = await change(technician, { active: false });
    expect(firm.status).toBe(409);
    expect(firm.body).toMatchObject(problem('stop-is-firm'));

    const ilse = await aTechnician(server, 'Ilse Rowan');
    const open = await aStop(server, mara, ilse.technicianId);
    const leaves = await change((await dayOf(ilse)).technician, { active: false });
    expect(leaves.body).toMatchObject({ active: false });
    expect(await stateOf(server, open.callId)).toBe('waiting');
    expect((await dayOf(ilse)).stops).toEqual([]);
  });

  it('is for managers and the owner, and refuses one who is not there', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const { technician } = await dayOf(theo);
    expect((await change(technician, { name: 'T' }, mara)).status).toBe(403);
    expect((await change(technician, { name: 'T' }, theo)).status).toBe(403);
    expect((await change({ id: randomUUID(), version: 0 }, { name: 'T' })).status).toBe(404);
    expect((await change(technician, { name: '' })).status).toBe(422);
    const overlap = await change(technician, { shifts: [shift(0, 8), shift(7, 12)] });
    expect(overlap.body).toMatchObject(problem('times-disagree'));
    expect((await dayOf(theo)).technician).toEqual(technician);
  });
});

describe('GET /api/day', () => {
  it('holds the own stops in their order and the number of the last change in them', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const ilse = await aTechnician(server, 'Ilse Rowan');
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    await aStop(server, mara, ilse.technicianId);
    const day = await dayOf(theo);
    expect(day).toMatchObject({ stormId: server.stormId, technician: { id: theo.technicianId } });
    expect(day.stops.map(({ stop }) => stop.id)).toEqual([first.id, second.id]);
    expect(day.stops[0]).toMatchObject({ callState: 'offered', lostAt: NIGHT - 2 * HOUR_MS });

    // Nothing is missing between the picture and the socket.
    const phone = await theo.socket();
    const missed = await phone.emitWithAck('day:resume', {
      stormId: server.stormId,
      after: day.n,
    });
    expect(missed).toEqual({ kind: 'changes', changes: [] });
    phone.close();
  });

  it('is nobody’s but a technician’s', async () => {
    expect((await mara.call('technicianDay')).status).toBe(403);
    expect((await ines.call('technicianDay')).status).toBe(403);
  });

  it('is empty of stops while no storm is open', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    await aStop(server, mara, theo.technicianId);
    await ines.call('closeStorm', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), version: 0 },
    });
    expect(await dayOf(theo)).toMatchObject({ stormId: null, n: 0, stops: [] });
  });
});

describe('POST /api/day/position', () => {
  const report = (person: TestPerson, where: object) =>
    person.call('reportPosition', { body: { position: where } });

  async function driving(): Promise<{
    theo: Awaited<ReturnType<typeof aTechnician>>;
    stop: StopDto;
  }> {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const call = await aWaitingCall(server, mara, {
      address: { text: '9 Gull Rd', unitNo: '', lonLat: [-47.7, 36.4], kind: 'rooftop' },
    });
    const added = await put(mara, call, theo.technicianId);
    const offered = (added.body as { stop: StopDto }).stop;
    const accepted = await done(theo, 'acceptStop', offered);
    const stop = await done(theo, 'startTravel', accepted, { from: [-47.7, 36.45] });
    return { theo, stop };
  }
  const stopNow = async (theo: TestPerson) => (await dayOf(theo)).stops[0]?.stop;

  it('shows on the boards at once, but in neither the feed nor the audit trail', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const board = await mara.socket();
    const moved: [string, Position][] = [];
    const heard: unknown[] = [];
    board.on('technician:moved', (id, where) => moved.push([id, where]));
    board.on('board:changed', (one) => heard.push(one));
    const here = position(1, NIGHT - MINUTE_MS);
    const reply = await report(theo, here);
    expect(reply.body).toEqual({ done: true });
    await until(() => moved.length > 0, 'the board hears of it');
    expect(moved).toEqual([[theo.technicianId, here]]);
    expect(heard).toEqual([]);
    expect(await select(server.sequelize, 'SELECT n FROM audit_entries')).toEqual([]);
    expect((await dayOf(theo)).technician).toMatchObject({ position: here, version: 0 });
    board.close();
  });

  it('is not overwritten by one that was sent late, and none is from the future', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    await report(theo, position(1, NIGHT + HOUR_MS));
    expect((await dayOf(theo)).technician.position?.at).toBe(NIGHT);
    await report(theo, position(5, NIGHT - MINUTE_MS));
    expect((await dayOf(theo)).technician.position?.lonLat).toEqual(position(1, 0).lonLat);
  });

  it('moves the arrival time when the drive takes longer, and the customer is told', async () => {
    const { theo, stop } = await driving();
    server.setNow(NIGHT + 40 * MINUTE_MS);
    // Forty minutes later and no nearer than at the start.
    await report(theo, position(5.56, NIGHT + 40 * MINUTE_MS));
    const now = await stopNow(theo);
    const minutes = ((5.56 * 1.35) / (25 * 1.609344)) * 60 + 2;
    expect(((now?.etaAt ?? 0) - NIGHT) / MINUTE_MS).toBeCloseTo(40 + minutes, 0);
    expect(now?.version).toBe(stop.version + 1);
    const texts = await MessageRecord.findAll({ where: { callId: stop.callId } });
    expect(texts.filter(({ milestone }) => milestone === 'on-the-way')).toHaveLength(1);
    const [entry] = await select<{ actor: string; user_id: string | null }>(
      server.sequelize,
      "SELECT actor, user_id FROM audit_entries WHERE command = 'correctEta'",
    );
    expect(entry).toEqual({ actor: 'arrival times', user_id: null });
  });

  it('leaves the arrival time alone for a small difference or a coarse fix', async () => {
    const { theo, stop } = await driving();
    server.setNow(NIGHT + 12 * MINUTE_MS);
    await report(theo, position(5.56, NIGHT + 12 * MINUTE_MS));
    server.setNow(NIGHT + 50 * MINUTE_MS);
    await report(theo, position(5.56, NIGHT + 50 * MINUTE_MS, 3000));
    expect(await stopNow(theo)).toEqual(stop);
  });

  it('never promises less than the driver said', async () => {
    const { theo, stop } = await driving();
    const later = await done(theo, 'tellEta', stop, { etaAt: NIGHT + 2 * HOUR_MS });
    server.setNow(NIGHT + 5 * MINUTE_MS);
    await report(theo, position(1, NIGHT + 5 * MINUTE_MS));
    expect((await stopNow(theo))?.etaAt).toBe(later.etaAt);
  });

  it('corrects once when two positions come at once', async () => {
    const { theo, stop } = await driving();
    server.setNow(NIGHT + 40 * MINUTE_MS);
    const replies = await Promise.all(
      [38, 39, 40].map((minute) => report(theo, position(5.56, NIGHT + minute * MINUTE_MS))),
    );
    expect(replies.map((reply) => reply.status)).toEqual([200, 200, 200]);
    expect((await stopNow(theo))?.version).toBe(stop.version + 1);
  });

  it('is a technician’s to tell, and has to be on the earth', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    expect((await report(mara, position(1, NIGHT))).status).toBe(403);
    expect((await report(theo, { ...position(1, NIGHT), lonLat: [0, 99] })).status).toBe(422);
    expect((await report(theo, { lonLat: [0, 0] })).status).toBe(422);
  });
});
