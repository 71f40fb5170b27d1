import { randomUUID } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';
import type { QueryOptions, Sequelize } from 'sequelize';
import type { CallDetail, TakeCall } from '@shared/contract/calls';
import type { PlanDto } from '@shared/contract/routes';
import { MINUTE_MS } from '@shared/domain/instant';
import { connect } from '../../server/db/connect';
import { change, select } from '../../server/db/sql';
import { inTransaction } from '../../server/db/transaction';
import { brokenInvariants } from '../../server/invariants/checks';
import { PlanRecord, StopRecord } from '../../server/routes/stop-record';
import { aCall, aPhone } from '../support/calls';
import { testDatabase } from '../support/database';
import { type OtherServer, type OtherServers, otherServers } from '../support/other-servers';
import { act, aStop, aTechnician, aWaitingCall, put } from '../support/routes';
import { browser, NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let others: OtherServers;
/** Another way to the same database, for what the test itself does to it. */
let side: Sequelize;
beforeAll(async () => {
  side = connect(testDatabase());
  // The last to connect is the one that the records speak through.
  server = await startServer();
  others = await otherServers();
});
afterAll(async () => {
  await others.close();
  await side.close();
  await server.close();
});
beforeEach(() => server.reset());

const invariants = async () =>
  (await brokenInvariants(server.sequelize)).filter(
    // No outbox works here, so no text leaves.
    ({ invariant }) => !invariant.startsWith('no-text-is-forgotten'),
  );
const at = (other: OtherServer, person: TestPerson): TestPerson => ({
  ...person,
  ...browser(other.url, person.cookies),
});
const count = async (sql: string, values: unknown[] = []): Promise<number> =>
  Number((await select<{ n: number }>(server.sequelize, sql, values))[0]?.n);

describe('connections that are killed under load', () => {
  /** Times that whatever is connected is killed. */
  const KILLINGS = 25;

  it('are answered by "try again", heal by themselves, and lose and double nothing', async () => {
    const other = await others.start({ now: NIGHT, isQuiet: true });
    const desks = await Promise.all(
      ['Mara Quill', 'Jonas Fenwick', 'Ines Calder', 'Odo Marsh'].map(async (name) =>
        at(other, await server.signIn('dispatcher', name)),
      ),
    );
    const acknowledged: string[] = [];
    const refused: { status: number; retryAfter: string | undefined; type: string }[] = [];
    let killing = true;
    const killer = (async () => {
      for (let times = 0; times < KILLINGS;) {
        if ((await killAll()) > 0) times += 1;
        await pause(100);
      }
      killing = false;
    })();

    /** As the client does: whatever is not an answer is asked again, with the same command id. */
    async function takeUntilDone(desk: TestPerson, body: TakeCall): Promise<void> {
      for (;;) {
        const reply = await desk
          .call('takeCall', { params: { stormId: server.stormId }, body })
          .catch(() => null);
        if (reply?.status === 201) {
          acknowledged.push((reply.body as CallDetail).row.id);
          return;
        }
        if (reply)
          refused.push({
            status: reply.status,
            retryAfter: reply.get('Retry-After'),
            type: (reply.body as { type: string }).type,
          });
        await pause(30);
      }
    }
    await Promise.all([
      killer,
      ...desks.map(async (desk) => {
        while (killing) await takeUntilDone(desk, aCall(NIGHT, { mayText: false }));
      }),
    ]);

    // A failure that nobody handled would have ended the process.
    expect(other.isAlive()).toBe(true);
    expect(refused.length).toBeGreaterThan(0);
    expect(new Set(refused.map((one) => JSON.stringify(one)))).toEqual(
      new Set([JSON.stringify({ status: 503, retryAfter: '2', type: '/problems/busy' })]),
    );
    // Healed: the next requests go through at once, in parallel.
    const after = await Promise.all(
      desks.map((desk) =>
        desk.call('takeCall', { params: { stormId: server.stormId }, body: aCall(NIGHT) }),
      ),
    );
    expect(after.map((reply) => reply.status)).toEqual([201, 201, 201, 201]);
    expect(new Set(acknowledged).size).toBe(acknowledged.length);
    expect(await count('SELECT COUNT(*) AS n FROM calls WHERE id IN (?)', [acknowledged])).toBe(
      acknowledged.length,
    );
    expect(await count('SELECT COUNT(*) AS n FROM calls')).toBe(acknowledged.length + 4);
    expect(await invariants()).toEqual([]);
    await other.kill();
  });

  /** Every connection to this test's database but the one that does it. @returns how many */
  async function killAll(): Promise<number> {
    const rows = await select<{ id: number }>(
      side,
      `SELECT ID AS id FROM information_schema.processlist
        WHERE db = DATABASE() AND ID <> CONNECTION_ID()`,
    );
    for (const { id } of rows)
      try {
        await change(side, `KILL CONNECTION ${String(Number(id))}`, []);
      } catch (error) {
        // It ended by itself meanwhile.
        expect(String(error)).toMatch(/Unknown thread/);
      }
    return rows.length;
  }
});

describe('two that lock the same rows in opposite orders', () => {
  it('both get through 100 times, each as a whole', async () => {
    for (const who of ['a', 'b'])
      await change(
        side,
        'INSERT INTO sign_in_attempts (who, failures, last_at) VALUES (?, 0, NOW(3))',
        [who],
      );
    let attempts = 0;
    const addTo = async (...order: string[]): Promise<void> => {
      for (let i = 0; i < 100; i++)
        await inTransaction(server.sequelize, async (tx) => {
          attempts += 1;
          for (const who of order) {
            const sql = 'UPDATE sign_in_attempts SET failures = failures + 1 WHERE who = ?';
            await change(server.sequelize, sql, [who], tx);
          }
        });
    };
    await Promise.all([addTo('a', 'b'), addTo('b', 'a')]);
    for (const who of ['a', 'b'])
      expect(await count('SELECT failures AS n FROM sign_in_attempts WHERE who = ?', [who])).toBe(
        200,
      );
    // Had they never met, this would show nothing.
    expect(attempts).toBeGreaterThan(200);
  });

  it('are told to try again when a row stays locked, and nothing has changed', async () => {
    const mara = await server.signIn('dispatcher');
    const call = await aWaitingCall(server, mara);
    const tx = await side.transaction();
    await select(side, 'SELECT id FROM calls WHERE id = ? FOR UPDATE', [call.id], tx);
    const body = { commandId: randomUUID(), text: 'late' };
    const waited = await mara.call('addRemark', { params: { callId: call.id }, body });
    expect([waited.status, waited.get('Retry-After')]).toEqual([503, '2']);
    await tx.rollback();
    expect(await count('SELECT COUNT(*) AS n FROM remarks')).toBe(0);
    const again = await mara.call('addRemark', { params: { callId: call.id }, body });
    expect([again.status, await count('SELECT COUNT(*) AS n FROM remarks')]).toEqual([200, 1]);
  });
});

describe('commands that meet on the same routes from opposite sides', () => {
  const ROUNDS = 12;

  it('never wait for each other in a circle, and leave the routes whole', async () => {
    const mara = await server.signIn('dispatcher', 'Mara Quill');
    const jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
    const theo = await aTechnician(server, 'Theo Larkspur');
    const wren = await aTechnician(server, 'Wren Ashdown');
    const circles = countErrors(server.sequelize, 1213);
    for (let round = 0; round < ROUNDS; round++) {
      // Its claim has lapsed when the next begins, or the dispatchers would keep each other off.
      server.setNow(NIGHT + round * 15 * MINUTE_MS);
      const mine = await aStop(server, mara, theo.technicianId);
      const yours = await aStop(server, jonas, wren.technicianId);
      const third = await aWaitingCall(server, mara);
      const to = (technicianId: string) => ({ technicianId, position: 0 });
      const replies = await Promise.all([
        act(mara, 'moveStop', mine, to(wren.technicianId)),
        act(jonas, 'moveStop', yours, to(theo.technicianId)),
        put(jonas, third, theo.technicianId),
        // Texts the customer, and takes the stop off its route.
        mara.call('concludeCall', {
          params: { callId: mine.callId },
          body: {
            commandId: randomUUID(),
            version: await callVersion(mine.callId),
            outcome: 'running-again',
            reason: '',
          },
        }),
        act(theo, 'acceptStop', mine),
      ]);
      // Each either won or was told that things had changed; none failed.
      for (const reply of replies) expect([200, 201, 404, 409]).toContain(reply.status);
      await settle(jonas, [mine.callId, yours.callId, third.id]);
    }
    expect(circles.stop()).toBe(0);
    expect(await invariants()).toEqual([]);
  });

  const callVersion = (id: string) => count('SELECT version AS n FROM calls WHERE id = ?', [id]);

  /** So that the routes do not grow, and each round is like the one before. */
  async function settle(desk: TestPerson, callIds: readonly string[]): Promise<void> {
    for (const callId of callIds)
      await desk.call('concludeCall', {
        params: { callId },
        body: {
          commandId: randomUUID(),
          version: await callVersion(callId),
          outcome: 'cancelled',
          reason: '',
        },
      });
  }

  function countErrors(sequelize: Sequelize, errno: number): { stop(): number } {
    let seen = 0;
    const query = sequelize.query.bind(sequelize) as (...args: unknown[]) => Promise<unknown>;
    const listening = async (...args: unknown[]): Promise<unknown> => {
      try {
        return await query(...args);
      } catch (error) {
        if ((error as { parent?: { errno?: number } }).parent?.errno === errno) seen += 1;
        throw error;
      }
    };
    sequelize.query = listening as Sequelize['query'];
    return {
      stop: () => {
        sequelize.query = query as Sequelize['query'];
        return seen;
      },
    };
  }
});

/**
 * After SQLite's own tests: the process dies at one step after another until the command is through
 * (sqlite.org/testing.html). Every step takes minutes; a run of the tests takes each fifth one and
 * the last three, and `THAWLINE_EVERY_STEP=1` takes them all.
 */
describe('a server that is killed in the middle of a command', () => {
  const STRIDE = process.env['THAWLINE_EVERY_STEP'] === '1' ? 1 : 5;
  const stepsOf = (statements: number): number[] =>
    Array.from({ length: statements + 1 }, (_, step) => step).filter(
      (step) => step % STRIDE === 0 || step > statements - 3,
    );

  /** How many statements one go of the command's transaction is, with BEGIN and COMMIT. */
  async function statementsOf(work: () => Promise<unknown>): Promise<number> {
    const { sequelize } = server;
    let statements = 0;
    const query = sequelize.query.bind(sequelize) as (...args: unknown[]) => Promise<unknown>;
    const counting = async (sql: unknown, options?: QueryOptions): Promise<unknown> => {
      if (options?.transaction) statements += 1;
      return query(sql, options);
    };
    sequelize.query = counting as Sequelize['query'];
    await work();
    sequelize.query = query as Sequelize['query'];
    return statements;
  }

  /**
   * Sends a command to servers that die at one step after another, and then again to one that lives.
   *
   * @param prepare gives the command, in a storm of its own
   */
  async function dieAtEachStep(
    prepare: () => Promise<
      (at: (person: TestPerson) => TestPerson) => ReturnType<TestPerson['call']>
    >,
    isApplied: () => Promise<boolean>,
  ): Promise<{ applied: number; lost: number }> {
    const dry = await prepare();
    const statements = await statementsOf(() => dry((person) => person).then());
    const steps = stepsOf(statements);
    let applied = 0;
    let starting = others.start({ now: server.now(), dieAfter: steps[0] ?? 0 });
    for (const [i, step] of steps.entries()) {
      const command = await prepare();
      const victim = await starting;
      // The next one starts while this one works: starting is what takes the time.
      const next = steps[i + 1];
      if (next !== undefined) starting = others.start({ now: server.now(), dieAfter: next });
      const answer = await command((person) => at(victim, person)).then(
        (reply) => reply.status,
        () => 'none',
      );
      expect([step, answer]).toEqual([step, 'none']);
      await victim.kill();
      const wasApplied = await isApplied();
      if (wasApplied) applied += 1;
      // Nothing before the commit, and the commit is the last statement.
      expect([step, wasApplied]).toEqual([step, step === statements]);

      const retry = await command((person) => person);
      expect([step, retry.status < 300]).toEqual([step, true]);
      expect(await isApplied()).toBe(true);
      const again = await command((person) => person);
      expect(again.body).toEqual(retry.body);
      expect(await invariants()).toEqual([]);
    }
    return { applied, lost: steps.length - applied };
  }

  it('takes a call once, whatever the step, and answers the retry as if nothing had been', async () => {
    let callId = '';
    await server.reset();
    const mara = await server.signIn('dispatcher');
    const params = { stormId: server.stormId };
    // The first call of all also makes the storm's counters.
    const first = await mara.call('takeCall', { params, body: aCall(server.now()) });
    expect(first.status).toBe(201);
    const { applied, lost } = await dieAtEachStep(
      () => {
        const body = aCall(server.now(), { phone: aPhone() });
        callId = body.callId;
        return Promise.resolve((at) => at(mara).call('takeCall', { params, body }));
      },
      async () => (await count('SELECT COUNT(*) AS n FROM calls WHERE id = ?', [callId])) === 1,
    );
    expect([applied, lost > 5]).toEqual([1, true]);
  }, 300_000);

  it('publishes routes once, whatever the step, and offers each stop once', async () => {
    let planId = '';
    const { applied, lost } = await dieAtEachStep(
      async () => {
        await server.reset();
        const mara = await server.signIn('dispatcher', 'Mara Quill');
        const theo = await aTechnician(server, 'Theo Larkspur');
        const first = await aWaitingCall(server, mara);
        const second = await aWaitingCall(server, mara);
        planId = await aPlan(theo.technicianId, [first.id, second.id]);
        const params = { planId };
        const body = { commandId: randomUUID(), version: 0 };
        return (at) => at(mara).call('publishPlan', { params, body });
      },
      async () => {
        const stops = await StopRecord.findAll({ order: [['position', 'ASC']] });
        const plan = await PlanRecord.findByPk(planId);
        const states = stops.map((stop) => stop.state);
        // All of it or nothing of it.
        expect([[plan?.state, states]]).toContainEqual(
          plan?.state === 'published' ? ['published', ['offered', 'planned']] : ['proposed', []],
        );
        return plan?.state === 'published';
      },
    );
    expect([applied, lost > 5]).toEqual([1, true]);
  }, 300_000);

  async function aPlan(technicianId: string, callIds: readonly string[]): Promise<string> {
    const figures = {
      savedCents: 0,
      lostCents: 0,
      driveMinutes: 0,
      driveMiles: 0,
      lateMinutes: 0,
      stops: callIds.length,
      moved: 0,
    };
    const stops = callIds.map((callId, i) => ({
      callId,
      arriveAt: server.now() + (i + 1) * 60 * MINUTE_MS,
      startAt: server.now() + (i + 1) * 60 * MINUTE_MS,
      finishAt: server.now() + (i + 1) * 60 * MINUTE_MS + 45 * MINUTE_MS,
      driveMinutes: 10,
      firm: false,
      because: 'The freezer thaws first.',
    }));
    const body: Pick<PlanDto, 'routes' | 'unplanned' | 'figures' | 'inForce'> = {
      routes: [{ technicianId, stops }],
      unplanned: [],
      figures,
      inForce: figures,
    };
    const plan = await PlanRecord.create({
      id: randomUUID(),
      stormId: server.stormId,
      state: 'proposed',
      proposedAt: new Date(server.now()),
      proposedBy: 'Mara Quill',
      body: JSON.stringify(body),
      baseEpoch: 0,
    });
    return plan.id;
  }
});
