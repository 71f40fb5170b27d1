import type { MessageList } from '@shared/contract/messages';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { SEND_FAULTS, type SendFault } from '../../server/fakes/fake-faults';
import { change, select } from '../../server/db/sql';
import { MessageRecord } from '../../server/texts/message-record';
import type { TextSender } from '../../server/texts/send-text';
import {
  AFTERNOON,
  aTravellingStop,
  aWaitingText,
  startTextLab,
  takeACall,
  type TextLab,
  until,
} from '../support/texts';
import { textSender } from '../support/texts-sender';

let lab: TextLab;
beforeAll(async () => (lab = await startTextLab()));
afterAll(() => lab.close());
beforeEach(() => lab.reset());

/** For a worker that does not give up on an answer within the test. */
const patient = () => ({ sender: lab.sender(10_000), leaseMs: 60_000 });
const fresh = async (id: string) => MessageRecord.findByPk(id, { rejectOnEmpty: true });
const stateOf = async (id: string) => (await fresh(id)).state;
const becomes = (id: string, state: string) =>
  until(async () => (await stateOf(id)) === state, `the text to be ${state}`);
/** Until the service has been asked for a text of unknown fate, with this result. */
const isToldOf = (id: string, words: string) =>
  until(async () => (await fresh(id)).trouble?.includes(words) ?? false, `"${words}"`);
const timesAccepted = (id: string) => lab.accepted().filter((one) => one.outbox === id).length;
const needPerson = async (): Promise<string[]> => {
  const mara = await lab.server.signIn('dispatcher');
  const list = await mara.call('listMessages', { params: { stormId: lab.server.stormId } });
  return (list.body as MessageList).needPerson.map((text) => text.id);
};
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

describe('each way in which a send can go wrong', () => {
  const ends: Readonly<Record<SendFault, { state: string; accepted: 0 | 1 }>> = {
    none: { state: 'delivered', accepted: 1 },
    '429': { state: 'delivered', accepted: 1 },
    '500': { state: 'unknown', accepted: 0 },
    '500-after-accept': { state: 'delivered', accepted: 1 },
    timeout: { state: 'unknown', accepted: 0 },
    'timeout-after-accept': { state: 'delivered', accepted: 1 },
    reset: { state: 'unknown', accepted: 0 },
    'reset-after-accept': { state: 'delivered', accepted: 1 },
    slow: { state: 'delivered', accepted: 1 },
    'wrong-json': { state: 'delivered', accepted: 1 },
  };

  it.each(SEND_FAULTS)('%s: never twice, and delivered or shown to a person', async (fault) => {
    const { state, accepted } = ends[fault];
    lab.fake.setFaults({ sends: [fault] });
    const { id } = await aWaitingText(lab.server);
    // A busy machine may be late with what only counts when it is heard in time.
    lab.work(fault === 'none' || fault === '429' ? patient() : {});
    await becomes(id, state);
    // Time enough for a second send, had there been one.
    if (state === 'unknown') await isToldOf(id, 'does not list it');
    else await pause(300);
    expect([await stateOf(id), timesAccepted(id)]).toEqual([state, accepted]);
    expect(await needPerson()).toEqual(state === 'unknown' ? [id] : []);
  });

  it.each([
    '500-after-accept',
    'timeout-after-accept',
    'reset-after-accept',
    'wrong-json',
  ] as const)('%s without any callback: found in the list of the text service', async (fault) => {
    lab.fake.setFaults({ sends: [fault], callbacks: { copies: 0 } });
    const { id } = await aWaitingText(lab.server);
    lab.work();
    await until(async () => ['sent', 'delivered'].includes(await stateOf(id)), 'the look-up');
    expect(timesAccepted(id)).toBe(1);
    expect((await fresh(id)).providerSid).toBe(
      lab.accepted().find((one) => one.outbox === id)?.sid,
    );
  });

  it('asks again when the list lags behind or cannot be read', async () => {
    lab.fake.setFaults({
      sends: ['500-after-accept'],
      lists: ['empty', '500'],
      callbacks: { copies: 0 },
    });
    const { id } = await aWaitingText(lab.server);
    lab.work();
    await until(async () => (await fresh(id)).providerSid !== null, 'the third look');
    expect(timesAccepted(id)).toBe(1);
  });

  it('leaves twins to a person: which of two equal texts went, nobody can tell', async () => {
    lab.fake.setFaults({ sends: ['500-after-accept', '500'], callbacks: { copies: 0 } });
    const [one, two] = [
      await aWaitingText(lab.server, { body: 'the same words' }),
      await aWaitingText(lab.server, { body: 'the same words' }),
    ];
    lab.work();
    for (const { id } of [one, two]) await isToldOf(id, 'Another text with the same words');
    expect(await Promise.all([one, two].map(({ id }) => stateOf(id)))).toEqual([
      'unknown',
      'unknown',
    ]);
    expect((await needPerson()).sort()).toEqual([one.id, two.id].sort());
  });

  it('would see a second send: a sender that calls the unknown refused is caught', async () => {
    lab.fake.setFaults({ sends: ['500-after-accept'] });
    const honest = lab.sender();
    const careless: TextSender = {
      ...honest,
      send: async (text) => {
        const result = await honest.send(text);
        return result.outcome === 'unknown'
          ? { outcome: 'refused', code: null, retryable: true, words: 'try again' }
          : result;
      },
    };
    // Without callbacks nothing else can stop it.
    lab.fake.setFaults({ sends: ['500-after-accept'], callbacks: { copies: 0 } });
    const { id } = await aWaitingText(lab.server);
    lab.work({ sender: careless });
    await until(() => timesAccepted(id) === 2, 'the second send');
  });
});

describe('a text that is refused for sure', () => {
  it('waits longer each time while the service cannot be reached, then is shown as failed', async () => {
    const nowhere = textSender('http://127.0.0.1:9', lab.publicUrl, 300);
    const { id } = await aWaitingText(lab.server);
    lab.work({ sender: nowhere });
    for (let attempt = 1; attempt < 8; attempt++) {
      await until(async () => (await fresh(id)).attempts === attempt, `try ${String(attempt)}`);
      await becomes(id, 'new');
      lab.setNow(lab.server.context.clock() + 10 * MINUTE_MS);
    }
    await becomes(id, 'failed');
    expect(await fresh(id)).toMatchObject({
      attempts: 8,
      trouble: 'The text service could not be reached (ECONNREFUSED).',
    });
    expect(await needPerson()).toEqual([id]);
  });

  it('is failed at once when trying again cannot help', async () => {
    const { id } = await aWaitingText(lab.server, { phone: '+1252555' });
    lab.work();
    await becomes(id, 'failed');
    expect(await fresh(id)).toMatchObject({
      attempts: 1,
      trouble: 'The phone number is not one that can get texts.',
    });
  });

  it('follows an opt-out that only the service knows of', async () => {
    const phone = '+12525550161';
    lab.fake.block([phone]);
    const { id } = await aWaitingText(lab.server, { phone });
    lab.work();
    await becomes(id, 'suppressed');
    expect(await select(lab.server.sequelize, 'SELECT phone FROM opt_outs')).toEqual([{ phone }]);
  });

  it('does not hold up the others', async () => {
    lab.fake.setFaults({ sends: ['timeout', 'timeout', 'timeout', 'timeout'] });
    const texts = [];
    for (let n = 0; n < 12; n++) texts.push(await aWaitingText(lab.server));
    lab.work();
    await until(
      async () => (await MessageRecord.count({ where: { state: 'delivered' } })) === 8,
      'the other eight',
    );
  });
});

it('shows a text whose sending breaks our own code, and sends the others', async () => {
  const [poison, ...others] = [
    await aWaitingText(lab.server),
    await aWaitingText(lab.server),
    await aWaitingText(lab.server),
  ];
  const real = lab.sender();
  lab.work({
    sender: {
      ...real,
      send: (text) => {
        if (text.outboxId === poison?.id) throw new Error('a fault of ours');
        return real.send(text);
      },
    },
  });
  for (const { id } of others) await becomes(id, 'delivered');
  await becomes(poison?.id ?? '', 'unknown');
  expect(await needPerson()).toEqual([poison?.id]);
});

describe('several workers at once', () => {
  it('send each of 60 texts once', async () => {
    const ids: string[] = [];
    for (let n = 0; n < 60; n++) ids.push((await aWaitingText(lab.server)).id);
    for (let n = 0; n < 4; n++) lab.work();
    await until(
      async () => (await MessageRecord.count({ where: { state: 'delivered' } })) === 60,
      'all to be delivered',
    );
    expect(ids.filter((id) => timesAccepted(id) !== 1)).toEqual([]);
  });
});

describe('what may change while a text waits', () => {
  const phone = '+12525550143';

  it('an opt-out: the text is suppressed at the last gate', async () => {
    const { id } = await aWaitingText(lab.server, { phone });
    await change(lab.server.sequelize, 'INSERT INTO opt_outs (phone, at) VALUES (?, NOW(3))', [
      phone,
    ]);
    lab.work();
    await becomes(id, 'suppressed');
    expect(timesAccepted(id)).toBe(0);
  });

  it('the hour: a notice is held in the night, a visit on its way is told', async () => {
    const night = Date.UTC(2026, 9, 3, 6); // 2:00 am in New York
    const { row } = await takeACall(lab.server, { mayText: false });
    const stop = await aTravellingStop(lab.server, row.id);
    lab.setNow(night);
    const notice = await aWaitingText(lab.server, {
      milestone: 'call-received',
      callId: row.id,
    });
    const visit = await aWaitingText(lab.server, {
      milestone: 'on-the-way',
      callId: row.id,
      dedupeKey: `${stop.id}:on-the-way:1`,
    });
    lab.work();
    await becomes(visit.id, 'delivered');
    await until(async () => (await fresh(notice.id)).trouble !== null, 'the notice to be held');
    expect(await fresh(notice.id)).toMatchObject({
      state: 'new',
      trouble: 'Quiet hours: it goes at 8:00 am.',
    });
    lab.setNow(night + 6 * HOUR_MS + 1_000);
    await becomes(notice.id, 'delivered');
  });

  it('the visit: a late "on the way" does not go once the technician has arrived', async () => {
    const { row } = await takeACall(lab.server, { mayText: false });
    const stop = await aTravellingStop(lab.server, row.id);
    stop.state = 'on-site';
    await stop.save();
    const late = await aWaitingText(lab.server, {
      milestone: 'on-the-way',
      dedupeKey: `${stop.id}:on-the-way:1`,
      at: new Date(AFTERNOON - 5 * MINUTE_MS),
    });
    lab.work();
    await becomes(late.id, 'suppressed');
    expect(timesAccepted(late.id)).toBe(0);
  });

  it('nothing: a text that is not due yet stays', async () => {
    const { id } = await aWaitingText(lab.server, { dueAt: new Date(AFTERNOON + HOUR_MS) });
    lab.work();
    await pause(400);
    expect(await stateOf(id)).toBe('new');
  });
});

it('tells the boards of each state, and writes one line of the trail for each', async () => {
  const { id } = await aWaitingText(lab.server);
  // An answer that is late on a busy machine is another story.
  lab.work(patient());
  await becomes(id, 'delivered');
  const rows = await select<{ change: string }>(
    lab.server.sequelize,
    "SELECT JSON_VALUE(`change`, '$.messages[0].state') AS `change` FROM feed_changes WHERE stream = 'board' ORDER BY n",
  );
  expect(rows.map((row) => row.change)).toEqual(['sending', 'sent', 'delivered']);
  const [audit] = await select<{ n: number }>(
    lab.server.sequelize,
    // Whether the service's "sent" comes before our own is a matter of chance; it changes nothing.
    "SELECT COUNT(*) AS n FROM audit_entries WHERE entity_id = ? AND summary <> 'a status that was known'",
    [id],
  );
  expect(Number(audit?.n)).toBe(3);
});

it('goes on by itself after the database was away for a moment', async () => {
  lab.work();
  const { id } = await aWaitingText(lab.server, { dueAt: new Date(AFTERNOON + 1_500) });
  const others = await select<{ id: number }>(
    lab.server.sequelize,
    `SELECT id FROM information_schema.processlist
      WHERE db = DATABASE() AND id <> CONNECTION_ID()`,
  );
  for (const one of others)
    await change(lab.server.sequelize, `KILL ${String(Number(one.id))}`, []).catch(() => 0);
  await becomes(id, 'delivered');
  expect(timesAccepted(id)).toBe(1);
});
