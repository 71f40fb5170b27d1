import { randomUUID } from 'node:crypto';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { CallRecord } from '../../server/calls/call-record';
import { takeCalls } from '../../server/calls/take-call';
import { machine } from '../../server/commands/actor';
import { runCommand, type Job } from '../../server/commands/run-command';
import { change, select } from '../../server/db/sql';
import type { StopRecord } from '../../server/routes/stop-record';
import { MessageRecord } from '../../server/texts/message-record';
import { tellEtaIfMoved, tellOnTheWay, tellSettledByPhone } from '../../server/texts/tell-customer';
import { aCall } from '../support/calls';
import { startServer, type TestServer } from '../support/server';
import { AFTERNOON, aTravellingStop, takeACall } from '../support/texts';

let server: TestServer;
const woken = { times: 0 };
beforeAll(async () => {
  server = await startServer({
    context: { wakeOutbox: () => (woken.times += 1) },
  });
});
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  server.setNow(AFTERNOON);
});

const command = (work: (job: Job) => Promise<void>): Promise<void> =>
  runCommand(
    server.context,
    { actor: machine('test'), type: 'tell', commandId: randomUUID(), asked: randomUUID() },
    async (job) => {
      job.inStorm(server.stormId);
      await work(job);
      job.note('call', 'test', 'told');
    },
  );
const texts = () =>
  MessageRecord.findAll({
    order: [
      ['at', 'ASC'],
      ['dueAt', 'ASC'],
    ],
  });

async function onTheWay(told: Parameters<typeof takeACall>[1] = {}): Promise<{
  call: CallRecord;
  stop: StopRecord;
  eta: (at: Instant, now: Instant) => Promise<void>;
}> {
  const { row } = await takeACall(server, told);
  await MessageRecord.destroy({ where: {} });
  const call = await CallRecord.findByPk(row.id, { rejectOnEmpty: true });
  const stop = await aTravellingStop(server, row.id);
  await command((job) => tellOnTheWay(job, call, stop));
  return {
    call,
    stop,
    eta: async (at, now) => {
      server.setNow(now);
      stop.etaAt = new Date(at);
      await stop.save();
      await command((job) => tellEtaIfMoved(job, call, stop));
    },
  };
}
const sent = () => change(server.sequelize, "UPDATE messages SET state = 'sent'", []);

describe('what the customer is told', () => {
  it('names the technician and a window by the wall clock of the region', async () => {
    const { stop } = await onTheWay();
    const [text] = await texts();
    expect(text).toMatchObject({ state: 'new', milestone: 'on-the-way', trouble: null });
    // 14:00 in New York and 40 minutes; the window starts on the five minutes before.
    expect(text?.body).toContain('Juno is on the way to you and should arrive 2:40-3:10 pm.');
    expect(text?.body).not.toContain('Marsh');
    expect(text?.segments).toBe(2);
    await stop.reload();
    expect(stop.toldEtaAt?.getTime()).toBe(stop.etaAt?.getTime());
  });

  it('speaks the language of the household', async () => {
    await onTheWay({ language: 'es' });
    expect((await texts())[0]?.body).toContain('viene en camino y debe llegar de 2:40 a 3:10 pm');
  });

  it('tells a stop once, even when its travel starts twice', async () => {
    const { call, stop } = await onTheWay();
    await command((job) => tellOnTheWay(job, call, stop));
    stop.toldEtaAt = null;
    await stop.save();
    await command((job) => tellOnTheWay(job, call, stop));
    expect(await texts()).toHaveLength(1);
  });

  it('writes text and milestone together or neither', async () => {
    const { row } = await takeACall(server, { mayText: false });
    const call = await CallRecord.findByPk(row.id, { rejectOnEmpty: true });
    const stop = await aTravellingStop(server, row.id);
    const failing = command(async (job) => {
      await tellOnTheWay(job, call, stop);
      throw new Error('the command fails after all');
    });
    await expect(failing).rejects.toThrow('fails after all');
    expect(await texts()).toEqual([]);
  });

  it('wakes the outbox once the command is certain', async () => {
    const before = woken.times;
    await takeACall(server, { mayText: false });
    expect(woken.times).toBe(before);
    await takeACall(server, { mayText: true });
    expect(woken.times).toBe(before + 1);
  });

  it('tells the caller that the call is taken, once, and not those of a night log', async () => {
    await takeACall(server);
    const [text, ...more] = await texts();
    expect(more).toEqual([]);
    expect(text).toMatchObject({ milestone: 'call-received', state: 'new' });
    expect(text?.body).toContain('(252) 555-0100');

    const { commandId: _, ...logged } = aCall(AFTERNOON);
    await command(async (job) => {
      const told = { ...logged, receivedAt: AFTERNOON, source: 'night-log' as const };
      await takeCalls(job, server.stormId, [told]);
    });
    expect(await texts()).toHaveLength(1);
  });
});

describe('an arrival time that moves', () => {
  const at = (minutes: number) => AFTERNOON + minutes * MINUTE_MS;

  it('is told only past the set number of minutes, and against what was told', async () => {
    const { eta } = await onTheWay();
    await sent();
    await eta(at(50), at(15));
    await eta(at(55), at(16));
    expect(await texts()).toHaveLength(1);
    // 10 and 15 minutes were let pass; together with one more they are too many.
    await eta(at(56), at(17));
    const [, moved, ...more] = await texts();
    expect(more).toEqual([]);
    expect(moved).toMatchObject({ milestone: 'eta-moved', state: 'new' });
    expect(moved?.body).toContain('should now arrive 2:55-3:25 pm');
  });

  it('waits for the gap after the last text and then tells the newest time', async () => {
    const { eta, stop } = await onTheWay();
    await sent();
    await eta(at(70), at(2));
    const [, held] = await texts();
    expect(held?.dueAt.getTime()).toBe(at(10));
    await eta(at(90), at(4));
    const [, again, ...more] = await texts();
    expect(more).toEqual([]);
    expect(again?.id).toBe(held?.id);
    expect(again?.body).toContain('3:30-4:00 pm');
    await stop.reload();
    expect(stop.toldEtaAt?.getTime()).toBe(at(90));
  });

  it('goes into the first text when that has not gone yet', async () => {
    const { eta } = await onTheWay();
    await eta(at(100), at(1));
    const all = await texts();
    expect(all).toHaveLength(1);
    expect(all[0]?.body).toMatch(/is on the way to you and should arrive 3:40-4:10 pm/);
  });

  it('may move many times, each told by a text of its own', async () => {
    const { eta } = await onTheWay();
    for (const n of [1, 2, 3]) {
      await sent();
      await eta(at(40 + 20 * n), at(11 * n));
    }
    expect(new Set((await texts()).map((text) => text.dedupeKey)).size).toBe(4);
  });

  it('is not told before the customer was told of the visit', async () => {
    const { row } = await takeACall(server, { mayText: false });
    const call = await CallRecord.findByPk(row.id, { rejectOnEmpty: true });
    const stop = await aTravellingStop(server, row.id);
    await command((job) => tellEtaIfMoved(job, call, stop));
    expect(await texts()).toEqual([]);
  });
});

describe('whether and when it may go', () => {
  const night = Date.UTC(2026, 9, 3, 6); // 2:00 am in New York

  it('holds a notice until eight in the morning, and says so', async () => {
    server.setNow(night);
    await takeACall(server);
    const [text] = await texts();
    expect(text).toMatchObject({ state: 'new', trouble: 'Quiet hours: it goes at 8:00 am.' });
    expect(text?.dueAt.getTime()).toBe(night + 6 * HOUR_MS);
  });

  it('lets the text of a visit on its way pass at night', async () => {
    server.setNow(night);
    await onTheWay();
    const [text] = await texts();
    expect(text?.dueAt.getTime()).toBe(night);
  });

  it('counts the hours of a night in which the clocks go back', async () => {
    // 2026-11-01 00:30 EDT: eight in the morning is EST, eight and a half hours away.
    const before = Date.UTC(2026, 10, 1, 4, 30);
    server.setNow(before);
    await takeACall(server);
    expect((await texts())[0]?.dueAt.getTime()).toBe(before + 8.5 * HOUR_MS);
  });

  it('writes what may not go as suppressed, with the reason', async () => {
    const { row } = await takeACall(server, { mayText: false });
    const call = await CallRecord.findByPk(row.id, { rejectOnEmpty: true });
    await command((job) => tellSettledByPhone(job, call));
    expect((await texts())[0]).toMatchObject({
      state: 'suppressed',
      trouble: 'The household did not agree to texts.',
    });
    await MessageRecord.destroy({ where: {} });

    call.mayText = true;
    await change(server.sequelize, 'INSERT INTO opt_outs (phone, at) VALUES (?, NOW(3))', [
      call.phone,
    ]);
    await command((job) => tellSettledByPhone(job, call));
    expect((await texts())[0]).toMatchObject({
      state: 'suppressed',
      trouble: 'This phone has opted out of texts.',
    });
    await MessageRecord.destroy({ where: {} });

    call.phone = null;
    await command((job) => tellSettledByPhone(job, call));
    expect((await texts())[0]).toMatchObject({
      state: 'suppressed',
      trouble: 'There is no phone number to text.',
    });
  });

  it('tells the boards of the text in the same breath', async () => {
    await takeACall(server);
    const rows = await select<{ change: unknown }>(
      server.sequelize,
      "SELECT `change` FROM feed_changes WHERE stream = 'board'",
    );
    expect(JSON.stringify(rows)).toContain('call-received');
  });
});
