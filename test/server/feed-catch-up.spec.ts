import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { BoardChange, DayChange, FeedAnswer } from '@shared/contract/realtime';
import type { StopCard, TechnicianDay } from '@shared/contract/routes';
import { pictureOf } from '../../src/app/core/board-picture';
import { BOARD } from '../../server/commands/feed';
import { change, insert, select } from '../../server/db/sql';
import { brokenInvariants } from '../../server/invariants/checks';
import { aCall } from '../support/calls';
import { Board, boardOf, hashOf } from '../support/pictures';
import { act, aStop, aTechnician, dayOf, done } from '../support/routes';
import { startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
});

const CHANGES = 300;
const params = () => ({ stormId: server.stormId });
const take = async (): Promise<CallDetail['row']> => {
  const reply = await mara.call('takeCall', {
    params: params(),
    body: aCall(server.now(), { mayText: false }),
  });
  if (reply.status !== 201) throw new Error(reply.text);
  return (reply.body as CallDetail).row;
};

async function resumed(person: TestPerson, after: number): Promise<FeedAnswer<BoardChange>> {
  const socket = await person.socket();
  const answer = await socket.emitWithAck('board:resume', { stormId: server.stormId, after });
  socket.close();
  return answer;
}

describe('a board that was away', () => {
  it(`has after ${String(CHANGES)} changes the same picture as the server, and as one that stayed`, async () => {
    const jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
    const theo = await aTechnician(server, 'Theo Larkspur');
    await take();
    const away = new Board(await boardOf(jonas, server.stormId));
    const before = away.last;
    const socket = await mara.socket();
    const stayed = new Board(await boardOf(mara, server.stormId)).listen(socket);

    while ((await boardOf(mara, server.stormId)).n < before + CHANGES)
      await Promise.all(Array.from({ length: 5 }, () => workOnOne(theo)));

    const answer = await resumed(jonas, before);
    if (answer.kind !== 'changes') throw new Error(answer.kind);
    expect(answer.changes.length).toBeGreaterThanOrEqual(CHANGES);
    // `take` throws on a gap.
    for (const one of answer.changes) away.take(one);
    const now = await boardOf(jonas, server.stormId);
    expect(away.last).toBe(now.n);
    expect(away.hash()).toBe(hashOf(pictureOf(now)));
    const until = Date.now() + 30_000;
    while (stayed.last < now.n && Date.now() < until)
      await new Promise((resolve) => setTimeout(resolve, 10));
    expect(stayed.hash()).toBe(away.hash());
    socket.close();
    const broken = await brokenInvariants(server.sequelize);
    expect(broken.filter(({ invariant }) => !invariant.startsWith('no-text-is'))).toEqual([]);
  });

  /** Takes a call, and settles it, puts it on a route, or puts it there and takes it off again. */
  let turn = 0;
  async function workOnOne({ technicianId }: { technicianId: string }): Promise<void> {
    turn += 1;
    const kind = turn % 3;
    if (kind === 0) {
      const { id, version } = await take();
      const outcome = turn % 2 === 0 ? 'cancelled' : 'running-again';
      await mara.call('concludeCall', {
        params: { callId: id },
        body: { commandId: randomUUID(), version, outcome, reason: '' },
      });
      return;
    }
    const stop = await aStop(server, mara, technicianId, { mayText: false });
    if (kind === 1) await act(mara, 'pullStop', stop, { reason: 'not today' });
  }

  it('is told to start over once it missed more than 1,000, and not before', async () => {
    await take();
    const { n } = await boardOf(mara, server.stormId);
    await grow(n, 1_000);
    const all = await resumed(mara, n);
    expect(all.kind === 'changes' && all.changes.map((one) => one.n)).toEqual(
      Array.from({ length: 1_000 }, (_, i) => n + 1 + i),
    );
    await grow(n + 1_000, 1);
    expect(await resumed(mara, n)).toEqual({ kind: 'start-over' });
    expect((await resumed(mara, n + 1)).kind).toBe('changes');
    expect(await resumed(mara, n + 2_000)).toEqual({ kind: 'start-over' });
  });

  /** Changes that say nothing; their number is what matters. */
  async function grow(from: number, by: number): Promise<void> {
    const said = JSON.stringify({ kind: 'messages', messages: [] });
    const rows = Array.from({ length: by }, (_, i) => [
      server.stormId,
      BOARD,
      from + 1 + i,
      new Date(server.now()),
      said,
    ]);
    await insert(
      server.sequelize,
      'INSERT INTO feed_changes (storm_id, stream, n, at, `change`) VALUES ?',
      [rows],
    );
    await change(server.sequelize, 'UPDATE feeds SET n = n + ? WHERE storm_id = ? AND stream = ?', [
      by,
      server.stormId,
      BOARD,
    ]);
  }
});

describe('a phone that was away', () => {
  /** The day as a phone keeps it. */
  function afterDay(day: TechnicianDay, changes: readonly DayChange[]): StopCard[] {
    const cards = new Map(day.stops.map((card) => [card.stop.id, card]));
    for (const one of changes)
      if (one.kind === 'stop') cards.set(one.card.stop.id, one.card);
      else if (one.kind === 'gone') cards.delete(one.stopId);
    return [...cards.values()].sort((a, b) => a.stop.position - b.stop.position);
  }

  it('ends with the same day as one that was not, and hears only of its own stops', async () => {
    const theo = await aTechnician(server, 'Theo Larkspur');
    const wren = await aTechnician(server, 'Wren Ashdown');
    await aStop(server, mara, theo.technicianId);
    const day = await dayOf(theo);

    let firm = 0;
    for (let i = 0; i < 8; i++) {
      const stop = await aStop(server, mara, theo.technicianId, { mayText: false });
      await aStop(server, mara, wren.technicianId, { mayText: false });
      if (i % 4 === 1) await act(mara, 'pullStop', stop, { reason: 'not today' });
      if (i % 4 === 2)
        await act(mara, 'moveStop', stop, { technicianId: wren.technicianId, position: 100 });
      const offered = (await dayOf(theo)).stops.find((card) => card.stop.state === 'offered');
      if (i === 3 && offered) {
        await done(theo, 'acceptStop', offered.stop);
        firm += 1;
      }
      if (i === 6)
        await mara.call('addRemark', {
          params: { callId: (await dayOf(theo)).stops[0]?.stop.callId ?? '' },
          body: { commandId: randomUUID(), text: 'Ring the bell at the back.' },
        });
    }
    expect(firm).toBe(1);

    const phone = await theo.socket();
    const missed = await phone.emitWithAck('day:resume', {
      stormId: server.stormId,
      after: day.n,
    });
    phone.close();
    if (missed.kind !== 'changes') throw new Error(missed.kind);
    const now = await dayOf(theo);
    expect(missed.changes.map((one) => one.n)).toEqual(
      Array.from({ length: now.n - day.n }, (_, i) => day.n + 1 + i),
    );
    const cards = afterDay(
      day,
      missed.changes.map((one) => one.change),
    );
    expect(cards).toEqual(now.stops);
    expect(cards.length).toBeGreaterThan(3);

    const wrens = await select<{ id: string }>(
      server.sequelize,
      'SELECT id FROM stops WHERE technician_id = ?',
      [wren.technicianId],
    );
    const told = JSON.stringify(missed.changes.filter(({ change: one }) => one.kind !== 'gone'));
    for (const { id } of wrens) {
      const wasTheos = missed.changes.some(
        ({ change: one }) => one.kind === 'gone' && one.stopId === id,
      );
      if (!wasTheos) expect(told).not.toContain(id);
    }
  });
});
