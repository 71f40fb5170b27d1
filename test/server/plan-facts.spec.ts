import { randomUUID } from 'node:crypto';
import type { Settings } from '@shared/contract/office';
import type { PlanDto, PlanTrialDto } from '@shared/contract/routes';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { DEFAULT_PRICES } from '@shared/domain/planner/plan-prices';
import { CallRecord } from '../../server/calls/call-record';
import { select } from '../../server/db/sql';
import { StopRecord } from '../../server/routes/stop-record';
import { TechnicianRecord } from '../../server/technicians/technician-record';
import { startPlanner } from '../support/planner';
import { aStop, aTechnician, aWaitingCall, dayOf, done } from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

jest.setTimeout(30_000);
let planner: Awaited<ReturnType<typeof startPlanner>>;
let server: TestServer;
let ruth: TestPerson;
let theo: Awaited<ReturnType<typeof aTechnician>>;
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
  ruth = await server.signIn('manager', 'Ruth Calder');
  theo = await aTechnician(server, 'Theo Larkspur');
});

async function set(changes: Partial<Settings>): Promise<void> {
  const { version } = (await ruth.call('settings')).body as Settings;
  const reply = await ruth.call('changeSettings', {
    body: { commandId: randomUUID(), version, ...changes },
  });
  if (reply.status !== 200) throw new Error(reply.text);
}
async function proposed(): Promise<PlanDto> {
  const reply = await ruth.call('proposePlan', {
    params: { stormId: server.stormId },
    body: { commandId: randomUUID(), planId: randomUUID(), seconds: 0.05 },
  });
  if (reply.status !== 201) throw new Error(reply.text);
  return reply.body as PlanDto;
}
async function publish(plan: PlanDto): Promise<void> {
  const reply = await ruth.call('publishPlan', {
    params: { planId: plan.id },
    body: { commandId: randomUUID(), version: plan.version },
  });
  if (reply.status !== 200) throw new Error(reply.text);
}
const north = (km: number, told: Parameters<typeof aWaitingCall>[2] = {}) =>
  aWaitingCall(server, ruth, {
    address: {
      text: `${String(km)} North Rd`,
      unitNo: '',
      lonLat: [-47.7, 36.4 + km / 111.2],
      kind: 'rooftop',
    },
    ...told,
  });
const only = (plan: PlanDto) => {
  const stops = plan.routes.flatMap((route) => route.stops);
  if (stops.length !== 1 || !stops[0]) throw new Error(`${String(stops.length)} stops`);
  return stops[0];
};
/** The arrival in force of the one stop, once its plan is published. */
const inForce = async (plan: PlanDto): Promise<number> => {
  await publish(plan);
  const [stop] = (await dayOf(theo)).stops;
  return stop?.stop.arriveAt ?? 0;
};

describe('a plan counts with', () => {
  it('breaks of a shift, and so do the routes in force', async () => {
    const { version } = (await dayOf(theo)).technician;
    const shift = { startsAt: NIGHT - HOUR_MS, endsAt: NIGHT + 8 * HOUR_MS };
    const change = (breaks: object[]) =>
      ruth.call('changeTechnician', {
        params: { technicianId: theo.technicianId },
        body: { commandId: randomUUID(), version, shifts: [{ ...shift, breaks }] },
      });
    const late = { from: NIGHT + 7 * HOUR_MS, to: NIGHT + 9 * HOUR_MS, minutes: 40 };
    expect((await change([late])).body).toMatchObject({ type: '/problems/times-disagree' });
    const due = { from: NIGHT, to: NIGHT + 20 * MINUTE_MS, minutes: 40 };
    expect((await change([due])).status).toBe(200);
    await north(1);
    const plan = await proposed();
    expect(plan.routes[0]?.halts).toEqual([
      { kind: 'break', startAt: NIGHT, finishAt: NIGHT + 40 * MINUTE_MS },
    ]);
    const { arriveAt, driveMinutes } = only(plan);
    expect((arriveAt - NIGHT) / MINUTE_MS - driveMinutes).toBeCloseTo(40, 0);
    expect(Math.abs((await inForce(plan)) - arriveAt)).toBeLessThan(MINUTE_MS);
  });

  it('the window that a customer agreed to after parts were ordered, and counts lateness', async () => {
    let stop = await aStop(server, ruth, theo.technicianId);
    stop = await done(theo, 'acceptStop', stop);
    stop = await done(theo, 'startTravel', stop, { from: null });
    stop = await done(theo, 'arrive', stop);
    await done(theo, 'finishStop', stop, { outcome: 'parts-on-order', note: '', partsUsed: [] });
    const back = async (from: number, to: number) =>
      ruth.call('returnToWaiting', {
        params: { callId: stop.callId },
        body: {
          commandId: randomUUID(),
          version: (await CallRecord.findByPk(stop.callId))?.version,
          reason: 'parts came',
          window: { from: NIGHT + from * HOUR_MS, to: NIGHT + to * HOUR_MS },
        },
      });
    expect((await back(3, 2)).body).toMatchObject({ type: '/problems/times-disagree' });
    const reply = await back(2, 3);
    expect(reply.body).toMatchObject({
      row: { state: 'waiting', window: { from: NIGHT + 2 * HOUR_MS, to: NIGHT + 3 * HOUR_MS } },
    });
    const plan = await proposed();
    expect(only(plan)).toMatchObject({
      startAt: NIGHT + 2 * HOUR_MS,
      because: 'Within the agreed window.',
    });
    expect(plan.figures.lateMinutes).toBe(0);
    server.setNow(NIGHT + 4 * HOUR_MS);
    const late = await proposed();
    // Theo stands at the door still.
    expect(late.figures.lateMinutes).toBe(60);
    expect(only(late).because).toBe('Agreed window, 1 h late.');
  });

  it('a stop at the store for the parts that a van lacks; they are on it at the door', async () => {
    const call = await north(2);
    await CallRecord.update({ parts: ['start-relay', 'overload'] }, { where: { id: call.id } });
    await TechnicianRecord.update({ van: { overload: 1 } }, { where: {} });
    expect((await proposed()).unplanned).toMatchObject([
      { callId: call.id, reason: 'part', help: [expect.stringMatching(/start relay/)] },
    ]);
    await set({ shopPlace: [-47.7, 36.41], shopMinutes: 15 });
    const plan = await proposed();
    expect(only(plan).callId).toBe(call.id);
    await publish(plan);
    let stop = (await dayOf(theo)).stops[0]!.stop;
    expect(stop.fetches).toEqual({ 'start-relay': 1 });
    expect(Math.abs(stop.arriveAt - only(plan).arriveAt)).toBeLessThan(MINUTE_MS);
    stop = await done(theo, 'acceptStop', stop);
    stop = await done(theo, 'startTravel', stop, { from: null });
    expect(Math.abs((stop.etaAt ?? 0) - stop.arriveAt)).toBeLessThan(MINUTE_MS);
    await done(theo, 'arrive', stop);
    expect((await dayOf(theo)).technician.van).toEqual({ overload: 1, 'start-relay': 1 });
  });

  it('what finished visits took, once the manager wants it', async () => {
    for (let i = 0; i < 8; i++) {
      const call = await aStop(server, ruth, theo.technicianId);
      await StopRecord.update(
        {
          state: 'done',
          arrivedAt: new Date(NIGHT - 10 * HOUR_MS),
          endedAt: new Date(NIGHT - 10 * HOUR_MS + 90 * MINUTE_MS),
          endedBecause: 'Finished: cooling restored',
        },
        { where: { id: call.id } },
      );
      await CallRecord.update(
        { state: 'restored', settledAt: new Date(NIGHT), restoredAt: new Date(NIGHT) },
        { where: { id: call.callId } },
      );
    }
    // Eight visits of twice the time, beside the eight that are believed in beforehand.
    const measured = await ruth.call('measuredVisits');
    expect(measured.body).toMatchObject({ isUsed: false, visits: 8, all: { factor: 1.5 } });
    await north(1);
    const lasts = async () => {
      const { startAt, finishAt } = only(await proposed());
      return (finishAt - startAt) / MINUTE_MS;
    };
    expect(await lasts()).toBe(45);
    await set({ usesMeasuredVisits: true });
    // 45 × 1.5, and Theo's own beside that: (8 + 8 × 2 / 1.5) / 16 = 1.17.
    expect(await lasts()).toBe(Math.round(45 * 1.5 * ((8 + (8 * 2) / 1.5) / 16)));
  });
});

describe('POST /api/storms/:stormId/plan-trials', () => {
  it('plans by other weights beside those that are set, and keeps nothing', async () => {
    // What can be saved there is worth less than a drive of 60 km at such a price.
    await north(60);
    await north(1);
    const tried = async (prices: object) =>
      ruth.call('tryPrices', {
        params: { stormId: server.stormId },
        body: { seconds: 0.05, prices },
      });
    const same = (await tried({})).body as PlanTrialDto;
    expect(same.tried).toEqual(same.asSet);
    const dear = (await tried({ driveDollarsPerHour: 500 })).body as PlanTrialDto;
    expect(dear.asSet.stops).toBe(2);
    expect(dear.tried.stops).toBeLessThan(2);
    expect(dear.tried.driveMiles).toBeLessThan(dear.asSet.driveMiles);
    expect(dear.onlyAsSet).not.toEqual([]);
    expect((await tried({ driveDollarsPerHour: -1 })).status).toBe(422);
    expect(await select(server.sequelize, 'SELECT id FROM plans')).toEqual([]);
    expect(((await ruth.call('settings')).body as Settings).driveDollarsPerHour).toBe(
      DEFAULT_PRICES.driveDollarsPerHour,
    );
  });
});

describe('a call on no route', () => {
  it('says who could go, and until when', async () => {
    await north(1, { skills: ['sealed-system'] });
    await TechnicianRecord.update({ skills: [] }, { where: {} });
    const [left] = (await proposed()).unplanned;
    expect(left?.reason).toBe('skill');
    expect(left?.help).toEqual([
      expect.stringMatching(
        /^Any technician certified for sealed systems before \d+:\d\d [ap]m \(from the place of Theo Larkspur: /,
      ),
    ]);
  });
});
