import { randomUUID } from 'node:crypto';
import type { AddressInfo } from 'node:net';
import { createServer } from 'node:http';
import { once } from 'node:events';
import express from 'express';
import { pino } from 'pino';
import { Sequelize } from 'sequelize';
import type { CallDetail } from '@shared/contract/calls';
import type { MessageList } from '@shared/contract/messages';
import { change, select } from '../../server/db/sql';
import { problemHandler } from '../../server/http/problem';
import { webhookSignature } from '../../server/fakes/fake-webhooks';
import { MessageRecord } from '../../server/texts/message-record';
import { textWebhooks } from '../../server/texts/text-webhooks';
import { aWaitingText, startTextLab, takeACall, type TextLab, until } from '../support/texts';
import { ACCOUNT, OURS, TOKEN } from '../support/texts-sender';

let lab: TextLab;
beforeAll(async () => (lab = await startTextLab()));
afterAll(() => lab.close());
beforeEach(() => lab.reset());

const PHONE = '+12525550144';
const aSid = () => `SM${randomUUID().replaceAll('-', '')}`;
const statusFields = (sid: string, status: string): Record<string, string> => ({
  AccountSid: ACCOUNT,
  MessageSid: sid,
  MessageStatus: status,
  From: OURS,
  To: PHONE,
});
const report = async (outbox: string, sid: string, status: string): Promise<number> =>
  (await lab.post(`status?outbox=${outbox}`, statusFields(sid, status))).status;
const inboundFields = (sid: string, body: string, from = PHONE): Record<string, string> => ({
  AccountSid: ACCOUNT,
  MessageSid: sid,
  From: from,
  To: OURS,
  Body: body,
});
const inbound = async (body: string, sid = aSid(), from = PHONE): Promise<number> =>
  (await lab.post('inbound', inboundFields(sid, body, from))).status;
const fresh = (id: string) => MessageRecord.findByPk(id, { rejectOnEmpty: true });
const count = async (table: string): Promise<number> => {
  const [row] = await select<{ n: number }>(
    lab.server.sequelize,
    `SELECT COUNT(*) AS n FROM ${table}`,
  );
  return Number(row?.n);
};
const optedOut = () => count('opt_outs').then((n) => n > 0);
const outgoing = () =>
  MessageRecord.findAll({
    where: { direction: 'out' },
    order: [
      ['at', 'ASC'],
      ['id', 'ASC'],
    ],
  });
const detailOf = async (callId: string): Promise<CallDetail> => {
  const mara = await lab.server.signIn('dispatcher');
  return (await mara.call('readCall', { params: { callId } })).body as CallDetail;
};
const listed = async (): Promise<MessageList> => {
  const mara = await lab.server.signIn('dispatcher');
  const params = { stormId: lab.server.stormId };
  return (await mara.call('listMessages', { params })).body as MessageList;
};

describe('the signature', () => {
  it('is taken over the public address, though the request arrives at another one', async () => {
    expect(lab.server.url).not.toBe(lab.publicUrl);
    expect(await inbound('hello')).toBe(200);
  });

  it('refuses what was not signed, signed with another key, for another address or changed', async () => {
    const fields = inboundFields(aSid(), 'STOP');
    const url = `${lab.publicUrl}/webhooks/texts/inbound`;
    const right = webhookSignature(TOKEN, url, fields);
    const flipped = (right.startsWith('A') ? 'B' : 'A') + right.slice(1);
    const wrong = [
      '',
      flipped,
      right.slice(0, 10),
      webhookSignature('some other token', url, fields),
      webhookSignature(TOKEN, `${lab.server.url}/webhooks/texts/inbound`, fields),
      webhookSignature(TOKEN, `${url}?x=1`, fields),
      webhookSignature(TOKEN, url, { ...fields, Extra: '1' }),
      webhookSignature(TOKEN, url, { ...fields, Body: 'START' }),
    ];
    for (const signature of wrong)
      expect((await lab.post('inbound', fields, signature)).status).toBe(403);
    expect([await count('messages'), await count('opt_outs')]).toEqual([0, 0]);
    expect((await lab.post('inbound', fields, right)).status).toBe(200);
  });

  it('holds the id of our text too: a report cannot be turned to another one', async () => {
    const [mine, other] = [await aWaitingText(lab.server), await aWaitingText(lab.server)];
    const fields = statusFields(aSid(), 'delivered');
    const url = `${lab.publicUrl}/webhooks/texts/status?outbox=${mine.id}`;
    const stolen = webhookSignature(TOKEN, url, fields);
    expect((await lab.post(`status?outbox=${other.id}`, fields, stolen)).status).toBe(403);
    expect((await fresh(other.id)).state).toBe('new');
  });

  it('is no reason to take nonsense', async () => {
    const nonsense: Record<string, string>[] = [
      {},
      { MessageSid: 'x', MessageStatus: 'sent' },
      { ...statusFields(aSid(), 'sent'), MessageStatus: '' },
    ];
    for (const fields of nonsense)
      expect((await lab.post(`status?outbox=${randomUUID()}`, fields)).status).toBe(422);
    expect((await lab.post('status?outbox=1', statusFields(aSid(), 'sent'))).status).toBe(422);
    expect((await lab.post('inbound', { ...inboundFields(aSid(), ''), From: '' })).status).toBe(
      422,
    );
  });
});

describe('status callbacks', () => {
  const shuffles = [
    ['sent', 'delivered'],
    ['delivered', 'sent'],
    ['delivered', 'sent', 'delivered', 'queued', 'sent'],
    ['undelivered', 'sent', 'failed', 'delivered'],
    ['failed', 'delivered', 'undelivered'],
  ];

  it.each(shuffles)('end in delivered as %s, %s…', async (...statuses) => {
    const { id } = await aWaitingText(lab.server, { state: 'sending' });
    const sid = aSid();
    for (const status of statuses) expect(await report(id, sid, status)).toBe(204);
    expect(await fresh(id)).toMatchObject({ state: 'delivered', providerSid: sid, trouble: null });
  });

  it('each five times, all at once and in any order: one end, one line of the trail each', async () => {
    const { id } = await aWaitingText(lab.server, { state: 'sending' });
    const sid = aSid();
    const all = ['delivered', 'sent', 'queued', 'sending'].flatMap((one) =>
      Array.from({ length: 5 }, () => one),
    );
    const answers = await Promise.all(all.map((status) => report(id, sid, status)));
    expect(new Set(answers)).toEqual(new Set([204]));
    expect((await fresh(id)).state).toBe('delivered');
    expect(await count('message_callbacks')).toBe(4);
    expect(await count('audit_entries')).toBeLessThanOrEqual(4);
  });

  it('come for a text that we do not yet know as accepted: our own record changes nothing', async () => {
    lab.fake.setFaults({
      sends: ['timeout-after-accept'],
      callbacks: { copies: 5, reversed: true },
    });
    const { id } = await aWaitingText(lab.server);
    lab.work();
    await until(async () => (await fresh(id)).state === 'delivered', 'the callback');
    expect(lab.accepted().filter((one) => one.outbox === id)).toHaveLength(1);
  });

  it('without our id are kept until the text is known by its name', async () => {
    const sid = aSid();
    expect((await lab.post('status', statusFields(sid, 'delivered'))).status).toBe(204);
    const { id } = await aWaitingText(lab.server);
    lab.work({
      sender: {
        send: () => Promise.resolve({ outcome: 'accepted', sid, status: 'queued' }),
        findByOutboxId: () => Promise.resolve({ found: 'none' }),
      },
    });
    await until(async () => (await fresh(id)).state === 'delivered', 'the kept report');
  });

  it('say why a text did not arrive, and show it to a person', async () => {
    const { id } = await aWaitingText(lab.server, { state: 'sent' });
    const fields = { ...statusFields(aSid(), 'undelivered'), ErrorCode: '30003' };
    expect((await lab.post(`status?outbox=${id}`, fields)).status).toBe(204);
    expect((await listed()).needPerson).toMatchObject([
      { id, state: 'undelivered', trouble: 'The text service could not deliver it (30003).' },
    ]);
  });

  it('end the doubt about a text of unknown fate', async () => {
    const { id } = await aWaitingText(lab.server, { state: 'unknown' });
    await report(id, aSid(), 'sent');
    expect((await fresh(id)).state).toBe('sent');
    expect((await listed()).needPerson).toEqual([]);
  });

  it('never turn a text from a customer into one of ours', async () => {
    await inbound('hello');
    const [message] = await MessageRecord.findAll();
    expect(await report(message?.id ?? '', aSid(), 'delivered')).toBe(204);
    expect((await fresh(message?.id ?? '')).state).toBe('received');
  });
});

describe('a text from a customer', () => {
  it('lands unread on the open call of its number, once, however often it comes', async () => {
    const { row } = await takeACall(lab.server, { phone: PHONE, mayText: false });
    const sid = aSid();
    const answers = await Promise.all([1, 2, 3, 4, 5].map(() => inbound('It runs again!', sid)));
    expect(answers).toEqual([200, 200, 200, 200, 200]);
    const detail = await detailOf(row.id);
    expect(detail.messages).toMatchObject([
      { direction: 'in', state: 'received', body: 'It runs again!', readAt: null, phone: PHONE },
    ]);
    expect(detail.row.unreadTexts).toBe(1);
    expect(detail.row.version).toBe(row.version);
  });

  it('is told to the boards with its call', async () => {
    const { row } = await takeACall(lab.server, { phone: PHONE, mayText: false });
    const mara = await lab.server.signIn('dispatcher');
    const board = await mara.socket();
    const heard: { change: { kind: string } }[] = [];
    board.on('board:changed', (told) => heard.push(told as (typeof heard)[number]));
    await inbound('When do you come?');
    await until(() => heard.length >= 2, 'both changes');
    board.close();
    expect(heard.map((told) => told.change.kind).sort()).toEqual(['calls', 'messages']);
    expect(JSON.stringify(heard)).toContain(row.id);
  });

  it('without an open call waits for a person', async () => {
    await inbound('Who is this?');
    expect((await listed()).needPerson).toMatchObject([{ body: 'Who is this?', callId: null }]);
  });

  it('keeps emoji and line breaks, and nothing that could forge a line of a log', async () => {
    await inbound('ok \u{1f44d}\nsee you\r\x1b[31m', aSid());
    expect((await MessageRecord.findOne())?.body).toBe('ok \u{1f44d}\nsee you [31m');
  });
});

describe('STOP, START and HELP', () => {
  const confirm = async (state: string) =>
    until(async () => (await outgoing()).some((text) => text.state === state), state);

  it('STOP opts out, suppresses what waits, and is confirmed by the last text of all', async () => {
    const { row } = await takeACall(lab.server, { phone: PHONE, mayText: true });
    await inbound('Stop');
    expect(await optedOut()).toBe(true);
    const [received, confirmation] = (await outgoing()).sort((a) =>
      a.milestone === 'call-received' ? -1 : 1,
    );
    expect(received).toMatchObject({ milestone: 'call-received', state: 'suppressed' });
    expect(confirmation).toMatchObject({ milestone: 'stop-confirmed', callId: row.id });
    lab.work();
    await confirm('delivered');

    const after = await aWaitingText(lab.server, { phone: PHONE });
    await inbound('HELP');
    await inbound('STOP');
    await until(async () => (await fresh(after.id)).state === 'suppressed', 'the text after it');
    const told = lab.accepted().filter((one) => one.to === PHONE);
    expect(told.map((one) => one.body)).toEqual([confirmation?.body]);
  });

  it('STOP is confirmed only when no earlier text is on the wire any more', async () => {
    const earlier = await aWaitingText(lab.server, { phone: PHONE });
    const real = lab.sender();
    let letGo: () => void = () => undefined;
    const held = new Promise<void>((resolve) => (letGo = resolve));
    lab.work({
      sender: {
        ...real,
        send: async (text) => {
          if (text.outboxId === earlier.id) await held;
          return real.send(text);
        },
      },
    });
    await until(async () => (await fresh(earlier.id)).state === 'sending', 'the first text');
    // The first worker waits for its batch; this one is free.
    lab.work();
    await inbound('STOP');
    await new Promise((resolve) => setTimeout(resolve, 500));
    expect(lab.accepted()).toEqual([]);
    letGo();
    await until(() => lab.accepted().length === 2, 'both');
    expect(lab.accepted().map((one) => one.outbox)[0]).toBe(earlier.id);
    expect(lab.accepted()[1]?.body).toContain('no more texts');
  });

  it('a worded refusal counts, and stays unread for what else it says', async () => {
    await inbound('please stop texting me, I am at the clinic until nine');
    expect(await optedOut()).toBe(true);
    expect((await MessageRecord.findOne({ where: { direction: 'in' } }))?.readAt).toBeNull();
  });

  it('CANCEL opts out and still asks a person whether the visit was meant', async () => {
    await inbound('Cancel');
    expect(await optedOut()).toBe(true);
    expect((await listed()).needPerson).toMatchObject([{ body: 'Cancel' }]);
  });

  it('START lets texts pass again and says so', async () => {
    await inbound('STOP');
    await inbound('START');
    expect(await optedOut()).toBe(false);
    const later = await aWaitingText(lab.server, { phone: PHONE });
    lab.work();
    await until(async () => (await fresh(later.id)).state === 'delivered', 'the text after START');
    expect((await outgoing()).map((text) => text.milestone)).toContain('start-confirmed');
  });

  it('"yes" is an opt-in only for those who had opted out', async () => {
    await inbound('Yes');
    expect((await outgoing()).length).toBe(0);
    await inbound('STOP');
    await inbound('Yes');
    expect(await optedOut()).toBe(false);
  });

  it('HELP is answered in the language of the word, at any hour', async () => {
    lab.setNow(Date.UTC(2026, 9, 3, 6));
    await inbound('AYUDA');
    lab.work();
    await confirm('delivered');
    expect(lab.accepted().at(-1)?.body).toContain('textos sobre su llamada');
  });
});

describe('while the database is away', () => {
  it('answers 503, and the repeat is applied once', async () => {
    const dead = new Sequelize({ dialect: 'mariadb', host: '127.0.0.1', port: 9, logging: false });
    const app = express();
    app.use('/webhooks/texts', textWebhooks({ ...lab.server.context, sequelize: dead }));
    app.use(problemHandler(pino({ level: 'silent' })));
    const http = createServer(app).listen(0, '127.0.0.1');
    await once(http, 'listening');
    const fields = inboundFields(aSid(), 'STOP');
    const signed = `${lab.publicUrl}/webhooks/texts/inbound`;
    const reply = await fetch(
      `http://127.0.0.1:${String((http.address() as AddressInfo).port)}/webhooks/texts/inbound`,
      {
        method: 'POST',
        headers: {
          'Content-Type': 'application/x-www-form-urlencoded',
          'X-Twilio-Signature': webhookSignature(TOKEN, signed, fields),
        },
        body: new URLSearchParams(fields).toString(),
      },
    );
    expect(reply.status).toBe(503);
    expect(reply.headers.get('Retry-After')).toBe('2');
    http.close();
    await dead.close();

    for (let n = 0; n < 2; n++) expect((await lab.post('inbound', fields)).status).toBe(200);
    expect(await count('opt_outs')).toBe(1);
    expect(await MessageRecord.count({ where: { direction: 'in' } })).toBe(1);
  });

  it('answers 503 by itself when the database does not answer at all', async () => {
    const { id } = await aWaitingText(lab.server, { state: 'sending' });
    const holding = await lab.server.sequelize.transaction();
    await change(
      lab.server.sequelize,
      "UPDATE messages SET trouble = 'held' WHERE id = ?",
      [id],
      holding,
    );
    const sid = aSid();
    const reply = await lab.post(`status?outbox=${id}`, statusFields(sid, 'delivered'));
    expect(reply.status).toBe(503);
    // Its own clock said so, not the database at the end of its patience with the lock.
    expect(((await reply.json()) as { detail: string }).detail).toBe('Not in time; send it again.');
    await holding.rollback();
    await until(async () => (await report(id, sid, 'delivered')) === 204, 'the repeat');
    expect((await fresh(id)).state).toBe('delivered');
  });
});
