import { randomUUID } from 'node:crypto';
import { QueryTypes } from 'sequelize';
import type { CallDetail, TakeCall } from '@shared/contract/calls';
import type { BoardChange, Numbered } from '@shared/contract/realtime';
import { HOUR_MS } from '@shared/domain/instant';
import { down, up } from '../../server/db/migrations/0011-what-is-lost';
import { select } from '../../server/db/sql';
import { aCall, aPhone, aUnit } from '../support/calls';
import { NIGHT, startServer, type TestServer } from '../support/server';

let server: TestServer;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(() => server.reset());

const count = async (table: string): Promise<number> => {
  const [row] = await select<{ n: number }>(server.sequelize, `SELECT COUNT(*) AS n FROM ${table}`);
  return Number(row?.n);
};
const inStorm = () => ({ stormId: server.stormId });

describe('POST /api/storms/:stormId/calls', () => {
  it('takes a call, winds its clocks by the published limits and gives the claim to its taker', async () => {
    const mara = await server.signIn('dispatcher', 'Mara Quill');
    const reply = await mara.call('takeCall', { params: inStorm(), body: aCall(NIGHT) });
    expect(reply.status).toBe(201);
    const { row } = reply.body as CallDetail;
    expect(row).toMatchObject({
      number: 1,
      state: 'new',
      version: 0,
      claim: { userId: mara.userId, name: 'Mara Quill' },
    });
    // USDA FSIS: about 24 h for a half-full freezer with its door shut.
    expect(row.units[0]?.compartments[0]?.saveByAt).toBe(NIGHT - 2 * HOUR_MS + 24 * HOUR_MS);
  });

  it('keeps what was told of power that came back for a while, and winds the clocks by it', async () => {
    const mara = await server.signIn('dispatcher');
    const outAt = NIGHT - 6 * HOUR_MS;
    const span = { from: NIGHT - 5 * HOUR_MS, to: NIGHT - 2 * HOUR_MS };
    const told = (spans: (typeof span)[]) => ({
      ...aCall(NIGHT, { powerOutAt: outAt, powerBackAt: NIGHT - HOUR_MS }),
      powerOnSpans: spans,
      householdAtRisk: true,
      units: [{ ...aUnit({ ice: [] }), ranBetween: 'yes' as const, cooling: 'partial' as const }],
    });
    const early = await mara.call('takeCall', {
      params: inStorm(),
      body: told([{ from: outAt - HOUR_MS, to: outAt }]),
    });
    expect(early.status).toBe(422);
    expect(early.body).toMatchObject({ type: '/problems/times-disagree' });

    const reply = await mara.call('takeCall', { params: inStorm(), body: told([span]) });
    expect(reply.status).toBe(201);
    const detail = reply.body as CallDetail;
    expect(detail.powerOnSpans).toEqual([span]);
    expect(detail.row.householdAtRisk).toBe(true);
    expect(detail.units[0]).toMatchObject({ ranBetween: 'yes', cooling: 'partial' });
    // 24 h without cooling, three of the hours in between with it.
    const [clock] = detail.row.units[0]?.compartments ?? [];
    expect(clock?.saveByAt).toBe(outAt + 27 * HOUR_MS);
    expect(clock?.earliestAt).toBeLessThanOrEqual(clock?.likelyAt ?? 0);
    expect(clock?.likelyAt).toBeLessThanOrEqual(clock?.saveByAt ?? 0);

    const amended = await mara.call('amendCall', {
      params: { callId: detail.row.id },
      body: {
        commandId: randomUUID(),
        version: detail.row.version,
        powerOnSpans: [],
        householdAtRisk: false,
      },
    });
    const { row } = amended.body as CallDetail;
    expect(row.householdAtRisk).toBe(false);
    expect(row.units[0]?.compartments[0]?.saveByAt).toBe(outAt + 24 * HOUR_MS);
  });

  it('takes a call from a program that knows nothing of what may be left out', async () => {
    const mara = await server.signIn('dispatcher');
    const { powerOnSpans: _1, householdAtRisk: _2, units, ...old } = aCall(NIGHT);
    const oldUnits = units.map(({ cooling: _3, ranBetween: _4, compartments, ...unit }) => ({
      ...unit,
      compartments: compartments.map(({ ice: _5, ...facts }) => facts),
    }));
    const reply = await mara.call('takeCall', {
      params: inStorm(),
      body: { ...old, units: oldUnits } as unknown as TakeCall,
    });
    expect(reply.status).toBe(201);
    expect((reply.body as CallDetail).units[0]).toMatchObject({ ranBetween: 'unknown' });
  });

  it('has the clocks of calls stored before wound again by the migration', async () => {
    const mara = await server.signIn('dispatcher');
    const unit = aUnit();
    await mara.call('takeCall', { params: inStorm(), body: aCall(NIGHT, { units: [unit] }) });
    const clocks = () =>
      select(
        server.sequelize,
        'SELECT at_risk_at, earliest_at, likely_at, save_by_at, facts, reasons FROM compartments',
      );
    const before = await clocks();
    const run = async (statement: string, values: readonly unknown[] = []) => {
      await server.sequelize.query(statement, { type: QueryTypes.RAW, replacements: [...values] });
    };
    await down(run);
    await run("UPDATE compartments SET reasons = '[]'");
    await up(run, (query, values = []) => select(server.sequelize, query, [...values]));
    expect(await clocks()).toEqual(before);
  });

  it('changes nothing when the same command comes again, and gives the first answer', async () => {
    const mara = await server.signIn('dispatcher');
    const body = aCall(NIGHT);
    const first = await mara.call('takeCall', { params: inStorm(), body });
    const again = await mara.call('takeCall', { params: inStorm(), body });
    expect(again.status).toBe(201);
    expect(again.body).toEqual(first.body);
    expect(await count('calls')).toBe(1);
    expect(await count('audit_entries')).toBe(1);
  });

  it('takes one of two copies of a command that arrive at once', async () => {
    const mara = await server.signIn('dispatcher');
    const body = aCall(NIGHT);
    const replies = await Promise.all(
      [1, 2, 3].map(() => mara.call('takeCall', { params: inStorm(), body })),
    );
    expect(replies.map((reply) => reply.status)).toEqual([201, 201, 201]);
    expect(new Set(replies.map((reply) => reply.text)).size).toBe(1);
    expect(await count('calls')).toBe(1);
  });

  it('refuses a command id that was used for something else', async () => {
    const mara = await server.signIn('dispatcher');
    const body = aCall(NIGHT);
    await mara.call('takeCall', { params: inStorm(), body });
    const other = await mara.call('takeCall', {
      params: inStorm(),
      body: { ...aCall(NIGHT), commandId: body.commandId },
    });
    expect(other.status).toBe(422);
    expect(other.type).toBe('application/problem+json');
    expect(other.body).toMatchObject({ type: '/problems/command-id-reused' });
  });

  it('recognises the household: the second call is refused with the first one in hand', async () => {
    const mara = await server.signIn('dispatcher');
    const phone = aPhone();
    const first = await mara.call('takeCall', {
      params: inStorm(),
      body: aCall(NIGHT, { phone }),
    });
    const second = await mara.call('takeCall', {
      params: inStorm(),
      body: aCall(NIGHT, { phone, name: 'Somebody Else' }),
    });
    expect(second.status).toBe(409);
    expect(second.body).toMatchObject({
      type: '/problems/household-has-open-call',
      current: { id: (first.body as CallDetail).row.id },
    });
    expect(await count('calls')).toBe(1);
  });

  it('names every field that does not fit, by its pointer', async () => {
    const mara = await server.signIn('dispatcher');
    const body = { ...aCall(NIGHT), phone: '12', units: [], surprise: 1 };
    const reply = await mara.call('takeCall', { params: inStorm(), body });
    expect(reply.status).toBe(422);
    const pointers = (reply.body as { errors: { pointer: string }[] }).errors.map((e) => e.pointer);
    expect(pointers).toEqual(expect.arrayContaining(['/phone', '/units']));
    expect(await count('calls')).toBe(0);
  });

  it('refuses times that cannot be', async () => {
    const mara = await server.signIn('dispatcher');
    const take = (told: object) =>
      mara.call('takeCall', { params: inStorm(), body: aCall(NIGHT, told) });
    const future = await take({ powerOutAt: NIGHT + HOUR_MS, powerBackAt: null });
    const backwards = await take({ powerOutAt: NIGHT - HOUR_MS, powerBackAt: NIGHT - 2 * HOUR_MS });
    expect([future.status, backwards.status]).toEqual([422, 422]);
    expect(future.body).toMatchObject({ type: '/problems/times-disagree' });
  });

  it('is for the desk only', async () => {
    const body = aCall(NIGHT);
    const statuses = [];
    for (const role of ['dispatcher', 'manager', 'owner', 'technician'] as const)
      statuses.push(
        (
          await (
            await server.signIn(role)
          ).call('takeCall', {
            params: inStorm(),
            body: {
              ...body,
              commandId: randomUUID(),
              callId: randomUUID(),
              phone: aPhone(),
              units: [aUnit()],
            },
          })
        ).status,
      );
    expect(statuses).toEqual([201, 201, 201, 403]);
  });

  it('tells every board, in order and without a gap, and no technician', async () => {
    const [mara, theo] = [await server.signIn('dispatcher'), await server.signIn('technician')];
    const [board, phone] = [await mara.socket(), await theo.socket()];
    const heard: Numbered<BoardChange>[] = [];
    const overheard: unknown[] = [];
    board.on('board:changed', (change) => heard.push(change));
    phone.onAny((...event) => overheard.push(event));
    await Promise.all(
      Array.from({ length: 8 }, () =>
        mara.call('takeCall', { params: inStorm(), body: aCall(NIGHT, { mayText: false }) }),
      ),
    );
    while (heard.length < 8) await new Promise((resolve) => setTimeout(resolve, 10));
    expect(heard.map((change) => change.n)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
    expect(overheard).toEqual([]);
    board.close();
    phone.close();
  });
});
