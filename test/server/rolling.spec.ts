import type { Settings } from '@shared/contract/office';
import type { PlanDto } from '@shared/contract/routes';
import { randomUUID } from 'node:crypto';
import { MINUTE_MS } from '@shared/domain/instant';
import { change, select } from '../../server/db/sql';
import { brokenInvariants } from '../../server/invariants/checks';
import { boardPicture } from '../../server/storms/storm-routes';
import { AUTOMATIC, newWatch, rollRoutes, type Rolled } from '../../server/routes/roll-routes';
import { holdTurn, takeTurn } from '../../server/routes/rolling-lease';
import { PlanRecord } from '../../server/routes/stop-record';
import type { Job } from '../../server/commands/run-command';
import { startPlanner } from '../support/planner';
import { aTechnician, aWaitingCall, dayOf, put, stateOf } from '../support/routes';
import { startServer, type TestPerson, type TestServer } from '../support/server';

jest.setTimeout(30_000);
/** Three stops are planned in far less. */
const SEARCH_SECONDS = 0.02;

let planner: Awaited<ReturnType<typeof startPlanner>>;
let server: TestServer;
let ruth: TestPerson;
let theo: Awaited<ReturnType<typeof aTechnician>>;
let watch: ReturnType<typeof newWatch>;
beforeAll(async () => {
  planner = await startPlanner();
  server = await startServer({ context: { planner: planner.planner } });
}, 60_000);
afterAll(async () => {
  await server.close();
  await planner.close();
});
beforeEach(async () => {
  await server.reset();
  ruth = await server.signIn('manager', 'Ruth Calder');
  theo = await aTechnician(server, 'Theo Larkspur');
  watch = newWatch(SEARCH_SECONDS);
});

async function set(changes: Partial<Settings>): Promise<void> {
  const { version } = (await ruth.call('settings')).body as Settings;
  const reply = await ruth.call('changeSettings', {
    body: { commandId: randomUUID(), version, ...changes },
  });
  if (reply.status !== 200) throw new Error(reply.text);
}
/** Looks until the facts have settled and something has come of them. */
async function rolls(by = watch): Promise<Rolled> {
  const first = await rollRoutes(server.context, by);
  return first === 'settling' ? rollRoutes(server.context, by) : first;
}
const north = (km: number) =>
  aWaitingCall(server, ruth, {
    address: {
      text: `${String(km)} North Rd`,
      unitNo: '',
      lonLat: [-47.7, 36.4 + km / 111.2],
      kind: 'rooftop',
    },
  });
const plans = async (): Promise<Pick<PlanRecord, 'state' | 'proposedBy'>[]> =>
  (await PlanRecord.findAll({ order: [['proposedAt', 'ASC']] })).map(({ state, proposedBy }) => ({
    state,
    proposedBy,
  }));
const bodyOf = async (): Promise<PlanDto> =>
  JSON.parse((await PlanRecord.findOne({ order: [['version', 'DESC']] }))?.body ?? '{}') as PlanDto;

describe('routes that go on by themselves', () => {
  it('do nothing until the manager wants it', async () => {
    await north(1);
    expect(await rolls()).toBe('off');
    expect(await plans()).toEqual([]);
  });

  it('are proposed after each event once it has settled, and looked at once', async () => {
    await set({ automaticRoutes: 'propose' });
    expect(await rolls()).toBe('no-gain');
    const call = await north(1);
    expect(await rollRoutes(server.context, watch)).toBe('settling');
    expect(await rollRoutes(server.context, watch)).toBe('proposed');
    expect(await rollRoutes(server.context, watch)).toBe('nothing-new');
    expect(await plans()).toEqual([{ state: 'proposed', proposedBy: AUTOMATIC }]);
    expect((await bodyOf()).automatic).toEqual({
      because: 'a call came in or changed',
      heldBack: null,
    });
    expect(await stateOf(server, call.id)).toBe('waiting');
    // Time alone brings another look, which finds the same routes and leaves the proposal alone.
    server.setNow(server.now() + 6 * MINUTE_MS);
    expect(await rolls()).toBe('same-proposal');
  });

  it('are published by the command of a person, as the automatic mode, and then rest', async () => {
    await set({ automaticRoutes: 'publish' });
    const call = await north(1);
    expect(await rolls()).toBe('published');
    expect(await stateOf(server, call.id)).toBe('offered');
    expect((await dayOf(theo)).stops).toHaveLength(1);
    // Who opens the board later is told as well.
    const { automaticDone } = await boardPicture(server.context, server.stormId);
    expect(automaticDone).toMatchObject({ because: expect.any(String), moved: 0 });
    expect(await rolls()).toBe('no-gain');
    expect(await rolls()).toBe('nothing-new');
    const entries = await select<{ actor: string; command: string; summary: string }>(
      server.sequelize,
      "SELECT actor, command, summary FROM audit_entries WHERE entity = 'plan' ORDER BY n",
    );
    expect(new Set(entries.map(({ actor, command }) => `${actor}: ${command}`))).toEqual(
      new Set([`${AUTOMATIC}: publishPlan`]),
    );
    expect(entries.at(-1)?.summary).toMatch(/^automatic, since .*: gains \$\d+$/);
    const broken = (await brokenInvariants(server.sequelize)).filter(
      // No outbox works here, so no text leaves.
      ({ invariant }) => !invariant.startsWith('no-text-is-forgotten'),
    );
    expect(broken).toEqual([]);
  });

  it('leave undone what gains less than the manager asks for', async () => {
    await set({ automaticRoutes: 'publish', automaticGainDollars: 10_000 });
    await north(1);
    expect(await rolls()).toBe('no-gain');
    expect(await plans()).toEqual([]);
  });

  it.each([
    { limit: 'begins within the minutes that are kept', told: { automaticKeepMinutes: 480 } },
    { limit: 'belongs to somebody whose changes are used up', told: { changesPerHour: 0 } },
  ])('move no stop that $limit', async ({ told }) => {
    // To and fro, and no price on other times: any search would turn the order round.
    for (const km of [9, 1, 8]) await put(ruth, await north(km), theo.technicianId, 100);
    const before = (await dayOf(theo)).stops.map(({ stop }) => stop.callId);
    const added = await north(2);
    await set({
      automaticRoutes: 'publish',
      automaticKeepMinutes: 0,
      promisedAheadMinutes: 720,
      otherTimeDollars: 0,
      ...told,
    });
    expect(await rolls()).toBe('published');
    const after = (await dayOf(theo)).stops.map(({ stop }) => stop.callId);
    expect(after).toEqual([...before, added.id]);
  });

  it('change what they may: without these limits the same routes are turned round', async () => {
    for (const km of [9, 1, 8]) await put(ruth, await north(km), theo.technicianId, 100);
    const before = (await dayOf(theo)).stops.map(({ stop }) => stop.callId);
    await set({
      automaticRoutes: 'publish',
      automaticKeepMinutes: 0,
      automaticGainDollars: 1,
      otherTimeDollars: 0,
    });
    expect(await rolls()).toBe('published');
    const after = (await dayOf(theo)).stops.map(({ stop }) => stop.callId);
    expect(after).not.toEqual(before);
    expect([...after].sort()).toEqual([...before].sort());
    // What it changed counts against this hour's limit.
    const [counted] = await select<{ changes: number }>(
      server.sequelize,
      'SELECT SUM(changes) AS changes FROM route_changes',
    );
    expect(Number(counted?.changes)).toBeGreaterThan(0);
  });

  it('leave a proposal alone that a person is looking at', async () => {
    await set({ automaticRoutes: 'publish' });
    await north(1);
    const reply = await ruth.call('proposePlan', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), planId: randomUUID(), seconds: 0.05 },
    });
    expect(reply.status).toBe(201);
    expect(await rolls()).toBe('being-looked-at');
    server.setNow(server.now() + 4 * MINUTE_MS);
    expect(await rolls()).toBe('published');
  });

  it('go on at one server alone, of however many look at the same moment', async () => {
    await set({ automaticRoutes: 'publish' });
    await north(1);
    const watches = [1, 2, 3].map(() => newWatch(SEARCH_SECONDS));
    for (const one of watches) await rollRoutes(server.context, one);
    const rolled = await Promise.all(watches.map((one) => rollRoutes(server.context, one)));
    expect(rolled.filter((one) => one === 'published')).toHaveLength(1);
    expect(await plans()).toEqual([{ state: 'published', proposedBy: AUTOMATIC }]);
  });

  it('are left alone by a server that slept over its turn', async () => {
    const first = await takeTurn(server.sequelize, server.stormId, 'a');
    expect(await takeTurn(server.sequelize, server.stormId, 'a')).toBeNull();
    await change(
      server.sequelize,
      'UPDATE rolling_plans SET held_until = NOW(3) - INTERVAL 1 SECOND',
      [],
    );
    const second = await takeTurn(server.sequelize, server.stormId, 'a');
    expect(second).not.toBeNull();
    const hold = (holder: string) =>
      server.sequelize.transaction((tx) =>
        holdTurn({ sequelize: server.sequelize, tx } as unknown as Job, server.stormId, holder),
      );
    await expect(hold(first!)).rejects.toMatchObject({ code: 'plan-overtaken' });
    await expect(hold(second!)).resolves.toBeUndefined();
  });

  it('follow a technician who stops working and one who comes', async () => {
    await set({ automaticRoutes: 'publish' });
    const call = await north(1);
    expect(await rolls()).toBe('published');
    const ilse = await aTechnician(server, 'Ilse Rowan');
    const { version } = (await dayOf(theo)).technician;
    await ruth.call('changeTechnician', {
      params: { technicianId: theo.technicianId },
      body: { commandId: randomUUID(), version, active: false },
    });
    expect(await stateOf(server, call.id)).toBe('waiting');
    expect(await rolls()).toBe('published');
    expect((await dayOf(ilse)).stops.map(({ stop }) => stop.callId)).toEqual([call.id]);
  });
});
