import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import type { MessageDto, MessageList } from '@shared/contract/messages';
import { ROLES } from '@shared/contract/common';
import { change, select } from '../../server/db/sql';
import { MessageRecord } from '../../server/texts/message-record';
import type { TestPerson } from '../support/server';
import {
  aTravellingStop,
  aWaitingText,
  startTextLab,
  takeACall,
  type TextLab,
  until,
} from '../support/texts';

let lab: TextLab;
let mara: TestPerson;
beforeAll(async () => (lab = await startTextLab()));
afterAll(() => lab.close());
beforeEach(async () => {
  await lab.reset();
  mara = await lab.server.signIn('dispatcher', 'Mara Quill');
});

const command = () => ({ commandId: randomUUID() });
const fresh = (id: string) => MessageRecord.findByPk(id, { rejectOnEmpty: true });
const write = (callId: string, body: string, by: TestPerson = mara) =>
  by.call('sendMessage', { params: { callId }, body: { ...command(), body } });
const resolve = (message: { id: string; version: number }, decision: string, by = mara) =>
  by.call('resolveMessage', {
    params: { messageId: message.id },
    body: { ...command(), version: message.version, decision },
  });
const list = async (): Promise<MessageList> =>
  (await mara.call('listMessages', { params: { stormId: lab.server.stormId } }))
    .body as MessageList;
const optOut = (phone: string | null) =>
  change(lab.server.sequelize, 'INSERT INTO opt_outs (phone, at) VALUES (?, NOW(3))', [phone]);
const anIncoming = (callId: string | null) =>
  aWaitingText(lab.server, { direction: 'in', state: 'received', callId, segments: 0 });

describe('a text that a dispatcher writes', () => {
  it('is queued with its segments counted as the carriers count them, and arrives', async () => {
    const { row } = await takeACall(lab.server, { mayText: true });
    const plain = await write(row.id, 'x'.repeat(161));
    const emoji = await write(row.id, `${'x'.repeat(69)}\u{1f44d}`);
    expect([plain.status, emoji.status]).toEqual([201, 201]);
    // 3GPP TS 23.040: 161 septets and 71 sixteen-bit units are two joined segments each.
    expect([(plain.body as MessageDto).segments, (emoji.body as MessageDto).segments]).toEqual([
      2, 2,
    ]);
    lab.work();
    const { id } = plain.body as MessageDto;
    await until(async () => (await fresh(id)).state === 'delivered', 'the delivery');
    expect(lab.accepted().find((one) => one.outbox === id)).toMatchObject({ to: row.phone });
  });

  it('is written once when the command is repeated', async () => {
    const { row } = await takeACall(lab.server);
    const body = { ...command(), body: 'We come at four.' };
    const first = await mara.call('sendMessage', { params: { callId: row.id }, body });
    const again = await mara.call('sendMessage', { params: { callId: row.id }, body });
    expect([again.status, again.body]).toEqual([201, first.body]);
    expect(await MessageRecord.count({ where: { body: 'We come at four.' } })).toBe(1);
  });

  it('is refused when the household opted out, did not agree, or has no phone', async () => {
    const out = await takeACall(lab.server);
    await optOut(out.row.phone);
    const unwilling = await takeACall(lab.server, { mayText: false });
    const without = await takeACall(lab.server);
    await change(lab.server.sequelize, 'UPDATE calls SET phone = NULL WHERE id = ?', [
      without.row.id,
    ]);
    const replies = [
      await write(out.row.id, 'x'),
      await write(unwilling.row.id, 'x'),
      await write(without.row.id, 'x'),
      await write(randomUUID(), 'x'),
    ];
    expect(replies.map((r) => [r.status, (r.body as { type: string }).type])).toEqual([
      [409, '/problems/opted-out'],
      [409, '/problems/opted-out'],
      [409, '/problems/no-phone'],
      [404, '/problems/not-found'],
    ]);
  });

  it('waits for the morning, unless a technician is on the way', async () => {
    const { row } = await takeACall(lab.server, { mayText: true });
    lab.setNow(Date.UTC(2026, 9, 3, 6)); // 2:00 am in New York
    const held = await write(row.id, 'We come tomorrow.');
    expect(held.body).toMatchObject({ trouble: 'Quiet hours: it goes at 8:00 am.' });
    await aTravellingStop(lab.server, row.id);
    await change(lab.server.sequelize, "UPDATE calls SET state = 'travelling' WHERE id = ?", [
      row.id,
    ]);
    expect((await write(row.id, 'Put the light on, please.')).body).toMatchObject({
      trouble: null,
    });
  });

  it('does not take an empty or an overlong text', async () => {
    const { row } = await takeACall(lab.server);
    for (const body of ['', '   ', 'x'.repeat(481)])
      expect((await write(row.id, body)).status).toBe(422);
    const surprise = { ...command(), body: 'x', phone: '+12525550199' };
    expect(
      (await mara.call('sendMessage', { params: { callId: row.id }, body: surprise })).status,
    ).toBe(422);
  });
});

describe('reading', () => {
  it('marks the texts of the call as read and takes the count from its row', async () => {
    const { row } = await takeACall(lab.server, { mayText: false });
    const [one, other] = [await anIncoming(row.id), await anIncoming(null)];
    const reply = await mara.call('readMessages', { params: { callId: row.id }, body: command() });
    expect(reply.status).toBe(200);
    const detail = reply.body as CallDetail;
    expect(detail.row.unreadTexts).toBe(0);
    expect(detail.messages.find((text) => text.id === one.id)?.readAt).not.toBeNull();
    expect((await fresh(other.id)).readAt).toBeNull();
  });
});

describe('the list', () => {
  it('shows what needs a person, the newest first, counts and what was billed', async () => {
    const { row } = await takeACall(lab.server, { mayText: false });
    const make = (state: MessageDto['state'], more = {}) =>
      aWaitingText(lab.server, { state, segments: 2, ...more });
    const unknown = await make('unknown');
    const failed = await make('failed');
    const undelivered = await make('undelivered', { providerSid: `SM${'1'.repeat(32)}` });
    await make('delivered');
    await make('suppressed');
    await make('new');
    const stray = await anIncoming(null);
    await anIncoming(row.id);
    const shown = await list();
    expect(shown.needPerson.map((text) => text.id).sort()).toEqual(
      [unknown.id, failed.id, undelivered.id, stray.id].sort(),
    );
    expect(shown.recent).toHaveLength(8);
    expect(shown.countsByState).toEqual({
      unknown: 1,
      failed: 1,
      undelivered: 1,
      delivered: 1,
      suppressed: 1,
      new: 1,
      received: 2,
    });
    // Undelivered and delivered; what failed before it was taken costs nothing.
    expect(shown.segmentsSent).toBe(4);
  });

  it('is of one storm', async () => {
    const elsewhere = await mara.call('listMessages', { params: { stormId: randomUUID() } });
    expect(elsewhere.status).toBe(404);
  });
});

describe("a person's decision", () => {
  const unknownText = (more = {}) =>
    aWaitingText(lab.server, { state: 'unknown', attempts: 1, ...more });

  it('send again: a new text goes, the old one is closed and can never go', async () => {
    const old = await unknownText({ dedupeKey: 'call:on-the-way:1', milestone: 'call-received' });
    const reply = await resolve(old, 'send-again');
    expect(reply.status).toBe(200);
    expect(reply.body).toMatchObject({ id: old.id, state: 'failed', version: 1 });
    const again = await MessageRecord.findOne({
      where: { state: 'new' },
      rejectOnEmpty: true,
    });
    expect(again).toMatchObject({
      body: old.body,
      phone: old.phone,
      milestone: 'call-received',
      dedupeKey: 'call:on-the-way:1:again:1',
    });
    lab.work();
    await until(async () => (await fresh(again.id)).state === 'delivered', 'the new text');
    expect(lab.accepted().map((one) => one.outbox)).toEqual([again.id]);
    expect((await list()).needPerson).toEqual([]);

    await change(lab.server.sequelize, "UPDATE messages SET state = 'unknown' WHERE id = ?", [
      again.id,
    ]);
    expect((await resolve(await fresh(again.id), 'send-again')).status).toBe(200);
    expect(await MessageRecord.count({ where: { dedupeKey: 'call:on-the-way:1:again:2' } })).toBe(
      1,
    );
  });

  it('two people at once: one decides, the other is told what changed', async () => {
    const old = await unknownText();
    const theo = await lab.server.signIn('manager', 'Theo Vale');
    const replies = await Promise.all([
      resolve(old, 'send-again'),
      resolve(old, 'send-again', theo),
    ]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
    expect(replies.find((reply) => reply.status === 409)?.body).toMatchObject({
      type: '/problems/stale-version',
      current: { id: old.id, state: 'failed', version: 1 },
    });
    expect(await MessageRecord.count({ where: { state: 'new' } })).toBe(1);
  });

  it('was sent, or give up: the text leaves the list in the state that was said', async () => {
    const [one, two] = [await unknownText(), await unknownText()];
    expect((await resolve(one, 'was-sent')).body).toMatchObject({ state: 'sent' });
    expect((await resolve(two, 'give-up')).body).toMatchObject({ state: 'failed' });
    expect((await list()).needPerson).toEqual([]);
  });

  it('does not send again to somebody who has opted out', async () => {
    const old = await unknownText();
    await optOut(old.phone);
    const reply = await resolve(old, 'send-again');
    expect([reply.status, (reply.body as { type: string }).type]).toEqual([
      409,
      '/problems/opted-out',
    ]);
    expect((await fresh(old.id)).state).toBe('unknown');
  });

  it('cannot call sent what the service refused, nor decide about what is under way', async () => {
    const failed = await aWaitingText(lab.server, { state: 'failed' });
    const statuses = [(await resolve(failed, 'was-sent')).status];
    for (const state of ['new', 'sending', 'sent', 'delivered', 'suppressed'] as const)
      statuses.push((await resolve(await aWaitingText(lab.server, { state }), 'give-up')).status);
    expect(statuses).toEqual([409, 409, 409, 409, 409, 409]);
    expect((await resolve(failed, 'give-up')).status).toBe(200);
    expect((await resolve(await fresh(failed.id), 'give-up')).status).toBe(409);
  });

  it('puts aside a reply that belongs to no call', async () => {
    const stray = await anIncoming(null);
    expect((await resolve(stray, 'send-again')).status).toBe(409);
    expect((await resolve(stray, 'give-up')).status).toBe(200);
    expect((await list()).needPerson).toEqual([]);
  });

  it('names what does not fit', async () => {
    const old = await unknownText();
    const replies = [
      await resolve(old, 'perhaps'),
      await resolve({ id: 'x', version: 0 }, 'give-up'),
      await resolve({ id: old.id, version: -1 }, 'give-up'),
      await resolve({ id: randomUUID(), version: 0 }, 'give-up'),
    ];
    expect(replies.map((reply) => reply.status)).toEqual([422, 422, 422, 404]);
  });
});

describe('the routes of texts', () => {
  it('are for the desk: dispatcher, manager and owner', async () => {
    const { row } = await takeACall(lab.server);
    const statuses: Record<string, number[]> = {};
    for (const role of ROLES) {
      const person = await lab.server.signIn(role);
      const unknown = await aWaitingText(lab.server, { state: 'unknown' });
      statuses[role] = [
        (await write(row.id, 'x', person)).status,
        (await person.call('readMessages', { params: { callId: row.id }, body: command() })).status,
        (await person.call('listMessages', { params: { stormId: lab.server.stormId } })).status,
        (await resolve(unknown, 'give-up', person)).status,
      ];
    }
    expect(statuses).toEqual({
      dispatcher: [201, 200, 200, 200],
      technician: [403, 403, 403, 403],
      manager: [201, 200, 200, 200],
      owner: [201, 200, 200, 200],
    });
  });

  it('write no phone number and no words into the audit trail', async () => {
    const { row } = await takeACall(lab.server);
    await write(row.id, 'The spare key is under the pot.');
    const rows = await select<{ summary: string }>(
      lab.server.sequelize,
      'SELECT summary FROM audit_entries',
    );
    const trail = rows.map((entry) => entry.summary).join('\n');
    expect(trail).toContain('wrote a text of 1 segments');
    expect(trail).not.toMatch(/key|\+1|555/);
  });
});
