import { randomUUID } from 'node:crypto';
import { CallRecord } from '../../server/calls/call-record';
import { brokenInvariants } from '../../server/invariants/checks';
import { change } from '../../server/db/sql';
import { aCall } from '../support/calls';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher');
  for (let i = 0; i < 3; i++)
    await mara.call('takeCall', {
      params: { stormId: server.stormId },
      body: aCall(NIGHT, { mayText: false }),
    });
});

const broken = async (): Promise<string[]> =>
  (await brokenInvariants(server.sequelize)).map(({ invariant }) => invariant.split(':')[0] ?? '');
const tamper = (sql: string, values: unknown[] = []) => change(server.sequelize, sql, values);

describe('the invariants', () => {
  it('hold after calls were taken', async () => {
    expect(await broken()).toEqual([]);
  });

  it('hold after a command that began before the one for whose lock it waited', async () => {
    const call = await CallRecord.findOne({ rejectOnEmpty: true });
    server.setNow(NIGHT - 700);
    const reply = await mara.call('concludeCall', {
      params: { callId: call.id },
      body: {
        commandId: randomUUID(),
        version: call.version,
        outcome: 'waiting',
        reason: '',
      },
    });
    expect(reply.status).toBe(200);
    expect(await broken()).toEqual([]);
  });

  it.each([
    ['audit-chain-holds', "UPDATE audit_entries SET summary = 'nothing' WHERE n = 2"],
    ['audit-chain-holds', 'DELETE FROM audit_entries WHERE n = 3'],
    ['feeds-have-no-gap', 'DELETE FROM feed_changes WHERE n = 2'],
    ['history-is-a-path', "UPDATE call_changes SET to_state = 'on-site' LIMIT 1"],
    ['history-is-a-path', 'DELETE FROM call_changes LIMIT 1'],
    ['every-call-has-clocks', 'DELETE FROM compartments LIMIT 1'],
    ['calls-are-numbered', 'UPDATE storms SET calls_taken = 7'],
    ['call-and-stop-agree', "UPDATE calls SET state = 'accepted' LIMIT 1"],
    [
      'storm-roads-have-ground',
      `INSERT INTO storm_roads (id, storm_id, kind, state, name, notes, shape, starts_at, made_by, made_at, earlier)
       SELECT UUID(), id, 'closed', 'confirmed', 'Larch Lane', '',
              '{"type":"line","points":[[-47.7,36.4]]}', NOW(), 'Mara', NOW(), '[]' FROM storms`,
    ],
    ['every-command-is-audited', 'UPDATE applied_commands SET id = UUID() LIMIT 1'],
  ])('%s sees %s', async (invariant, sql) => {
    await tamper(sql);
    expect(await broken()).toContain(invariant);
  });

  it('see a text that was forgotten, and one after an opt-out', async () => {
    const row = [randomUUID(), '+12015550101', new Date(Date.now() - 3_600_000)];
    await tamper(
      `INSERT INTO messages (id, phone, direction, body, state, at, due_at)
       VALUES (?, ?, 'out', 'x', 'new', ?, ?)`,
      [...row, row[2]],
    );
    await tamper("INSERT INTO opt_outs (phone, at) VALUES ('+12015550101', '2020-01-01')");
    expect(await broken()).toEqual(
      expect.arrayContaining(['no-text-is-forgotten', 'stop-is-honoured']),
    );
  });
});
