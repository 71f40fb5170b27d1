import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { MeasuredSpeedsDto, Settings } from '@shared/contract/office';
import type { BoardChange, Numbered } from '@shared/contract/realtime';
import type { PlanDto, StopDto } from '@shared/contract/routes';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { brokenInvariants } from '../../server/invariants/checks';
import { PlanRecord, StopRecord } from '../../server/routes/stop-record';
import { followRoads } from '../../server/storm-roads/follow-roads';
import { measureDrives } from '../../server/storm-roads/measure-drives';
import { MessageRecord } from '../../server/texts/message-record';
import { act, aStop, aTechnician, aWaitingCall, dayOf, done } from '../support/routes';
import type { TestPerson, TestServer } from '../support/server';
import { AFTERNOON, startTextLab, type TextLab, until } from '../support/texts';
import { over, twoBridges } from '../support/two-bridges';

let lab: TextLab;
let server: TestServer;
let mara: TestPerson;
let roads: ReturnType<typeof twoBridges>;

beforeAll(async () => {
  roads = twoBridges();
  lab = await startTextLab({ roads });
  server = lab.server;
});
afterAll(() => lab.close());
beforeEach(async () => {
  await lab.reset();
  setNow(AFTERNOON);
  await roads.follow({ roads: [], factors: { timeOfDay: 1, storm: 1, byClass: {} } });
  mara = await server.signIn('dispatcher', 'Mara');
});

/** Everybody starts west of the shore; the island's calls lie beyond the southern bridge. */
const address = (lon: number, text: string) => ({
  address: { text, unitNo: '', lonLat: [lon, 36.4] as [number, number], kind: 'rooftop' as const },
});
const ON_ISLAND = address(-47.55, '1 Sand Rd');
const IN_TOWN = address(-47.69, '2 Larch Ave');

const now = () => server.context.clock();
/** Both clocks: the laboratory's runs on, and builders count from the server's. */
const setNow = (at: number): void => {
  lab.setNow(at);
  server.setNow(at);
};
const follow = () => followRoads(server.context);
const close = async (bridge: 'south' | 'north', told: object = {}): Promise<StormRoadDto> => {
  const reply = await mara.call('addStormRoad', {
    params: { stormId: server.stormId },
    body: {
      commandId: randomUUID(),
      stormRoadId: randomUUID(),
      kind: 'closed',
      name: `${bridge} bridge`,
      notes: '',
      shape: over(bridge),
      startsAt: now() - MINUTE_MS,
      endsAt: null,
      speedShare: null,
      ...told,
    },
  });
  if (reply.status !== 201) throw new Error(reply.text);
  return reply.body as StormRoadDto;
};
const stopNow = (id: string) => StopRecord.findByPk(id, { rejectOnEmpty: true });
const readCall = async (id: string): Promise<CallDetail> =>
  (await mara.call('readCall', { params: { callId: id } })).body as CallDetail;

async function driving(technician: TestPerson, stop: StopDto): Promise<StopDto> {
  const accepted = await done(technician, 'acceptStop', stop);
  return done(technician, 'startTravel', accepted, { from: [-47.7, 36.4] });
}
const seenAt = (technician: TestPerson, lon: number) =>
  technician.call('reportPosition', {
    body: { position: { lonLat: [lon, 36.4], at: now(), accuracyMeters: 10 } },
  });

describe('a road that is closed', () => {
  it('moves the arrival of whoever is driving, and the customer is texted', async () => {
    lab.work();
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await driving(
      technician,
      await aStop(server, mara, technician.technicianId, ON_ISLAND),
    );
    const before = (await stopNow(stop.id)).etaAt!.getTime();
    const told = () => lab.accepted().filter(({ body }) => body.includes('arrive'));
    await until(() => told().length === 1, 'the first text');
    // Eleven minutes later, so that the gap between two texts is over.
    setNow(now() + 11 * MINUTE_MS);
    await seenAt(technician, -47.69);
    await close('south');
    await follow();
    const after = (await stopNow(stop.id)).etaAt!.getTime();
    // Sixteen kilometres to the north and as many back at 40 km/h and the factors of the hour.
    expect((after - before) / MINUTE_MS).toBeGreaterThan(40);
    await until(() => told().length === 2, 'the text of the new arrival');
    expect(told()[1]?.body).toContain('Juno');
    const texts = await MessageRecord.findAll({ where: { milestone: 'eta-moved' } });
    expect(texts).toHaveLength(1);
  });

  it('leaves accepted stops where they are and gives them their new times', async () => {
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh');
    const first = await aStop(server, mara, technician.technicianId, ON_ISLAND);
    const second = await aStop(server, mara, technician.technicianId, IN_TOWN);
    const accepted = await done(technician, 'acceptStop', first);
    await close('south');
    await follow();
    const [one, two] = [await stopNow(first.id), await stopNow(second.id)];
    expect([one.state, one.position, two.state, two.position]).toEqual([
      'accepted',
      0,
      'planned',
      1,
    ]);
    expect(one.arriveAt.getTime()).toBeGreaterThan(accepted.arriveAt + 40 * MINUTE_MS);
    expect(one.unreachable).toBe(false);
    // The way back goes round, too.
    expect(two.arriveAt.getTime() - one.finishAt.getTime()).toBeGreaterThan(40 * MINUTE_MS);
  });

  it('is heard of by boards and phones in the change that moves the times', async () => {
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await aStop(server, mara, technician.technicianId, ON_ISLAND);
    await close('south');
    const socket = await mara.socket();
    const heard: Numbered<BoardChange>[] = [];
    socket.on('board:changed', (change) => heard.push(change));
    await follow();
    await until(() => heard.some(({ change }) => change.kind === 'stops'), 'the stop on the board');
    const change = heard.map((one) => one.change).find((one) => one.kind === 'stops');
    expect(change).toMatchObject({ stops: [{ id: stop.id, isUnreachable: false }] });
    const [card] = (await dayOf(technician)).stops;
    expect(card?.stop.arriveAt).toBe((await stopNow(stop.id)).arriveAt.getTime());
    socket.disconnect();
  });

  it('overtakes what was proposed before', async () => {
    await follow();
    const plan = await PlanRecord.create({
      id: randomUUID(),
      stormId: server.stormId,
      state: 'proposed',
      proposedAt: new Date(now()),
      proposedBy: 'Mara',
      body: JSON.stringify({ routes: [], unplanned: [], figures: NO_FIGURES, inForce: NO_FIGURES }),
      baseEpoch: 0,
    });
    await close('south');
    await plan.reload();
    expect(plan.state).toBe('overtaken');
  });

  it('tells nobody anything when it is looked at again', async () => {
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await aStop(server, mara, technician.technicianId, ON_ISLAND);
    await close('south');
    await follow();
    const { version } = await stopNow(stop.id);
    await Promise.all([follow(), follow(), follow()]);
    expect((await stopNow(stop.id)).version).toBe(version);
  });
});

describe('an island without a bridge', () => {
  it('cuts its calls off, says so on the stop, and lets them be reached again', async () => {
    const quiet = { ...ON_ISLAND, mayText: false };
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await aStop(server, mara, technician.technicianId, quiet);
    const waiting = await aWaitingCall(server, mara, quiet);
    const inTown = await aWaitingCall(server, mara, { ...IN_TOWN, mayText: false });
    const before = await stopNow(stop.id);
    await close('south');
    const north = await close('north');
    await follow();
    expect((await readCall(waiting.id)).row.cutOff).toBe(true);
    expect((await readCall(stop.callId)).row.cutOff).toBe(true);
    expect((await readCall(inTown.id)).row.cutOff).toBe(false);
    const [card] = (await dayOf(technician)).stops;
    expect(card?.stop).toMatchObject({ id: stop.id, isUnreachable: true });
    // A time that is no promise is still a time.
    expect(card!.stop.driveMinutes).toBe(before.driveMinutes);

    await mara.call('liftStormRoad', {
      params: { stormRoadId: north.id },
      body: { commandId: randomUUID(), version: north.version },
    });
    await follow();
    expect((await readCall(waiting.id)).row.cutOff).toBe(false);
    expect((await stopNow(stop.id)).unreachable).toBe(false);
    expect(await brokenInvariants(server.sequelize)).toEqual([]);
  });

  it('is why its calls are in no plan', async () => {
    await aTechnician(server, 'Juno Marsh');
    const waiting = await aWaitingCall(server, mara, ON_ISLAND);
    await close('south');
    await close('north');
    await follow();
    const reply = await mara.call('proposePlan', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), planId: randomUUID(), seconds: 0.05 },
    });
    expect([reply.status, (reply.body as PlanDto).unplanned]).toEqual([
      201,
      [
        {
          callId: waiting.id,
          reason: 'cut-off',
          words: 'Cut off: every road there is closed or flooded now.',
        },
      ],
    ]);
  });

  it('is no island to a technician who lives there', async () => {
    const waiting = await aWaitingCall(server, mara, ON_ISLAND);
    const technician = await aTechnician(server, 'Juno Marsh');
    await seenAt(technician, -47.56);
    await close('south');
    await close('north');
    await follow();
    expect((await readCall(waiting.id)).row.cutOff).toBe(false);
    await seenAt(technician, -47.7);
    // A call is looked at once under each set of conditions; a new call brings a look of its own.
    const late = await aWaitingCall(server, mara, ON_ISLAND);
    await follow();
    expect((await readCall(late.id)).row.cutOff).toBe(true);
  });

  it('is not driven to: travel starts without an arrival that nobody could keep', async () => {
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await aStop(server, mara, technician.technicianId, ON_ISLAND);
    await close('south');
    await close('north');
    await follow();
    const seen = (await dayOf(technician)).stops[0]!.stop;
    const accepted = await done(technician, 'acceptStop', seen);
    const reply = await act(technician, 'startTravel', accepted, { from: [-47.7, 36.4] });
    expect(reply.body).toMatchObject({
      card: { stop: { id: stop.id, etaAt: null, isUnreachable: true } },
    });
  });
});

describe('a drive that is cut off on its way', () => {
  it('says that its arrival cannot be kept, once, on the stop and to the desk', async () => {
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await driving(
      technician,
      await aStop(server, mara, technician.technicianId, ON_ISLAND),
    );
    await seenAt(technician, -47.69);
    await close('south');
    await close('north');
    await follow();
    await follow();
    expect((await stopNow(stop.id)).unreachable).toBe(true);
    const { remarks } = await readCall(stop.callId);
    expect(remarks.map(({ text }) => text)).toEqual([
      'No open road leads there any more, and Juno Marsh is on the way. The arrival that was told cannot be kept: ring the customer.',
    ]);
  });
});

describe('a closure with a span', () => {
  it('begins and ends by the clock, with nobody at the desk', async () => {
    const technician = await aTechnician(server, 'Juno Marsh');
    const stop = await aStop(server, mara, technician.technicianId, ON_ISLAND);
    const drive = async (): Promise<number> => {
      await follow();
      return (await stopNow(stop.id)).driveMinutes;
    };
    const open = await drive();
    await close('south', {
      startsAt: AFTERNOON + 30 * MINUTE_MS,
      endsAt: AFTERNOON + 60 * MINUTE_MS,
    });
    expect(await drive()).toBe(open);
    setNow(AFTERNOON + 31 * MINUTE_MS);
    expect(await drive()).toBeGreaterThan(open + 40);
    setNow(AFTERNOON + 61 * MINUTE_MS);
    expect(await drive()).toBe(open);
  });
});

describe('speeds', () => {
  const settingsNow = async (): Promise<Settings> =>
    (await (await server.signIn('manager')).call('settings')).body as Settings;
  const set = async (changes: Partial<Settings>) => {
    const manager = await server.signIn('manager');
    const { version } = await settingsNow();
    return manager.call('changeSettings', {
      body: { commandId: randomUUID(), version, ...changes },
    });
  };

  it('by the hour and in a storm are settings, within bounds, and the routes follow them', async () => {
    const technician = await aTechnician(server, 'Juno Marsh');
    await set({ dayPercent: 100, stormPercent: 100 });
    const stop = await aStop(server, mara, technician.technicianId, IN_TOWN);
    await follow();
    const usual = (await stopNow(stop.id)).driveMinutes - 2;
    expect((await set({ dayPercent: 50, stormPercent: 80 })).status).toBe(200);
    await follow();
    expect((await stopNow(stop.id)).driveMinutes - 2).toBeCloseTo(usual / 0.4, 0);
    for (const wrong of [
      { dayPercent: 39 },
      { nightPercent: 131 },
      { stormPercent: 101 },
      { dayPercent: 50.5 },
    ])
      expect((await set(wrong)).status).toBe(422);
  });

  it('are learned from drives, shown, switched on and forgotten by the manager', async () => {
    await set({ dayPercent: 100, stormPercent: 100 });
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh', 24 * 20);
    // Eight drives of some 10 km that took twice as long as expected.
    for (let i = 0; i < 8; i++) {
      const stop = await driving(
        technician,
        await aStop(server, mara, technician.technicianId, address(-47.7 + 0.11 - i * 1e-6, 'x')),
      );
      const expected = (stop.driveMinutes - 2) * MINUTE_MS;
      setNow(now() + 2 * expected + 2 * MINUTE_MS);
      const there = await done(technician, 'arrive', {
        ...stop,
        version: (await stopNow(stop.id)).version,
      });
      await done(technician, 'finishStop', there, { outcome: 'restored', note: '', partsUsed: [] });
      setNow(AFTERNOON + (i + 1) * 24 * HOUR_MS);
    }
    await measureDrives(server.context);
    await measureDrives(server.context);
    const manager = await server.signIn('manager');
    const shown = async () => (await manager.call('measuredSpeeds')).body as MeasuredSpeedsDto;
    expect(await shown()).toMatchObject({ drives: 8, leftOut: [], isUsed: false, since: null });
    const [residential] = (await shown()).classes;
    expect(residential).toMatchObject({ roadClass: 'residential', drives: 8, usualKmh: 40 });
    // Twice as long, drawn to 1 by as much as five drives.
    expect(residential!.factor).toBeCloseTo(1 / (1 + 8 / 13), 1);

    expect(roads.followed.factors.byClass).toEqual({});
    await set({ usesMeasuredSpeeds: true });
    await follow();
    expect(roads.followed.factors.byClass.residential).toBeCloseTo(residential!.factor, 1);

    const reset = await manager.call('resetMeasuredSpeeds', {
      body: { commandId: randomUUID(), version: (await settingsNow()).version },
    });
    expect(reset.status).toBe(200);
    expect(await shown()).toMatchObject({ drives: 0, classes: [] });
    await follow();
    expect(roads.followed.factors.byClass).toEqual({});
  });

  it('are not learned from a drive that nobody saw begin', async () => {
    await follow();
    const technician = await aTechnician(server, 'Juno Marsh');
    const accepted = await done(
      technician,
      'acceptStop',
      await aStop(server, mara, technician.technicianId, IN_TOWN),
    );
    const stop = await done(technician, 'startTravel', accepted, { from: null });
    setNow(now() + 20 * MINUTE_MS);
    await done(technician, 'arrive', stop);
    await measureDrives(server.context);
    const manager = await server.signIn('manager');
    expect((await manager.call('measuredSpeeds')).body).toMatchObject({
      drives: 1,
      leftOut: [{ why: 'no position at its start', drives: 1 }],
      classes: [],
    });
  });
});

const NO_FIGURES = {
  savedCents: 0,
  lostCents: 0,
  driveMinutes: 0,
  driveMiles: 0,
  lateMinutes: 0,
  stops: 0,
  moved: 0,
};
