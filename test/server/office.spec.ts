import { randomUUID } from 'node:crypto';
import type { AuditEntryDto, Settings } from '@shared/contract/office';
import type { BoardChange, Numbered } from '@shared/contract/realtime';
import type { TechnicianDto } from '@shared/contract/routes';
import type { CallDetail } from '@shared/contract/calls';
import { StormRecord } from '../../server/storms/storm-record';
import { aCall } from '../support/calls';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let ines: TestPerson;
let ruth: TestPerson;
let mara: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  ines = await server.signIn('manager', 'Ines Calloway');
  ruth = await server.signIn('owner', 'Ruth Oakhaven');
  mara = await server.signIn('dispatcher', 'Mara Quill');
});

const settingsNow = async (): Promise<Settings> => (await ines.call('settings')).body as Settings;

const change = (person: TestPerson, body: object) =>
  person.call('changeSettings', { body: { commandId: randomUUID(), ...body } });

describe('the settings', () => {
  it('change what is sent and leave the rest', async () => {
    const before = await settingsNow();
    const reply = await change(ines, { version: before.version, speedMph: 31, pocketCalls: 6 });
    expect(reply.status).toBe(200);
    expect(reply.body).toEqual({
      ...before,
      speedMph: 31,
      pocketCalls: 6,
      version: before.version + 1,
    });
    expect(await settingsNow()).toEqual(reply.body);
  });

  it('refuse an older version and show what stands now', async () => {
    const { version } = await settingsNow();
    await change(ruth, { version, claimMinutes: 12 });
    const reply = await change(ines, { version, claimMinutes: 20 });
    expect(reply.status).toBe(409);
    expect(reply.body).toMatchObject({
      type: '/problems/stale-version',
      current: { claimMinutes: 12, version: version + 1 },
    });
    expect((await settingsNow()).claimMinutes).toBe(12);
  });

  it('let one of two through who save the same version at once', async () => {
    const { version } = await settingsNow();
    const replies = await Promise.all([
      change(ines, { version, serviceMinutes: 30 }),
      change(ruth, { version, serviceMinutes: 60 }),
    ]);
    expect(replies.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect((await settingsNow()).version).toBe(version + 1);
  });

  it('change once when the same order comes twice', async () => {
    const { version } = await settingsNow();
    const body = { commandId: randomUUID(), version, pocketKm: 2 };
    const first = await change(ines, body);
    const again = await change(ines, body);
    expect([again.status, again.body]).toEqual([200, first.body]);
    expect((await settingsNow()).version).toBe(version + 1);
  });

  it.each([
    ['a speed of walking', { speedMph: 1 }, '/speedMph'],
    ['a road shorter than the straight line', { circuity: 0.9 }, '/circuity'],
    ['a quarter of a minute', { claimMinutes: 2.25 }, '/claimMinutes'],
    ['an hour that no day has', { quietFromMinute: 1440 }, '/quietFromMinute'],
    ['a company without a name', { companyName: '  ' }, '/companyName'],
    ['a number that cannot be dialled', { companyPhone: '555' }, '/companyPhone'],
  ])('refuse %s and name the field', async (_what, sent, pointer) => {
    const { version } = await settingsNow();
    const reply = await change(ines, { version, ...sent });
    expect(reply.status).toBe(422);
    const { errors } = reply.body as { errors: { pointer: string }[] };
    expect(errors.map((one) => one.pointer)).toEqual([pointer]);
    expect((await settingsNow()).version).toBe(version);
  });

  it('are read by everyone and changed by the office only', async () => {
    const theo = await server.signIn('technician');
    const { version } = await settingsNow();
    for (const person of [mara, theo]) {
      expect((await person.call('settings')).status).toBe(200);
      expect((await change(person, { version, speedMph: 40 })).status).toBe(403);
    }
  });

  it('are told to every board of the open storm', async () => {
    const socket = await mara.socket();
    const heard = new Promise<Numbered<BoardChange>>((resolve) =>
      socket.on('board:changed', (one) => {
        if (one.change.kind === 'settings') resolve(one);
      }),
    );
    const { version } = await settingsNow();
    await change(ines, { version, etaMovedMinutes: 20 });
    expect((await heard).change).toMatchObject({
      kind: 'settings',
      settings: { etaMovedMinutes: 20, version: version + 1 },
    });
    socket.disconnect();
  });
});

describe('the audit trail of a storm', () => {
  const trail = async (query: Record<string, string> = {}): Promise<AuditEntryDto[]> => {
    const reply = await ines.call('audit', { params: { stormId: server.stormId }, query });
    expect(reply.status).toBe(200);
    return (reply.body as { entries: AuditEntryDto[] }).entries;
  };
  const taken = async (): Promise<CallDetail> =>
    (await mara.call('takeCall', { params: { stormId: server.stormId }, body: aCall(NIGHT) }))
      .body as CallDetail;

  it('says who did what to what, newest first', async () => {
    const call = await taken();
    await mara.call('addRemark', {
      params: { callId: call.row.id },
      body: { commandId: randomUUID(), text: 'Gate code 12' },
    });
    const entries = await trail();
    expect(entries.map(({ command }) => command)).toEqual(['addRemark', 'takeCall']);
    expect(entries[0]).toMatchObject({
      by: 'Mara Quill',
      entity: 'call',
      entityId: call.row.id,
      at: NIGHT,
    });
    // What a customer said is no business of the trail.
    expect(JSON.stringify(entries)).not.toContain('Gate code');
  });

  it('goes on page by page without a gap or a repeat', async () => {
    for (let n = 0; n < 104; n++) await taken();
    const first = await trail();
    const second = await trail({ before: String(first.at(-1)?.n) });
    const numbers = [...first, ...second].map(({ n }) => n);
    expect(first).toHaveLength(100);
    expect(numbers).toEqual(Array.from({ length: 104 }, (_, index) => 104 - index));
    expect(await trail({ before: '1' })).toEqual([]);
  });

  it('narrows down to one call', async () => {
    const [one, other] = [await taken(), await taken()];
    const entries = await trail({ entityId: one.row.id });
    expect(entries.map(({ entityId }) => entityId)).toEqual([one.row.id]);
    expect(entries[0]?.summary).not.toContain(String(other.row.number));
  });

  it.each([
    ['an id that is none', { entityId: 'call 7' }, '/entityId'],
    ['a page before the first', { before: '0' }, '/before'],
  ])('refuses %s', async (_what, query, pointer) => {
    const reply = await ines.call('audit', { params: { stormId: server.stormId }, query });
    expect(reply.status).toBe(422);
    expect((reply.body as { errors: { pointer: string }[] }).errors[0]?.pointer).toBe(pointer);
  });

  it('is not found for a storm that never was', async () => {
    const reply = await ines.call('audit', { params: { stormId: randomUUID() } });
    expect(reply.status).toBe(404);
  });

  it('is for the office only', async () => {
    const reply = await mara.call('audit', { params: { stormId: server.stormId } });
    expect(reply.status).toBe(403);
  });
});

describe('the audit trail of the office', () => {
  it('keeps what belongs to no storm: settings and accounts', async () => {
    const { version } = await settingsNow();
    await change(ines, { version, speedMph: 33 });
    await ruth.call('addUser', {
      body: {
        commandId: randomUUID(),
        userId: randomUUID(),
        name: 'Odette Marrow',
        signInName: 'odette@example.com',
        role: 'dispatcher',
        technicianId: null,
      },
    });
    const { entries } = (await ines.call('officeAudit')).body as { entries: AuditEntryDto[] };
    expect(entries.map(({ command, by }) => [command, by])).toEqual([
      ['addUser', 'Ruth Oakhaven'],
      ['changeSettings', 'Ines Calloway'],
    ]);
    expect(entries[1]?.summary).toBe('changed speedMph');
  });

  it('is for the office only', async () => {
    expect((await mara.call('officeAudit')).status).toBe(403);
  });
});

describe('the list of technicians', () => {
  it('is there before the first storm, for the desk', async () => {
    await StormRecord.destroy({ where: {} });
    const technicianId = randomUUID();
    const added = await ines.call('addTechnician', {
      body: {
        commandId: randomUUID(),
        technicianId,
        name: 'Theo Larkspur',
        phone: '+12525550121',
        skills: ['sealed-system'],
        van: { 'start-relay': 3 },
        start: [-47.7, 36.4],
        shifts: [{ startsAt: NIGHT, endsAt: NIGHT + 8 * 3_600_000 }],
      },
    });
    expect(added.status).toBe(201);
    const { technicians } = (await mara.call('listTechnicians')).body as {
      technicians: TechnicianDto[];
    };
    expect(technicians).toEqual([added.body]);
  });

  it('is not for technicians', async () => {
    const theo = await server.signIn('technician');
    expect((await theo.call('listTechnicians')).status).toBe(403);
  });
});
