import { change } from '../../server/db/sql';
import { makeLog } from '../../server/log/make-log';
import { safeError } from '../../server/log/safe-error';
import { aCall } from '../support/calls';
import { NIGHT, startServer, type TestServer } from '../support/server';

const lines: string[] = [];
let server: TestServer;
beforeAll(async () => {
  const log = makeLog('debug', { write: (line) => void lines.push(line) });
  server = await startServer({ context: { log } });
});
afterAll(() => server.close());
beforeEach(() => lines.splice(0));

const entries = () => lines.map((line) => JSON.parse(line) as Record<string, unknown>);

describe('the log', () => {
  it('says what failed in the database, and nothing of whom the statement was about', async () => {
    const mara = await server.signIn('dispatcher', 'Mara Quill');
    await change(server.sequelize, 'RENAME TABLE households TO households_away', []);
    const body = aCall(NIGHT, {
      name: 'Wren Ashdown\n{"level":60}',
      remark: 'insulin in the door',
    });
    const reply = await mara.call('takeCall', { params: { stormId: server.stormId }, body });
    await change(server.sequelize, 'RENAME TABLE households_away TO households', []);

    expect(reply.status).toBe(500);
    expect(reply.text).not.toMatch(/households|Ashdown|at /);
    const failure = entries().find(({ msg }) => msg === 'a request failed');
    expect(failure?.['err']).toMatchObject({ type: 'SequelizeDatabaseError', errno: 1146 });
    const said = lines.join('');
    expect(said).toContain('households.ts');
    for (const secret of ['Ashdown', 'insulin', String(body.phone), 'Larch', 'INSERT', 'Quill'])
      expect(said).not.toContain(secret);
    // A line each, whatever somebody is called.
    for (const line of lines) expect(line.indexOf('\n')).toBe(line.length - 1);
  });

  it('names the path of a request, never what was asked or who asked', async () => {
    const mara = await server.signIn('dispatcher');
    await mara.call('findHousehold', {
      params: { stormId: server.stormId },
      query: { phone: '+12525550101' },
    });
    const asked = entries().find(
      ({ req }) => (req as { path?: string } | undefined)?.path?.endsWith('/household') ?? false,
    );
    expect(asked).toBeDefined();
    expect(lines.join('')).not.toMatch(/5550101|thawline=|XSRF/);
  });

  it('tells whoever looks for an attack what was refused, to whom and where', async () => {
    const theo = await server.signIn('technician');
    await theo.call('listUsers');
    expect(entries().find(({ msg }) => msg === 'a request was refused')).toMatchObject({
      code: 'not-allowed',
      path: '/api/users',
      userId: theo.userId,
    });
  });

  it('keeps what our own errors say', () => {
    const error = new Error('the planner crashed', { cause: new RangeError('too deep') });
    expect(safeError(error)).toMatchObject({
      type: 'Error',
      message: 'the planner crashed',
      cause: { type: 'RangeError', message: 'too deep' },
    });
  });
});
