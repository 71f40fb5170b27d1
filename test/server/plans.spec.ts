import { randomUUID } from 'node:crypto';
import type { Test } from 'supertest';
import type { BoardChange, DayChange } from '@shared/contract/realtime';
import type { PlanDto, StopCard } from '@shared/contract/routes';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { select } from '../../server/db/sql';
import { ShiftRecord, TechnicianRecord } from '../../server/technicians/technician-record';
import { atOnce } from '../support/at-once';
import { aUnit } from '../support/calls';
import { startPlanner } from '../support/planner';
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

let planner: Awaited<ReturnType<typeof startPlanner>>;
let server: TestServer;
let mara: TestPerson;
let theo: Awaited<ReturnType<typeof aTechnician>>;
let ilse: Awaited<ReturnType<typeof aTechnician>>;
beforeAll(async () => {
  planner = await startPlanner();
  server = await startServer({ context: { planner: planner.planner } });
});
afterAll(async () => {
  await server.close();
  await planner.close();
});
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  theo = await aTechnician(server, 'Theo Larkspur');
  ilse = await aTechnician(server, 'Ilse Rowan');
});

const propose = (by: TestPerson = mara, told: object = {}): Test =>
  by.call('proposePlan', {
    params: { stormId: server.stormId },
    body: { commandId: randomUUID(), planId: randomUUID(), seconds: 0.05, ...told },
  });
async function proposed(): Promise<PlanDto> {
  const reply = await propose();
  if (reply.status !== 201) throw new Error(reply.text);
  return reply.body as PlanDto;
}
const decide = (
  route: 'publishPlan' | 'discardPlan',
  plan: PlanDto,
  by: TestPerson = mara,
  told: object = {},
): Test =>
  by.call(route, {
    params: { planId: plan.id },
    body: { commandId: randomUUID(), version: plan.version, ...told },
  });
async function published(plan: PlanDto): Promise<PlanDto> {
  const reply = await decide('publishPlan', plan);
  if (reply.status !== 200) throw new Error(reply.text);
  return reply.body as PlanDto;
}
/** A call `km` to the north of where everybody starts. */
const north = (km: number, told: Parameters<typeof aWaitingCall>[2] = {}) =>
  aWaitingCall(server, mara, {
    address: {
      text: `${String(km)} North Rd`,
      unitNo: '',
      lonLat: [-47.7, 36.4 + km / 111.2],
      kind: 'rooftop',
    },
    ...told,
  });
const callsOf = async (technician: TestPerson) =>
  (await dayOf(technician)).stops.map(({ stop }) => stop.callId);
const problem = (code: string) => ({ type: `/problems/${code}` });

describe('POST /api/storms/:stormId/plans', () => {
  it('plans every call that can be reached, with times and a reason for each place', async () => {
    const calls = [await north(1), await north(2), await north(3)];
    const plan = await proposed();
    const stops = plan.routes.flatMap((route) => route.stops);
    expect(stops.map(({ callId }) => callId).sort()).toEqual(calls.map(({ id }) => id).sort());
    expect(plan).toMatchObject({ state: 'proposed', proposedBy: 'Mara Quill', unplanned: [] });
    for (const stop of stops) {
      expect(stop.finishAt - stop.startAt).toBe(45 * MINUTE_MS);
      expect(stop.arriveAt).toBeGreaterThanOrEqual(NIGHT);
      // A half-full freezer, 2 h in: 22 h are left, and each holds 300 dollars.
      expect(stop.because).toMatch(/^Saves \$300; done (1\d|2\d) h before save-by\.$/);
    }
  });

  it('proposes only: no stop, no offer and no state has changed', async () => {
    const call = await north(1);
    await proposed();
    expect(await stateOf(server, call.id)).toBe('waiting');
    expect(await select(server.sequelize, 'SELECT id FROM stops')).toEqual([]);
  });

  it('says for each call left out why', async () => {
    const nowhere = await aWaitingCall(server, mara, {
      address: { text: 'behind the old mill', unitNo: '', lonLat: null, kind: 'unlocated' },
    });
    const skilled = await north(1, { skills: ['sealed-system'] });
    // The drive there and back takes longer than the shift lasts.
    const far = await north(400);
    await TechnicianRecord.update({ skills: [] }, { where: {} });
    const plan = await proposed();
    expect(
      Object.fromEntries(plan.unplanned.map(({ callId, reason }) => [callId, reason])),
    ).toEqual({ [nowhere.id]: 'unlocated', [skilled.id]: 'skill', [far.id]: 'no-shift' });
    for (const { words } of plan.unplanned) expect(words).toMatch(/\.$/);
  });

  it('leaves everything out when nobody has a shift, and says so', async () => {
    await ShiftRecord.destroy({ where: {} });
    const call = await north(1);
    expect((await proposed()).unplanned).toEqual([
      { callId: call.id, reason: 'no-shift', words: 'Nobody has a shift in the next 24 hours.' },
    ]);
  });

  it('begins a shift that is yet to come at its start, from home', async () => {
    await ShiftRecord.update(
      { startsAt: new Date(NIGHT + 3 * HOUR_MS), endsAt: new Date(NIGHT + 12 * HOUR_MS) },
      { where: {} },
    );
    await north(2);
    const [stop] = (await proposed()).routes.flatMap((route) => route.stops);
    // 2 km straight, 2.7 km driven at 25 mph, 2 minutes to park.
    const minutes = (2.7 / (25 * 1.609344)) * 60 + 2;
    expect(((stop?.arriveAt ?? 0) - NIGHT) / MINUTE_MS).toBeCloseTo(180 + minutes, 0);
    expect(stop?.driveMinutes).toBeCloseTo(minutes, 0);
  });

  it('goes first where medicine is at stake, and counts it at its own value', async () => {
    await TechnicianRecord.update({ active: false }, { where: { id: ilse.technicianId } });
    for (let km = 1; km <= 3; km++) await north(km);
    const unit = aUnit({
      kind: 'medicine',
      medicine: {
        kind: 'insulin',
        labelHours: null,
        labelMaxF: null,
        frozen: false,
        hoursAlreadyUnrefrigerated: 0,
      },
      valueCents: 10_000,
    });
    const medicine = await north(4, { units: [{ ...unit, kind: 'medicine-fridge' }] });
    const plan = await proposed();
    const [first] = plan.routes.flatMap((route) => route.stops);
    expect(first?.callId).toBe(medicine.id);
    expect(plan.figures.savedCents + plan.figures.lostCents).toBe(3 * 30_000 + 10_000);
    expect(first?.because).toContain('$100 with medicine');
  });

  it('compares with the routes in force: what is saved, driven and moved', async () => {
    // One route in force that drives to and fro; the freezers thaw in 7 to 8 hours.
    const units = () => [aUnit({ door: 'many' })];
    for (const km of [12, 1, 11, 2])
      await put(mara, await north(km, { units: units() }), theo.technicianId, 100);
    await north(3, { units: units() });
    const { figures, inForce } = await proposed();
    expect(inForce.stops).toBe(4);
    expect(figures.stops).toBe(5);
    expect(figures.savedCents).toBeGreaterThanOrEqual(inForce.savedCents);
    expect(figures.savedCents + figures.lostCents).toBe(5 * 30_000);
    expect(inForce.savedCents + inForce.lostCents).toBe(5 * 30_000);
    expect(figures.driveMinutes).toBeLessThan(inForce.driveMinutes);
    expect(figures.driveMiles).toBeLessThan(inForce.driveMiles);
    expect(figures.moved).toBeGreaterThan(0);
    expect(inForce.moved).toBe(0);
  });

  it('keeps accepted, locked and driven-to stops first and in their order', async () => {
    const far = await put(mara, await north(20), theo.technicianId, 100);
    await put(mara, await north(10), theo.technicianId, 100);
    const third = await put(mara, await north(15), theo.technicianId, 100);
    await act(mara, 'lockStop', (third.body as { stop: StopCard['stop'] }).stop, { locked: true });
    const [first, second, last] = (await dayOf(theo)).stops.map(({ stop }) => stop);
    expect(first?.id).toBe((far.body as { stop: StopCard['stop'] }).stop.id);
    if (!first || !second || !last) throw new Error('three stops');
    await done(theo, 'startTravel', await done(theo, 'acceptStop', first), { from: null });
    await north(1);
    const plan = await proposed();
    const route = plan.routes.find(({ technicianId }) => technicianId === theo.technicianId);
    expect(route?.stops.slice(0, 3).map(({ callId, firm }) => [callId, firm])).toEqual([
      [first.callId, true],
      [second.callId, true],
      [last.callId, true],
    ]);
  });

  it('does not give a call back to a technician who declined it', async () => {
    await TechnicianRecord.update({ active: false }, { where: { id: ilse.technicianId } });
    const stop = await aStop(server, mara, theo.technicianId);
    await act(theo, 'declineStop', stop, { reason: 'unsafe', note: '' });
    expect((await proposed()).routes).toEqual([]);
    await TechnicianRecord.update({ active: true }, { where: { id: ilse.technicianId } });
    expect((await proposed()).routes).toMatchObject([{ technicianId: ilse.technicianId }]);
  });

  it('overtakes the proposal before it, and the board sees both', async () => {
    await north(1);
    const board = await mara.socket();
    const heard: PlanDto[] = [];
    board.on('board:changed', ({ change }) => {
      if (change.kind === 'plan') heard.push(change.plan);
    });
    const first = await proposed();
    const second = await proposed();
    await until(() => heard.length === 3, 'the board hears of all');
    expect(heard.map(({ id, state }) => [id, state]).sort()).toEqual(
      [
        [first.id, 'proposed'],
        [first.id, 'overtaken'],
        [second.id, 'proposed'],
      ].sort(),
    );
    board.close();
  });

  it('gives the same answer to the same command', async () => {
    await north(1);
    const ids = { commandId: randomUUID(), planId: randomUUID() };
    const first = await propose(mara, ids);
    const again = await propose(mara, ids);
    expect(again.body).toEqual(first.body);
    expect(await select(server.sequelize, 'SELECT id FROM plans')).toHaveLength(1);
  });

  it('is for the desk, and refuses what does not fit', async () => {
    const statuses = [];
    for (const role of ['dispatcher', 'manager', 'owner', 'technician'] as const)
      statuses.push((await propose(await server.signIn(role))).status);
    expect(statuses).toEqual([201, 201, 201, 403]);
    expect((await propose(mara, { seconds: 3600 })).status).toBe(422);
    expect((await propose(mara, { planId: 'mine' })).status).toBe(422);
    const nowhere = await mara.call('proposePlan', {
      params: { stormId: randomUUID() },
      body: { commandId: randomUUID(), planId: randomUUID() },
    });
    expect(nowhere.status).toBe(404);
  });
});

describe('POST /api/plans/:planId/publication', () => {
  it('puts the routes in force and offers the first stop of each technician', async () => {
    const calls = [];
    for (let km = 1; km <= 6; km++) calls.push(await north(km));
    const plan = await published(await proposed());
    expect(plan.state).toBe('published');
    for (const route of plan.routes) {
      const technician = route.technicianId === theo.technicianId ? theo : ilse;
      const { stops } = await dayOf(technician);
      expect(stops.map(({ stop }) => stop.callId)).toEqual(route.stops.map((stop) => stop.callId));
      expect(stops.map(({ stop }) => stop.position)).toEqual(stops.map((_, index) => index));
      expect(stops.map(({ stop, callState }) => [stop.state, callState])).toEqual(
        stops.map((_, index) => (index === 0 ? ['offered', 'offered'] : ['planned', 'planned'])),
      );
      // The times in force are those that were proposed.
      stops.forEach(({ stop }, index) =>
        expect(Math.abs(stop.arriveAt - (route.stops[index]?.arriveAt ?? 0))).toBeLessThan(
          MINUTE_MS,
        ),
      );
    }
  });

  it('pushes the offers to the phones', async () => {
    await north(1);
    const [phone, other] = [await theo.socket(), await ilse.socket()];
    const heard: DayChange[] = [];
    for (const socket of [phone, other])
      socket.on('day:changed', ({ change }) => heard.push(change));
    await published(await proposed());
    await until(() => heard.length > 0, 'a phone hears of its offer');
    expect(heard).toMatchObject([{ kind: 'stop', card: { stop: { state: 'offered' } } }]);
    phone.close();
    other.close();
  });

  it('puts calls that the new routes leave out back to waiting', async () => {
    await TechnicianRecord.update({ active: false }, { where: { id: ilse.technicianId } });
    const stop = await aStop(server, mara, theo.technicianId, { skills: ['commercial'] });
    await TechnicianRecord.update({ skills: [] }, { where: { id: theo.technicianId } });
    const other = await north(1);
    await published(await proposed());
    expect(await callsOf(theo)).toEqual([other.id]);
    expect(await stateOf(server, stop.callId)).toBe('waiting');
  });

  it('respects what happened since: accepted, locked, declined and settled', async () => {
    await TechnicianRecord.update({ active: false }, { where: { id: ilse.technicianId } });
    const stops = [];
    for (let i = 0; i < 4; i++) stops.push(await aStop(server, mara, theo.technicianId));
    const extra = await north(5);
    await TechnicianRecord.update({ active: true }, { where: { id: ilse.technicianId } });
    const plan = await proposed();

    const [first, second, third] = stops;
    if (!first || !second || !third) throw new Error('four stops');
    await act(theo, 'declineStop', first, { reason: 'unsafe', note: '' });
    const [next] = (await dayOf(theo)).stops;
    expect(next?.stop.callId).toBe(second.callId);
    const taken = await done(theo, 'acceptStop', next?.stop ?? second);
    const [row] = await select<{ version: number }>(
      server.sequelize,
      'SELECT version FROM calls WHERE id = ?',
      [third.callId],
    );
    await mara.call('concludeCall', {
      params: { callId: third.callId },
      body: {
        commandId: randomUUID(),
        version: row?.version,
        outcome: 'running-again',
        reason: 'it runs',
      },
    });
    await published(plan);

    const day = (await dayOf(theo)).stops.map(({ stop }) => stop);
    expect(day[0]).toMatchObject({ id: taken.id, state: 'accepted', position: 0 });
    expect(day.map(({ callId }) => callId)).not.toContain(first.callId);
    expect(await stateOf(server, third.callId)).toBe('running-again');
    const all = [...(await callsOf(theo)), ...(await callsOf(ilse))];
    expect(all).not.toContain(third.callId);
    expect(all).toContain(extra.id);
  });

  it('never moves a locked stop, nor those before it', async () => {
    const ids: string[] = [];
    for (const km of [30, 1, 20])
      ids.push(
        (
          (await put(mara, await north(km), theo.technicianId, 100)).body as {
            stop: StopCard['stop'];
          }
        ).stop.id,
      );
    const second = (await dayOf(theo)).stops[1]?.stop;
    if (!second) throw new Error('a second stop');
    await done(mara, 'lockStop', second, { locked: true });
    await north(2);
    await published(await proposed());
    expect((await dayOf(theo)).stops.slice(0, 2).map(({ stop }) => stop.id)).toEqual(
      ids.slice(0, 2),
    );
  });

  it('is refused once a person has changed the routes', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const plan = await proposed();
    await done(mara, 'moveStop', stop, { technicianId: ilse.technicianId, position: 0 });
    const reply = await decide('publishPlan', plan);
    expect(reply.status).toBe(409);
    expect(reply.body).toMatchObject({
      ...problem('plan-overtaken'),
      current: { id: plan.id, state: 'overtaken' },
    });
    expect(await callsOf(ilse)).toEqual([stop.callId]);
  });

  it('happens once when two dispatchers press at once, and the epochs stay unique', async () => {
    const jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
    await north(1);
    const plan = await proposed();
    const replies = await atOnce(server, { table: 'storms', id: server.stormId }, [
      () => decide('publishPlan', plan),
      () => decide('publishPlan', plan, jonas),
    ]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
    const [storm] = await select<{ plan_epoch: number }>(
      server.sequelize,
      'SELECT plan_epoch FROM storms',
    );
    expect(storm?.plan_epoch).toBe(1);
  });

  it('changes nothing when the same command comes again', async () => {
    await north(1);
    const plan = await proposed();
    const commandId = randomUUID();
    const first = await decide('publishPlan', plan, mara, { commandId });
    const again = await decide('publishPlan', plan, mara, { commandId });
    expect([first.status, again.status]).toEqual([200, 200]);
    expect(again.body).toEqual(first.body);
    expect(await select(server.sequelize, 'SELECT id FROM stops')).toHaveLength(1);
  });

  it('refuses a plan that was discarded, seen in another version, or never made', async () => {
    await north(1);
    const plan = await proposed();
    const other = await decide('publishPlan', { ...plan, version: plan.version + 1 });
    expect((await decide('discardPlan', plan)).body).toMatchObject({ state: 'discarded' });
    const late = await decide('publishPlan', plan);
    const none = await decide('publishPlan', { ...plan, id: randomUUID() });
    expect([other.status, late.status, none.status]).toEqual([409, 409, 404]);
    expect(await select(server.sequelize, 'SELECT id FROM stops')).toEqual([]);
  });

  it('is for the desk', async () => {
    await north(1);
    const plan = await proposed();
    expect((await decide('publishPlan', plan, theo)).status).toBe(403);
    expect((await decide('discardPlan', plan, theo)).status).toBe(403);
    expect((await decide('publishPlan', plan, await server.signIn('owner'))).status).toBe(200);
  });

  it('keeps a second round small: stops that keep their technician keep their id', async () => {
    for (let km = 1; km <= 5; km++) await north(km);
    await published(await proposed());
    const ids = async () =>
      [...(await dayOf(theo)).stops, ...(await dayOf(ilse)).stops]
        .map(({ stop }) => stop.id)
        .sort();
    const before = await ids();
    await published(await proposed());
    expect(await ids()).toEqual(before);
  });

  it('tells the board of a published plan in one go', async () => {
    for (let km = 1; km <= 3; km++) await north(km);
    const plan = await proposed();
    const board = await mara.socket();
    const heard: BoardChange[] = [];
    board.on('board:changed', ({ change }) => heard.push(change));
    await published(plan);
    await until(() => heard.some(({ kind }) => kind === 'plan'), 'the board hears of the plan');
    expect(heard.map(({ kind }) => kind)).toEqual(['calls', 'stops', 'plan']);
    expect(heard[1]).toMatchObject({ kind: 'stops', stops: { length: 3 } });
    board.close();
  });
});
