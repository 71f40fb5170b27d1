import { randomUUID } from 'node:crypto';
import request from 'supertest';
import { HOUR_MS } from '@shared/domain/instant';
import { BOARD } from '../../server/commands/feed';
import { change, insert, select } from '../../server/db/sql';
import { tidy } from '../../server/db/tidy';
import { MOST_PER_MINUTE, RateLimit } from '../../server/http/rate-limit';
import { brokenInvariants } from '../../server/invariants/checks';
import { aCall } from '../support/calls';
import { until } from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
});

describe('a route that costs much', () => {
  it('lets one person ask so often a minute, and says when it will again', async () => {
    const mostPerMinute = MOST_PER_MINUTE.changePassword ?? 0;
    const body = { current: 'not it', next: 'a passable long password', endOtherSessions: false };
    const guess = (person: TestPerson) => person.call('changePassword', { body });
    for (let i = 0; i < mostPerMinute; i++) expect((await guess(mara)).status).toBe(422);
    const refused = await guess(mara);
    expect([refused.status, refused.body]).toEqual([
      429,
      expect.objectContaining({ type: '/problems/too-many-attempts' }),
    ]);
    const wait = Number(refused.get('Retry-After'));
    expect([wait > 0, wait <= 60]).toEqual([true, true]);
    // Others, and what costs little, are not concerned.
    expect((await guess(await server.signIn('dispatcher'))).status).toBe(422);
    expect((await mara.call('listStorms')).status).toBe(200);
  });

  it('counts anew every minute, and remembers nobody for longer', () => {
    let now = 0;
    const limit = new RateLimit(() => now);
    limit.count('a', 1);
    expect(() => limit.count('a', 1)).toThrow('60 seconds');
    now = 45_000;
    expect(() => limit.count('a', 1)).toThrow('15 seconds');
    limit.count('b', 1);
    now = 60_000;
    limit.count('a', 1);
  });
});

describe('tidying up', () => {
  it('lets go of old changes, replies and failures, and the rest still holds', async () => {
    const body = aCall(NIGHT, { mayText: false });
    const take = () => mara.call('takeCall', { params: { stormId: server.stormId }, body });
    expect((await take()).status).toBe(201);
    const { n } = (await mara.call('boardPicture', { params: { stormId: server.stormId } }))
      .body as { n: number };
    const said = JSON.stringify({ kind: 'messages', messages: [] });
    await insert(
      server.sequelize,
      'INSERT INTO feed_changes (storm_id, stream, n, at, `change`) VALUES ?',
      [
        Array.from({ length: 3_000 }, (_, i) => [
          server.stormId,
          BOARD,
          n + 1 + i,
          new Date(NIGHT),
          said,
        ]),
      ],
    );
    await change(server.sequelize, 'UPDATE feeds SET n = n + 3000 WHERE stream = ?', [BOARD]);
    await insert(
      server.sequelize,
      'INSERT INTO sign_in_attempts (who, failures, last_at) VALUES (?, 3, ?)',
      ['name old', new Date(NIGHT)],
    );

    expect(await tidy(server.sequelize, NIGHT + HOUR_MS)).toBe(n + 1_000);
    expect(await take().then((reply) => reply.status)).toBe(201);
    expect(await tidy(server.sequelize, NIGHT + 8 * 24 * HOUR_MS)).toBe(2);

    const [kept] = await select<{ kept: number; first: number }>(
      server.sequelize,
      'SELECT COUNT(*) AS kept, MIN(n) AS first FROM feed_changes WHERE stream = ?',
      [BOARD],
    );
    expect([Number(kept?.kept), Number(kept?.first)]).toEqual([2_000, n + 1_001]);
    expect(await brokenInvariants(server.sequelize)).toEqual([]);
    const socket = await mara.socket();
    const ask = (after: number) =>
      socket.emitWithAck('board:resume', { stormId: server.stormId, after });
    expect(await ask(n)).toEqual({ kind: 'start-over' });
    expect((await ask(n + 2_500)).kind).toBe('changes');
    socket.close();

    // The command is known for good; its answer is not.
    const repeated = await take();
    expect([repeated.status, (repeated.body as { detail: string }).detail]).toEqual([
      422,
      'This was carried out long ago. Look at how things are now before you ask for more.',
    ]);
    const again = await mara.call('takeCall', {
      params: { stormId: server.stormId },
      body: aCall(NIGHT, { commandId: randomUUID() }),
    });
    expect(again.status).toBe(201);
  });
});

describe('a socket', () => {
  const raw = (socket: Awaited<ReturnType<TestPerson['socket']>>) =>
    socket as unknown as { emit(event: string, ...rest: unknown[]): void };

  it('is closed when it floods the server with whatever events', async () => {
    const socket = await mara.socket();
    const closed = new Promise<string>((resolve) => socket.once('disconnect', resolve));
    for (let i = 0; i < 301; i++) raw(socket).emit('nothing', i);
    expect(await closed).toBe('io server disconnect');
  });

  it('is closed when it sends more than 16 kB at once', async () => {
    const socket = await mara.socket();
    const closed = new Promise<string>((resolve) => socket.once('disconnect', resolve));
    raw(socket).emit('board:resume', 'x'.repeat(20_000), () => undefined);
    expect(await closed).toMatch(/transport/);
  });

  it.each([
    ['nothing', []],
    ['no way to answer', [{ stormId: 7 }]],
    ['an answer that is none', [{ stormId: 7 }, 'answer']],
    ['null', [null, () => undefined]],
    ['a prototype', [JSON.parse('{"__proto__":{"a":1}}'), () => undefined]],
    ['a list', [[[[]]], () => undefined]],
  ])('that sends %s cannot end the server', async (_what, sent) => {
    const socket = await mara.socket();
    for (const event of ['board:resume', 'day:resume', 'connection', 'error', 'disconnecting'])
      try {
        raw(socket).emit(event, ...sent);
      } catch {
        // The client's own library refuses reserved names.
      }
    const fine = await socket.emitWithAck('board:resume', { stormId: server.stormId, after: 0 });
    expect(fine).toEqual({ kind: 'changes', changes: [] });
    socket.close();
  });

  it('opens eight times for one person, and not once more', async () => {
    const open = await Promise.all(Array.from({ length: 8 }, () => mara.socket()));
    const ninth = await mara.socket();
    await until(() => ninth.disconnected, 'the ninth to be closed');
    expect(open.map((socket) => socket.connected)).toEqual(open.map(() => true));
    for (const socket of [...open, ninth]) socket.close();
  });
});

it('an address is the one that connects, whatever a header says', async () => {
  const failed = (headers: Record<string, string>) =>
    request(server.url)
      .post('/api/session')
      .set({ Origin: 'http://localhost:4310', ...headers })
      .send({ signInName: 'nobody@example.com', password: 'a wrong password' });
  expect((await failed({ 'X-Forwarded-For': '203.0.113.6' })).status).toBe(401);
  const counted = await select<{ who: string }>(
    server.sequelize,
    "SELECT who FROM sign_in_attempts WHERE who LIKE 'address%'",
  );
  expect(counted.map(({ who }) => who)).toEqual(['address 127.0.0.1']);
});
