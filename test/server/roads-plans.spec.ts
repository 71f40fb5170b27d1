import { randomUUID } from 'node:crypto';
import type { PlanDto } from '@shared/contract/routes';
import { MINUTE_MS } from '@shared/domain/instant';
import { USUAL_FACTORS, type RoadConditions } from '@shared/domain/roads/conditions';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { wholeGrid } from '../support/made-roads';
import { startPlanner } from '../support/planner';
import { openMadeRoads } from '../support/roads';
import { act, aStop, aTechnician, aWaitingCall } from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let planner: Awaited<ReturnType<typeof startPlanner>>;
let made: Awaited<ReturnType<typeof openMadeRoads>>;
let server: TestServer;
let mara: TestPerson;
let theo: Awaited<ReturnType<typeof aTechnician>>;
beforeAll(async () => {
  planner = await startPlanner();
  made = await openMadeRoads(wholeGrid(60));
  server = await startServer({
    context: { planner: planner.planner, roads: made.roads },
  });
});
afterAll(async () => {
  await server.close();
  await planner.close();
  made.close();
});
beforeEach(async () => {
  await made.roads.follow({ roads: [], factors: USUAL_FACTORS });
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  theo = await aTechnician(server, 'Theo Larkspur');
});

/** The technicians start at the city's south-west corner. */
const at = (x: number, y: number): LonLat => [-47.7 + x * 0.0012, 36.4 + y * 0.0009];
const address = (place: LonLat) => ({
  text: 'a door',
  unitNo: '',
  lonLat: [...place] as [number, number],
  kind: 'pin' as const,
});
const aCallAt = (place: LonLat) => aWaitingCall(server, mara, { address: address(place) });

/** Water round everything beyond the fortieth street to the north-east. */
const flooded: RoadConditions = {
  roads: [
    {
      id: 'moat',
      kind: 'flooded',
      from: 0,
      until: null,
      shape: {
        type: 'area',
        ring: [
          at(39.4, 39.4),
          at(60, 39.4),
          at(60, 39.6),
          at(39.6, 39.6),
          at(39.6, 60),
          at(39.4, 60),
        ],
      },
    },
  ],
  factors: USUAL_FACTORS,
};

async function proposed(): Promise<PlanDto> {
  const reply = await mara.call('proposePlan', {
    params: { stormId: server.stormId },
    body: { commandId: randomUUID(), planId: randomUUID(), seconds: 0.05 },
  });
  if (reply.status !== 201) throw new Error(reply.text);
  return reply.body as PlanDto;
}

describe('plans along roads', () => {
  it('count the drives that the roads take, and say where they come from', async () => {
    const call = await aCallAt(at(30, 20));
    const plan = await proposed();
    expect(plan.drivesFrom).toBe('Roads of Made County');
    const [stop] = plan.routes.flatMap((route) => route.stops);
    expect(stop?.callId).toBe(call.id);
    const { seconds, metres } = await made.roads.matrix([at(0, 0), at(30, 20)]);
    expect((stop!.arriveAt - NIGHT) / 1000).toBe(Math.ceil(seconds[1]!) + 120);
    expect(plan.figures.driveMiles).toBeCloseTo((metres[1]! + metres[2]!) / 1609.344, 1);
  });

  it('leave out with its reason what no open road leads to, and plan the rest', async () => {
    const near = await aCallAt(at(10, 10));
    const beyond = await aCallAt(at(50, 50));
    expect((await proposed()).unplanned).toEqual([]);
    await made.roads.follow(flooded);
    const plan = await proposed();
    expect(plan.routes.flatMap(({ stops }) => stops.map(({ callId }) => callId))).toEqual([
      near.id,
    ]);
    expect(plan.unplanned).toEqual([
      {
        callId: beyond.id,
        reason: 'cut-off',
        words: 'No open road leads there and back for those who may go.',
      },
    ]);
  });

  it('keep an accepted stop that no open road leads to, with times that a person can read', async () => {
    const stop = await aStop(server, mara, theo.technicianId, { address: address(at(50, 50)) });
    const accepted = await act(theo, 'acceptStop', stop);
    expect(accepted.status).toBe(200);
    const after = await aCallAt(at(10, 10));
    await made.roads.follow(flooded);
    const plan = await proposed();
    const [kept, next] = plan.routes.flatMap((route) => route.stops);
    expect([kept?.callId, kept?.firm, next?.callId]).toEqual([stop.callId, true, after.id]);
    for (const { arriveAt } of [kept!, next!])
      expect(arriveAt - NIGHT).toBeLessThan(6 * 60 * MINUTE_MS);
    expect(Number.isFinite(plan.figures.driveMinutes)).toBe(true);
  });
});
