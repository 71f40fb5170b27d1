import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import { HOUR_MS } from '@shared/domain/instant';
import { pictureOf } from '../../src/app/core/board-picture';
import { brokenInvariants } from '../../server/invariants/checks';
import { select } from '../../server/db/sql';
import { aCall } from '../support/calls';
import { type OtherServer, type OtherServers, otherServers } from '../support/other-servers';
import { Board, boardOf, hashOf } from '../support/pictures';
import { aTechnician, aWaitingCall, put } from '../support/routes';
import { browser, NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

const CALLS = 50;
/** By then the claims of whoever took the calls have lapsed. */
const LATER = NIGHT + HOUR_MS;
/** Only pictures that would never be the same wait so long. */
const GIVE_UP_MS = 30_000;

let here: TestServer;
let others: OtherServers;
let there: OtherServer;
beforeAll(async () => {
  here = await startServer();
  others = await otherServers();
  there = await others.start({ now: LATER });
});
afterAll(async () => {
  await others.close();
  await here.close();
});
beforeEach(() => here.reset());

/** The same person at the other server: the session is in the database that both share. */
const overThere = (person: TestPerson): TestPerson => ({
  ...person,
  ...browser(there.url, person.cookies),
});

const invariants = async () =>
  (await brokenInvariants(here.sequelize)).filter(
    // No outbox works here, so no text leaves.
    ({ invariant }) => !invariant.startsWith('no-text-is-forgotten'),
  );

/** A few at a time, as dispatchers work; not so many that the machine itself is the test. */
async function inGroups<T>(all: readonly T[], work: (one: T) => Promise<void>): Promise<void> {
  for (let i = 0; i < all.length; i += 5) await Promise.all(all.slice(i, i + 5).map(work));
}

describe('two servers on one database', () => {
  it('let exactly one of those win who reach for the same call, and show the same board', async () => {
    const desks: TestPerson[] = [];
    for (const name of ['Mara Quill', 'Jonas Fenwick', 'Ines Calder', 'Odo Marsh'])
      desks.push(await here.signIn('dispatcher', name));
    const [mara, jonas] = desks as [TestPerson, TestPerson];
    const theo = await aTechnician(here, 'Theo Larkspur');
    const wren = await aTechnician(here, 'Wren Ashdown');
    const taken: string[] = [];
    await inGroups(Array.from({ length: CALLS }), async () => {
      const reply = await mara.call('takeCall', {
        params: { stormId: here.stormId },
        body: aCall(here.now(), { mayText: false }),
      });
      taken.push((reply.body as CallDetail).row.id);
    });
    here.setNow(LATER);

    const boards = [mara, overThere(jonas)];
    const sockets = await Promise.all(boards.map((person) => person.socket()));
    const pictures = await Promise.all(
      boards.map(async (person, i) => {
        const board = new Board(await boardOf(person, here.stormId));
        return board.listen(sockets[i] as (typeof sockets)[number]);
      }),
    );

    // Half of them sit at the other server.
    const racers = desks.map((person, i) => (i % 2 === 0 ? person : overThere(person)));
    const claims = new Map<string, number[]>();
    await inGroups(taken, async (callId) => {
      const replies = await Promise.all(
        racers.map((person) =>
          person.call('claimCall', { params: { callId }, body: { commandId: randomUUID() } }),
        ),
      );
      claims.set(
        callId,
        replies.map((reply) => reply.status),
      );
      const winner = racers[replies.findIndex((reply) => reply.status === 200)] as TestPerson;
      const { row } = replies.find((reply) => reply.status === 200)?.body as CallDetail;
      expect(row.claim?.userId).toBe(winner.userId);
      const ended = await winner.call('concludeCall', {
        params: { callId },
        body: { commandId: randomUUID(), version: row.version, outcome: 'waiting', reason: '' },
      });
      const waiting = (ended.body as CallDetail).row;
      const added = await Promise.all([
        put(mara, waiting, theo.technicianId, 100),
        put(overThere(jonas), waiting, wren.technicianId, 0),
      ]);
      expect(added.map((reply) => reply.status).sort()).toEqual([201, 409]);
      const lost = added.find((reply) => reply.status === 409)?.body as { type: string };
      expect(['/problems/stale-version', '/problems/already-on-a-route']).toContain(lost.type);
    });
    expect([...claims.values()].map((statuses) => [...statuses].sort())).toEqual(
      taken.map(() => [200, 409, 409, 409]),
    );
    const lastReply = Date.now();

    const real = hashOf(pictureOf(await boardOf(mara, here.stormId)));
    while (pictures.some((picture) => picture.hash() !== real)) {
      if (Date.now() - lastReply > GIVE_UP_MS) break;
      await new Promise((resolve) => setTimeout(resolve, 20));
    }
    expect(pictures.map((picture) => picture.hash())).toEqual([real, real]);
    expect(hashOf(pictureOf(await boardOf(overThere(mara), here.stormId)))).toBe(real);
    const [stops] = await select<{ n: number }>(
      here.sequelize,
      'SELECT COUNT(*) AS n FROM stops WHERE active_call IS NOT NULL',
    );
    expect(Number(stops?.n)).toBe(CALLS);
    expect(await invariants()).toEqual([]);
    for (const socket of sockets) socket.close();
  });

  it('answer a command that was sent to both with one reply, and apply it once', async () => {
    const mara = await here.signIn('dispatcher');
    const body = aCall(here.now(), { mayText: false });
    const ask = (person: TestPerson) =>
      person.call('takeCall', { params: { stormId: here.stormId }, body });
    const [a, b] = await Promise.all([ask(mara), ask(overThere(mara))]);
    expect([a.status, b.status]).toEqual([201, 201]);
    expect(b.body).toEqual(a.body);
    const picture = await boardOf(mara, here.stormId);
    expect(picture.calls).toHaveLength(1);
  });

  it('end the windows of a person at both once their rights change', async () => {
    const ines = await here.signIn('owner', 'Ines Calder');
    const jonas = await here.signIn('dispatcher', 'Jonas Fenwick');
    const call = await aWaitingCall(here, jonas);
    const window = await overThere(jonas).socket();
    const heard: number[] = [];
    window.on('board:changed', ({ n }) => heard.push(n));
    const ended = new Promise<void>((resolve) => window.once('disconnect', () => resolve()));
    const users = (await ines.call('listUsers')).body as {
      users: { id: string; version: number }[];
    };
    const version = users.users.find(({ id }) => id === jonas.userId)?.version;
    const reply = await ines.call('changeUser', {
      params: { userId: jonas.userId },
      body: { commandId: randomUUID(), version, disabled: true },
    });
    expect(reply.status).toBe(200);
    await ended;
    const { n: last } = await boardOf(ines, here.stormId);
    await ines.call('addRemark', {
      params: { callId: call.id },
      body: { commandId: randomUUID(), text: 'not for Jonas' },
    });
    expect((await boardOf(ines, here.stormId)).n).toBe(last + 1);
    await new Promise((resolve) => setTimeout(resolve, 1_500));
    // The other server may have told of the call before.
    expect(heard.filter((n) => n > last)).toEqual([]);
    expect((await overThere(jonas).call('me')).body).toEqual({ me: null });
  });
});
