import request from 'supertest';
import { MINUTE_MS, HOUR_MS } from '@shared/domain/instant';
import { change, select } from '../../server/db/sql';
import { UserRecord } from '../../server/staff/user-record';
import { NIGHT, PASSWORD, startServer, type TestServer } from '../support/server';

const ORIGIN = 'http://localhost:4310';
let server: TestServer;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(() => server.reset());

const enter = (signInName: string, password: string) =>
  request(server.url).post('/api/session').set('Origin', ORIGIN).send({ signInName, password });
const nameOf = async (userId: string): Promise<string> =>
  (await UserRecord.findByPk(userId))?.signInName ?? '';

describe('signing in', () => {
  it('gives an unknown name and a wrong password the same answer', async () => {
    const mara = await server.signIn('dispatcher');
    const wrong = await enter(await nameOf(mara.userId), 'wrong password here');
    const unknown = await enter('nobody@example.com', 'wrong password here');
    expect(wrong.status).toBe(401);
    expect(unknown.body).toEqual(wrong.body);
  });

  it('waits longer after each failure past five, says how long, and then lets the owner in', async () => {
    const mara = await server.signIn('dispatcher');
    const name = await nameOf(mara.userId);
    for (let i = 0; i < 5; i++) expect((await enter(name, 'wrong')).status).toBe(401);
    const blocked = await enter(name, PASSWORD);
    expect(blocked.status).toBe(429);
    expect(Number(blocked.get('Retry-After'))).toBe(10);
    server.setNow(NIGHT + MINUTE_MS);
    expect((await enter(name, 'wrong')).status).toBe(401);
    expect(Number((await enter(name, PASSWORD)).get('Retry-After'))).toBe(20);
    server.setNow(NIGHT + 2 * MINUTE_MS);
    expect((await enter(name, PASSWORD)).status).toBe(200);
  });

  it('never takes over a session id that was planted before', async () => {
    const mara = await server.signIn('dispatcher');
    const planted = 'thawline=s%3Aplanted.signature';
    const reply = await request(server.url)
      .post('/api/session')
      .set('Origin', ORIGIN)
      .set('Cookie', planted)
      .send({ signInName: await nameOf(mara.userId), password: PASSWORD });
    const cookies = reply.get('Set-Cookie')?.join() ?? '';
    expect(cookies).toMatch(/thawline=s%3A[^;]+; Path=\/; Expires=[^;]+; HttpOnly; SameSite=Lax/);
    expect(cookies).not.toContain('planted');
  });

  it('stores argon2id with its cost and makes an outdated hash anew', async () => {
    const mara = await server.signIn('dispatcher');
    const user = await UserRecord.findByPk(mara.userId);
    expect(user?.passwordHash).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    const { hash } = await import('@node-rs/argon2');
    await user?.update({
      passwordHash: await hash(PASSWORD, { algorithm: 2, memoryCost: 8192, timeCost: 1 }),
    });
    expect((await enter(user?.signInName ?? '', PASSWORD)).status).toBe(200);
    expect((await UserRecord.findByPk(mara.userId))?.passwordHash).toContain('m=19456');
  });
});

describe('a session', () => {
  it('is over at sign-out, for requests and for sockets', async () => {
    const mara = await server.signIn('dispatcher');
    const socket = await mara.socket();
    const ended = new Promise<string>((resolve) => socket.on('session:ended', resolve));
    const closed = new Promise((resolve) => socket.on('disconnect', resolve));
    expect((await mara.call('signOut')).status).toBe(200);
    expect(await ended).toMatch(/signed out/i);
    await closed;
    expect((await mara.call('listStorms')).status).toBe(401);
    await expect(mara.socket()).rejects.toThrow('not-signed-in');
  });

  it('is refused once it has expired, though its row is still there', async () => {
    const mara = await server.signIn('dispatcher');
    await change(server.sequelize, 'UPDATE sessions SET expires = ?', [
      new Date(Date.now() - 1000),
    ]);
    expect((await mara.call('listStorms')).status).toBe(401);
  });

  it('takes its sockets with it when it expires', async () => {
    const mara = await server.signIn('dispatcher');
    const socket = await mara.socket();
    const closed = new Promise<string>((resolve) => socket.once('disconnect', resolve));
    await change(server.sequelize, 'UPDATE sessions SET expires = ?', [new Date(0)]);
    expect(await closed).toBe('io server disconnect');
  });

  it('shows nothing live before a given password was replaced', async () => {
    const mara = await server.signIn('dispatcher');
    await UserRecord.update({ mustChangePassword: true }, { where: { id: mara.userId } });
    await expect(mara.socket()).rejects.toThrow('password-change-needed');
  });

  it('is not prolonged by being used', async () => {
    const mara = await server.signIn('dispatcher');
    const soon = new Date(Date.now() + HOUR_MS);
    await change(server.sequelize, 'UPDATE sessions SET expires = ?', [soon]);
    await mara.call('listStorms');
    await mara.call('me');
    const [row] = await select<{ expires: Date }>(server.sequelize, 'SELECT expires FROM sessions');
    expect(row?.expires.getTime()).toBeLessThanOrEqual(soon.getTime() + 1);
  });

  it('loses its rights at once when the account is disabled, on HTTP and on the socket', async () => {
    const [owner, mara] = [await server.signIn('owner'), await server.signIn('dispatcher')];
    const socket = await mara.socket();
    const closed = new Promise((resolve) => socket.on('disconnect', resolve));
    const reply = await owner.call('changeUser', {
      params: { userId: mara.userId },
      body: { commandId: crypto.randomUUID(), version: 0, disabled: true },
    });
    expect(reply.status).toBe(200);
    await closed;
    expect((await mara.call('listStorms')).status).toBe(401);
  });
});

describe('changes from another site', () => {
  it.each([
    ['no Origin', { Origin: undefined }],
    ['a foreign Origin', { Origin: 'https://evil.example.com' }],
    ['no token', { 'X-XSRF-TOKEN': undefined }],
    ['a wrong token', { 'X-XSRF-TOKEN': 'x'.repeat(43) }],
  ])('are refused with %s', async (_what, headers) => {
    const mara = await server.signIn('manager');
    const asked = mara.call('openStorm', {
      body: { commandId: crypto.randomUUID(), stormId: crypto.randomUUID(), name: 'x' },
    });
    for (const [name, value] of Object.entries(headers))
      if (value === undefined) asked.unset(name);
      else asked.set(name, value);
    expect(await asked).toMatchObject({ status: 403, body: { type: '/problems/foreign-origin' } });
  });

  it('are refused as a form or as plain text', async () => {
    const mara = await server.signIn('manager');
    const asked = mara.call('openStorm').type('text/plain');
    expect((await asked.send('{"name":"x"}')).status).toBe(403);
  });

  it('cannot open a socket', async () => {
    const { io } = await import('socket.io-client');
    const mara = await server.signIn('dispatcher');
    const socket = io(server.url, {
      transports: ['websocket'],
      extraHeaders: { Cookie: mara.cookies, Origin: 'https://evil.example.com' },
      reconnection: false,
    });
    await new Promise((resolve) => socket.once('connect_error', resolve));
    expect(socket.connected).toBe(false);
    socket.close();
  });
});

describe('accounts', () => {
  it('start with a password that is shown once and must be replaced', async () => {
    const owner = await server.signIn('owner');
    const body = {
      commandId: crypto.randomUUID(),
      userId: crypto.randomUUID(),
      name: 'Ada Pell',
      signInName: 'Ada@Example.com',
      role: 'dispatcher',
      technicianId: null,
    };
    const made = await owner.call('addUser', { body });
    expect(made.status).toBe(201);
    const { password } = made.body as { password: string };
    expect(password.length).toBeGreaterThan(20);
    expect((await owner.call('addUser', { body })).body).toMatchObject({ password: '' });

    const entered = await enter('ada@example.com', password);
    expect(entered.body).toMatchObject({ user: { mustChangePassword: true } });
    const cookie = (entered.get('Set-Cookie') ?? []).map((one) => one.split(';')[0]).join('; ');
    const refused = await request(server.url).get('/api/storms').set('Cookie', cookie);
    expect(refused.body).toMatchObject({ type: '/problems/password-change-needed' });
  });

  it('refuse a short, a common and a personal password, and take a long one with spaces', async () => {
    const mara = await server.signIn('dispatcher', 'Mara Quill');
    const next = async (password: string) =>
      (
        await mara.call('changePassword', {
          body: { current: PASSWORD, next: password, endOtherSessions: false },
        })
      ).status;
    expect(await next('fourteen chars')).toBe(422);
    expect(await next('passwordpassword1')).toBe(422);
    expect(await next('maraquill12345678')).toBe(422);
    expect(await next('seven geese on a cold pier ❄')).toBe(200);
  });

  it('end the other sessions when the password changes and that is wished', async () => {
    const mara = await server.signIn('dispatcher');
    const other = await enter(await nameOf(mara.userId), PASSWORD);
    const cookie = (other.get('Set-Cookie') ?? []).map((one) => one.split(';')[0]).join('; ');
    await mara.call('changePassword', {
      body: { current: PASSWORD, next: 'seven geese on a cold pier', endOtherSessions: true },
    });
    expect((await request(server.url).get('/api/storms').set('Cookie', cookie)).status).toBe(401);
  });
});

it('every answer carries the security headers, and none says what it is made of', async () => {
  const reply = await request(server.url).get('/api/me');
  expect(reply.headers).toMatchObject({
    'x-content-type-options': 'nosniff',
    'referrer-policy': 'no-referrer',
    'cache-control': 'no-store',
  });
  expect(reply.headers['content-security-policy']).toMatch(/script-src 'self';/);
  expect(reply.headers['content-security-policy']).not.toMatch(/script-src[^;]*unsafe/);
  expect(reply.headers['x-powered-by']).toBeUndefined();
});
