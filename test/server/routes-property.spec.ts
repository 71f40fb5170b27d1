import { randomUUID } from 'node:crypto';
import fc from 'fast-check';
import type { Response } from 'supertest';
import { mayFollow, type CallState } from '@shared/domain/call-state';
import { MINUTE_MS } from '@shared/domain/instant';
import { change, select } from '../../server/db/sql';
import { StormRecord } from '../../server/storms/storm-record';
import { startPlanner } from '../support/planner';
import { aTechnician, aWaitingCall } from '../support/routes';
import { startServer, type TestPerson, type TestServer } from '../support/server';

/** How long to try for; what was tried by then counts. */
const BUDGET_MS = 25_000;
const CALLS = 6;

let planner: Awaited<ReturnType<typeof startPlanner>>;
let server: TestServer;
let desk: TestPerson[];
let vans: Awaited<ReturnType<typeof aTechnician>>[];
beforeAll(async () => {
  planner = await startPlanner();
  server = await startServer({ context: { planner: planner.planner } });
  desk = [
    await server.signIn('dispatcher', 'Mara Quill'),
    await server.signIn('dispatcher', 'Jonas Fenwick'),
  ];
  vans = [
    await aTechnician(server, 'Theo Larkspur', 100),
    await aTechnician(server, 'Ilse Rowan', 100),
    await aTechnician(server, 'Bram Hollis', 100),
  ];
});
afterAll(async () => {
  await server.close();
  await planner.close();
});

const BY_DESK = [
  'addStop',
  'moveStop',
  'lockStop',
  'pullStop',
  'publishPlan',
  'concludeCall',
] as const;
const BY_VAN = [
  'acceptStop',
  'declineStop',
  'startTravel',
  'tellEta',
  'arrive',
  'finishStop',
] as const;
type Verb = (typeof BY_DESK)[number] | (typeof BY_VAN)[number];

interface Step {
  readonly who: number;
  /** Null: whatever comes next for the technician's first stop. */
  readonly verb: Verb | null;
  readonly target: number;
  readonly van: number;
  readonly place: number;
  readonly isStale: boolean;
  /** Whether it is sent together with the step after it. */
  readonly together: boolean;
}

const nat = (max: number) => fc.nat({ max });
const rest = {
  target: nat(1000),
  van: nat(2),
  place: nat(5),
  isStale: fc.integer({ min: 0, max: 9 }).map((n) => n === 0),
  together: fc.integer({ min: 0, max: 3 }).map((n) => n === 0),
};
const steps: fc.Arbitrary<Step[]> = fc.array(
  fc.oneof(
    {
      weight: 3,
      arbitrary: fc.record<Step>({ who: nat(1), verb: fc.constantFrom(...BY_DESK), ...rest }),
    },
    { weight: 4, arbitrary: fc.record<Step>({ who: nat(2), verb: fc.constant(null), ...rest }) },
    {
      weight: 1,
      arbitrary: fc.record<Step>({ who: nat(2), verb: fc.constantFrom(...BY_VAN), ...rest }),
    },
  ),
  { minLength: 20, maxLength: 60, size: 'max' },
);

interface StopRow {
  id: string;
  technician_id: string;
  call_id: string;
  state: string;
  position: number;
  version: number;
}
interface CallRow {
  id: string;
  state: CallState;
  version: number;
}
interface Picture {
  readonly stops: readonly StopRow[];
  readonly calls: readonly CallRow[];
}

const picture = async (): Promise<Picture> => ({
  stops: await select<StopRow>(
    server.sequelize,
    'SELECT id, technician_id, call_id, state, position, version FROM stops ORDER BY technician_id, position, id',
  ),
  calls: await select<CallRow>(
    server.sequelize,
    'SELECT id, state, version FROM calls ORDER BY number',
  ),
});

const ACTIVE = ['planned', 'offered', 'accepted', 'travelling', 'on-site'];
const FIRM = ['accepted', 'travelling', 'on-site'];
const NEXT: Readonly<Record<string, Verb>> = {
  offered: 'acceptStop',
  accepted: 'startTravel',
  travelling: 'arrive',
  'on-site': 'finishStop',
};
const pick = <T>(list: readonly T[], n: number): T | undefined => list[n % list.length];

const step = (who: number, verb: Verb | null, told: Partial<Step> = {}): Step => ({
  who,
  verb,
  target: 0,
  van: 0,
  place: 0,
  isStale: false,
  together: false,
  ...told,
});

/** A night on which every command works once, so that none goes untried. */
const WHOLE_NIGHT: Step[] = [
  step(0, 'addStop'),
  step(1, 'moveStop', { target: 10, van: 1 }),
  step(1, 'declineStop'),
  step(0, 'publishPlan'),
  step(0, null),
  step(0, null),
  step(0, 'tellEta', { place: 3 }),
  step(0, null),
  step(1, 'lockStop', { target: 11, place: 5 }),
  step(0, null),
  step(0, 'pullStop', { target: 10 }),
  step(0, 'concludeCall', { target: 5 }),
];

/** Sends a step against what is there now; null when there is nothing that it could be about. */
async function send(step: Step, now: Picture): Promise<{ verb: Verb; reply: Response } | null> {
  const { verb, target, van, place } = step;
  const commandId = randomUUID();
  const seen = (row: { version: number }): number =>
    step.isStale ? Math.max(0, row.version - 1) : row.version;
  const technicianId = vans[van]?.technicianId ?? '';
  if (verb === null || (BY_VAN as readonly Verb[]).includes(verb)) {
    const person = vans[step.who];
    const own = now.stops.find(
      (one) => one.technician_id === person?.technicianId && ACTIVE.includes(one.state),
    );
    // Now and then somebody else's stop, or one that is over.
    const stop = verb === null || target % 2 === 0 ? own : pick(now.stops, target);
    const does = verb ?? NEXT[stop?.state ?? ''];
    if (!person || !stop || !does) return null;
    const bodies: Partial<Record<Verb, object>> = {
      declineStop: { reason: 'other', note: '' },
      startTravel: { from: null },
      tellEta: { etaAt: server.now() + (place + 1) * 20 * MINUTE_MS },
      finishStop: {
        outcome: pick(['restored', 'no-access', 'parts-on-order', 'not-repairable'], target),
        note: '',
        partsUsed: [],
      },
    };
    const reply = await person.call(does, {
      params: { stopId: stop.id },
      body: { commandId, version: seen(stop), ...bodies[does] },
    });
    return { verb: does, reply };
  }

  const person = desk[step.who];
  if (!person) return null;
  const byDesk = async (params: Record<string, string>, body: object) => ({
    verb,
    reply: await person.call(verb, { params, body: { commandId, ...body } }),
  });
  if (verb === 'publishPlan') {
    const planId = randomUUID();
    const proposed = await person.call('proposePlan', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), planId, seconds: 0.05 },
    });
    if (proposed.status !== 201) return { verb, reply: proposed };
    return byDesk({ planId }, { version: 0 });
  }
  if (verb === 'addStop' || verb === 'concludeCall') {
    const wanted = now.calls.filter(({ state }) => verb === 'concludeCall' || state === 'waiting');
    // Settling by phone is rare, or nothing would be left to drive to.
    const call = pick(wanted, target);
    if (!call || (verb === 'concludeCall' && target % 5 > 0)) return null;
    return byDesk(
      { callId: call.id },
      verb === 'addStop'
        ? { version: seen(call), stopId: randomUUID(), technicianId, position: place }
        : { version: seen(call), outcome: 'running-again', reason: 'rang back' },
    );
  }
  // Now and then one that is over, which has to be refused.
  const stops = now.stops.filter(({ state }) => target % 10 === 0 || ACTIVE.includes(state));
  const stop = pick(stops, target);
  if (!stop) return null;
  const bodies = {
    moveStop: { technicianId, position: place },
    lockStop: { locked: place > 2 },
    pullStop: { reason: 'a good one' },
  };
  return byDesk(
    { stopId: stop.id },
    { version: seen(stop), ...bodies[verb as keyof typeof bodies] },
  );
}

const none = async (what: string, sql: string): Promise<void> => {
  expect({ what, found: await select(server.sequelize, sql) }).toEqual({ what, found: [] });
};
const among = (states: readonly string[]): string => states.map((state) => `'${state}'`).join(',');

async function checkRows(): Promise<void> {
  await none(
    'two technicians hold one call',
    `SELECT call_id FROM stops WHERE state IN (${among(ACTIVE)}) GROUP BY call_id HAVING COUNT(*) > 1`,
  );
  await none(
    'a technician in two places',
    `SELECT technician_id FROM stops WHERE state IN ('travelling','on-site')
      GROUP BY technician_id HAVING COUNT(*) > 1`,
  );
  await none(
    'a stop and its call disagree',
    `SELECT s.id, s.state AS stop, c.state AS \`call\` FROM stops s JOIN calls c ON c.id = s.call_id
      WHERE s.state IN (${among(ACTIVE)}) AND c.state <> s.state`,
  );
  await none(
    'a call on a route without a stop',
    `SELECT c.id FROM calls c WHERE c.state IN (${among(ACTIVE)}) AND NOT EXISTS
      (SELECT 1 FROM stops s WHERE s.call_id = c.id AND s.state IN (${among(ACTIVE)}))`,
  );
  await none(
    'a gap in a route',
    `SELECT technician_id FROM stops WHERE state IN (${among(ACTIVE)}) GROUP BY technician_id
      HAVING COUNT(*) <> MAX(position) + 1 OR COUNT(DISTINCT position) <> COUNT(*)`,
  );
  await none(
    'an offer that is not the first stop, or a first stop that is not offered',
    `SELECT id, state, position FROM stops WHERE (state = 'planned' AND position = 0)
      OR (state IN (${among(['offered', ...FIRM])}) AND position > 0)`,
  );
  await none(
    'two plans published from the same routes',
    "SELECT base_epoch FROM plans WHERE state = 'published' GROUP BY base_epoch HAVING COUNT(*) > 1",
  );
}

/** Every call's history is a path of the state machine that ends where the call is, in time's order. */
async function checkHistories(): Promise<void> {
  const lines = await select<{
    call_id: string;
    at: Date;
    from_state: CallState | null;
    to_state: CallState;
  }>(
    server.sequelize,
    'SELECT call_id, at, from_state, to_state FROM call_changes ORDER BY call_id, n',
  );
  const { calls } = await picture();
  for (const call of calls) {
    const path = lines.filter(({ call_id }) => call_id === call.id);
    let state: CallState | null = null;
    let at = 0;
    for (const line of path) {
      expect(line.from_state).toBe(state);
      if (state !== null && !mayFollow(state, line.to_state))
        throw new Error(`${state} was followed by ${line.to_state}`);
      expect(line.at.getTime()).toBeGreaterThanOrEqual(at);
      state = line.to_state;
      at = line.at.getTime();
    }
    expect(state).toBe(call.state);
  }
}

/** A firm stop stays where it is, or a person with a name ended it and its technician was told. */
async function checkFirmStops(
  before: Picture,
  after: Picture,
  auditedBefore: number,
): Promise<void> {
  for (const was of before.stops.filter(({ state }) => FIRM.includes(state))) {
    const is = after.stops.find(({ id }) => id === was.id);
    if (is && FIRM.includes(is.state)) {
      expect(is).toMatchObject({ technician_id: was.technician_id, position: was.position });
      continue;
    }
    expect(is?.technician_id).toBe(was.technician_id);
    const named = await select(
      server.sequelize,
      `SELECT n FROM audit_entries WHERE n > ? AND user_id IS NOT NULL AND entity_id IN (?, ?)
        AND command IN ('pullStop','declineStop','finishStop','concludeCall')`,
      [auditedBefore, was.id, was.call_id],
    );
    expect(named.length).toBeGreaterThan(0);
    const told = await select(
      server.sequelize,
      'SELECT n FROM feed_changes WHERE stream = ? AND `change` LIKE ?',
      [`technician:${was.technician_id}`, `{"kind":"gone","stopId":"${was.id}"%`],
    );
    expect(told.length).toBeGreaterThan(0);
  }
}

async function audited(): Promise<number> {
  const [last] = await select<{ n: number | null }>(
    server.sequelize,
    'SELECT MAX(n) AS n FROM audit_entries',
  );
  return Number(last?.n ?? 0);
}

/** A new storm night with the same people, and calls that wait for them. */
async function newNight(): Promise<void> {
  for (const table of [
    'messages',
    'stops',
    'plans',
    'call_changes',
    'remarks',
    'compartments',
    'cold_units',
    'calls',
    'households',
    'feed_changes',
    'feeds',
    'audit_entries',
    'audit_chains',
    'applied_commands',
  ])
    await change(server.sequelize, `DELETE FROM ${table}`, []);
  await StormRecord.update({ callsTaken: 0, planEpoch: 0 }, { where: {} });
  for (let i = 0; i < CALLS; i++)
    await aWaitingCall(server, desk[0]!, {
      address: {
        text: `${String(i)} North Rd`,
        unitNo: '',
        lonLat: [-47.7, 36.4 + i / 100],
        kind: 'rooftop',
      },
    });
}

describe('any sequence of commands by two dispatchers and three technicians', () => {
  const worked = new Map<string, number>();
  let nights = 0;

  it('keeps one technician a call, one place a technician, legal steps, and firm stops in place', async () => {
    await fc.assert(
      fc.asyncProperty(steps, async (sequence) => {
        await newNight();
        nights += 1;
        for (let i = 0; i < sequence.length; i++) {
          const now = sequence.slice(i, i + (sequence[i]?.together ? 2 : 1));
          i += now.length - 1;
          server.setNow(server.now() + 3 * MINUTE_MS);
          const before = await picture();
          const auditedBefore = await audited();
          const sent = await Promise.all(now.map((step) => send(step, before)));
          const after = await picture();
          for (const one of sent) {
            if (!one) continue;
            // Neither an error of ours nor a refusal that nobody foresaw.
            // 429: somebody proposes more often than one person may.
            expect([200, 201, 404, 409, 429]).toContain(one.reply.status);
            const outcome = one.reply.status < 300 ? one.verb : 'refused';
            worked.set(outcome, (worked.get(outcome) ?? 0) + 1);
          }
          if (sent.every((one) => !one || one.reply.status > 299)) expect(after).toEqual(before);
          await checkRows();
          await checkFirmStops(before, after, auditedBefore);
        }
        await checkHistories();
      }),
      { numRuns: 60, interruptAfterTimeLimit: BUDGET_MS, examples: [[WHOLE_NIGHT]] },
    );
  });

  it('has tried every command with success, and refusals too', () => {
    const untried = [...BY_DESK, ...BY_VAN, 'refused'].filter((verb) => !worked.has(verb));
    expect({ untried, nights: nights > 1 }).toEqual({ untried: [], nights: true });
  });
});
