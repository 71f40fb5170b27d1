import { randomUUID } from 'node:crypto';
import type { CallDetail } from '@shared/contract/calls';
import { nextOfCall } from '@shared/domain/phone-check/call-check';
import { nextQuestion } from '@shared/domain/phone-check/phone-check';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { MessageRecord } from '../../server/texts/message-record';
import { aCall, aUnit } from '../support/calls';
import { until } from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
let jonas: TestPerson;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  jonas = await server.signIn('dispatcher', 'Jonas Fenwick');
});

const taken = async (told = {}): Promise<CallDetail> =>
  (
    await mara.call('takeCall', {
      params: { stormId: server.stormId },
      body: aCall(NIGHT, told),
    })
  ).body as CallDetail;

const on =
  (person: TestPerson, route: Parameters<TestPerson['call']>[0], detail: CallDetail) =>
  (body: object = {}) =>
    person.call(route, {
      params: { callId: detail.row.id },
      body: { commandId: randomUUID(), ...body },
    });

describe('the phone check of several units', () => {
  it('asks about each, brings what all need, and tells the clocks what a unit does', async () => {
    const [fridge, chest] = [
      aUnit(),
      { ...aUnit(), kind: 'chest-freezer' as const, place: 'porch' },
    ];
    const call = await taken({ units: [fridge, chest] });
    const safe = {
      fire: 'no',
      line: 'no',
      generator: 'none',
      lights: 'no',
      water: 'no',
      device: 'no',
      power: 'on',
    };
    const reply = await on(
      mara,
      'answerPhoneCheck',
      call,
    )({
      version: call.row.version,
      answers: {
        ...safe,
        doing: 'runs-cold',
        [`fire@${chest.id}`]: 'no',
        [`water@${chest.id}`]: 'no',
        [`doing@${chest.id}`]: 'runs-warm',
      },
    });
    expect(reply.status).toBe(200);
    const detail = reply.body as CallDetail;
    expect(detail.units.map(({ id, cooling }) => [id, cooling])).toEqual([
      [fridge.id, 'unknown'],
      [chest.id, 'partial'],
    ]);
    expect(nextOfCall(detail.phoneCheck.answers, [fridge, chest])?.unit.id).toBe(chest.id);
  });
});

describe('the claim on a call', () => {
  it('keeps others off while it runs, and says who has it', async () => {
    const call = await taken();
    const refused = await on(jonas, 'claimCall', call)();
    expect(refused.status).toBe(409);
    expect(refused.body).toMatchObject({ type: '/problems/claimed-by-another' });
    const seen = (await jonas.call('readCall', { params: { callId: call.row.id } }))
      .body as CallDetail;
    expect(seen.row.claim?.name).toBe('Mara Quill');
  });

  it('is free for others once its time has run out', async () => {
    const call = await taken();
    server.setNow(NIGHT + 11 * MINUTE_MS);
    const reply = await on(jonas, 'claimCall', call)();
    expect(reply.status).toBe(200);
    expect((reply.body as CallDetail).row).toMatchObject({
      state: 'checking',
      claim: { name: 'Jonas Fenwick' },
    });
  });

  it('kept or given back leaves the version alone, and is told to the boards all the same', async () => {
    const call = await taken();
    const checking = (await on(mara, 'claimCall', call)()).body as CallDetail;
    const board = await jonas.socket();
    const heard: { version: number; until: number | undefined }[] = [];
    board.on('board:changed', ({ change }) => {
      if (change.kind === 'calls')
        for (const call of change.calls)
          heard.push({ version: call.version, until: call.claim?.until });
    });
    server.setNow(NIGHT + 6 * MINUTE_MS);
    const [kept, answered] = await Promise.all([
      on(mara, 'claimCall', checking)(),
      on(mara, 'answerPhoneCheck', checking)({ version: checking.row.version, answers: {} }),
    ]);
    // Whichever came first, the answers were given to what had been read.
    expect([kept.status, answered.status]).toEqual([200, 200]);
    expect((answered.body as CallDetail).row.version).toBe(checking.row.version + 1);
    await until(() => heard.length === 2, 'the board to hear of both');
    expect(heard.map((one) => one.until)).toEqual([NIGHT + 16 * MINUTE_MS, NIGHT + 16 * MINUTE_MS]);
    board.close();
  });

  it('goes to one of two who reach for it at once', async () => {
    const call = await taken();
    await on(mara, 'releaseCall', call)();
    const replies = await Promise.all([
      on(mara, 'claimCall', call)(),
      on(jonas, 'claimCall', call)(),
    ]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
  });
});

describe('the phone check', () => {
  it('keeps the answers, narrows the causes and ends in a visit with what it needs', async () => {
    let call = await taken();
    const unit = call.units[0];
    if (!unit) throw new Error('no unit');
    let answers: Record<string, string | number> = {};
    for (let step = 0; step < 40; step++) {
      const question = nextQuestion(answers, unit);
      const answer = question?.answers.find(({ ends }) => !ends) ?? question?.answers[0];
      if (!question || !answer) break;
      answers = { ...answers, [question.id]: answer.id };
      const reply = await on(
        mara,
        'answerPhoneCheck',
        call,
      )({
        version: call.row.version,
        answers,
      });
      expect(reply.status).toBe(200);
      call = reply.body as CallDetail;
    }
    expect(call.row.state).toBe('checking');
    expect(call.phoneCheck.answers).toEqual(answers);
    const ended = await on(
      mara,
      'concludeCall',
      call,
    )({
      version: call.row.version,
      outcome: 'waiting',
      reason: '',
    });
    expect((ended.body as CallDetail).row).toMatchObject({ state: 'waiting', claim: null });
    expect((ended.body as CallDetail).history.map(({ to }) => to)).toEqual([
      'new',
      'checking',
      'waiting',
    ]);
  });

  it('marks the danger that a safety answer speaks of', async () => {
    const call = await taken();
    const reply = await on(
      mara,
      'answerPhoneCheck',
      call,
    )({
      version: call.row.version,
      answers: { fire: 'smoke' },
    });
    expect(reply.status).toBe(200);
    const question = nextQuestion({}, { kind: 'upright-freezer', compressorStart: 'unknown' });
    const dangerous = question?.answers.find(({ ends }) => ends?.danger);
    const after = await on(
      mara,
      'answerPhoneCheck',
      reply.body as CallDetail,
    )({
      version: (reply.body as CallDetail).row.version,
      answers: { [question?.id ?? '']: dangerous?.id ?? '' },
    });
    expect((after.body as CallDetail).row.danger).toBe(true);
  });

  it('settles a call that runs again and stops its clocks', async () => {
    const call = await taken();
    server.setNow(NIGHT + HOUR_MS / 2);
    await on(mara, 'claimCall', call)();
    const now = (await mara.call('readCall', { params: { callId: call.row.id } }))
      .body as CallDetail;
    const reply = await on(
      mara,
      'concludeCall',
      call,
    )({
      version: now.row.version,
      outcome: 'running-again',
      reason: 'she had it on a switched outlet',
    });
    const told = await MessageRecord.findOne({ where: { milestone: 'settled-by-phone' } });
    expect(told?.body).toContain('when in doubt, throw it out');
    expect(told?.body).not.toContain('switched outlet');
    expect((reply.body as CallDetail).row).toMatchObject({
      state: 'running-again',
      settledAt: NIGHT + HOUR_MS / 2,
      restoredAt: NIGHT + HOUR_MS / 2,
    });
  });

  it('refuses what cannot follow: a settled call is not settled again', async () => {
    const call = await taken();
    const conclude = async (outcome: string) => {
      const { body } = await mara.call('readCall', { params: { callId: call.row.id } });
      return on(
        mara,
        'concludeCall',
        call,
      )({
        version: (body as CallDetail).row.version,
        outcome,
        reason: '',
      });
    };
    expect((await conclude('cancelled')).status).toBe(200);
    const again = await conclude('running-again');
    expect(again.status).toBe(409);
    expect(again.body).toMatchObject({ type: '/problems/illegal-transition' });
  });

  it('refuses an answer to an older version and shows the newer one', async () => {
    const call = await taken();
    await on(mara, 'addRemark', call)({ text: 'The dog is friendly.' });
    const stale = await on(
      mara,
      'answerPhoneCheck',
      call,
    )({
      version: call.row.version,
      answers: {},
    });
    expect(stale.status).toBe(409);
    expect(stale.body).toMatchObject({
      type: '/problems/stale-version',
      current: { id: call.row.id, version: call.row.version + 1 },
    });
  });
});

describe('amending a call', () => {
  it('winds the clocks from the new facts', async () => {
    const call = await taken();
    const full = { ...aUnit({ fill: 1 }), id: call.units[0]?.id ?? '' };
    const reply = await on(mara, 'amendCall', call)({ version: call.row.version, units: [full] });
    // USDA FSIS: about 48 h for a full freezer with its door shut.
    expect((reply.body as CallDetail).row.units[0]?.compartments[0]?.saveByAt).toBe(
      NIGHT - 2 * HOUR_MS + 48 * HOUR_MS,
    );
  });

  it('remembers the household for the next storm', async () => {
    const call = await taken({ name: 'Wren Ashdown' });
    await on(mara, 'amendCall', call)({ version: call.row.version, name: 'Wren Ashdown-Pell' });
    const found = await mara.call('findHousehold', {
      params: { stormId: server.stormId },
      query: { phone: call.row.phone ?? '' },
    });
    expect(found.body).toMatchObject({
      household: { name: 'Wren Ashdown-Pell' },
      openCall: { id: call.row.id },
      earlierCalls: 0,
    });
  });
});
