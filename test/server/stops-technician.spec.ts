import { randomUUID } from 'node:crypto';
import type { BoardChange, DayChange, Numbered } from '@shared/contract/realtime';
import type { StopCard, StopDto } from '@shared/contract/routes';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { change, select } from '../../server/db/sql';
import { MessageRecord } from '../../server/texts/message-record';
import { atOnce } from '../support/at-once';
import { act, aStop, aTechnician, dayOf, done, stateOf, until } from '../support/routes';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
let mara: TestPerson;
let theo: Awaited<ReturnType<typeof aTechnician>>;
beforeAll(async () => (server = await startServer()));
afterAll(() => server.close());
beforeEach(async () => {
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  theo = await aTechnician(server, 'Theo Larkspur');
});

const accepted = async (stop: StopDto) => done(theo, 'acceptStop', stop);
const travelling = async (stop: StopDto) =>
  done(theo, 'startTravel', await accepted(stop), { from: null });
const onSite = async (stop: StopDto) => done(theo, 'arrive', await travelling(stop));
const finish = (stop: StopDto, told: object = {}) =>
  act(theo, 'finishStop', stop, { outcome: 'restored', note: '', partsUsed: [], ...told });

describe('the life of a stop', () => {
  it('is offered, accepted, driven to, reached and finished, and the call goes with it', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    expect(stop.state).toBe('offered');
    const states = [await stateOf(server, stop.callId)];
    let now = await accepted(stop);
    states.push(await stateOf(server, stop.callId));
    now = await done(theo, 'startTravel', now, { from: null });
    states.push(await stateOf(server, stop.callId));
    now = await done(theo, 'arrive', now);
    states.push(await stateOf(server, stop.callId));
    const last = await finish(now);
    expect(last.status).toBe(200);
    expect((last.body as { card: StopCard }).card).toMatchObject({
      stop: { state: 'done' },
      callState: 'restored',
    });
    states.push(await stateOf(server, stop.callId));
    expect(states).toEqual(['offered', 'accepted', 'travelling', 'on-site', 'restored']);
  });

  it('stops the clocks of a call whose cooling is restored, at that moment', async () => {
    const stop = await onSite(await aStop(server, mara, theo.technicianId));
    server.setNow(NIGHT + HOUR_MS);
    await finish(stop);
    const [call] = await select<{ restored_at: Date; settled_at: Date }>(
      server.sequelize,
      'SELECT restored_at, settled_at FROM calls WHERE id = ?',
      [stop.callId],
    );
    expect(call?.restored_at.getTime()).toBe(NIGHT + HOUR_MS);
    expect(call?.settled_at.getTime()).toBe(NIGHT + HOUR_MS);
  });

  it.each(['parts-on-order', 'no-access', 'not-repairable', 'referred'])(
    'ends in %s as well',
    async (outcome) => {
      const stop = await onSite(await aStop(server, mara, theo.technicianId));
      const reply = await finish(stop, { outcome, note: 'board burnt' });
      expect(reply.status).toBe(200);
      expect(await stateOf(server, stop.callId)).toBe(outcome);
      const [remark] = await select<{ text: string }>(
        server.sequelize,
        'SELECT text FROM remarks WHERE call_id = ?',
        [stop.callId],
      );
      expect(remark?.text).toBe('board burnt');
    },
  );

  it('takes the used parts off the van and tells the board', async () => {
    const board = await mara.socket();
    const heard: Numbered<BoardChange>[] = [];
    board.on('board:changed', (change) => heard.push(change));
    const { technician } = await dayOf(theo);
    const ines = await server.signIn('manager');
    await ines.call('changeTechnician', {
      params: { technicianId: theo.technicianId },
      body: {
        commandId: randomUUID(),
        version: technician.version,
        van: { 'start-relay': 3, overload: 1 },
      },
    });
    const stop = await onSite(await aStop(server, mara, theo.technicianId));
    await finish(stop, { partsUsed: ['start-relay', 'start-relay', 'overload', 'door-gasket'] });
    expect((await dayOf(theo)).technician.van).toEqual({
      'start-relay': 1,
      overload: 0,
      'door-gasket': 0,
    });
    await until(
      () =>
        heard.some(
          ({ change }) =>
            change.kind === 'technicians' && change.technicians[0]?.van['start-relay'] === 1,
        ),
      'the board hears of the van',
    );
    board.close();
  });

  it('refuses steps out of their order, with the reason', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const replies = [
      await act(theo, 'startTravel', stop, { from: null }),
      await act(theo, 'arrive', stop),
      await finish(stop),
      await act(theo, 'tellEta', stop, { etaAt: NIGHT + HOUR_MS }),
    ];
    expect(replies.map((reply) => reply.status)).toEqual([409, 409, 409, 409]);
    for (const reply of replies)
      expect(reply.body).toMatchObject({ type: '/problems/illegal-transition' });
    expect(await stateOf(server, stop.callId)).toBe('offered');
  });
});

describe('offers', () => {
  it('has only the first stop on offer, and the next one as soon as that is finished', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    const third = await aStop(server, mara, theo.technicianId);
    expect([first.state, second.state, third.state]).toEqual(['offered', 'planned', 'planned']);
    await finish(await onSite(first));
    const { stops } = await dayOf(theo);
    expect(stops.map(({ stop }) => [stop.id, stop.state, stop.position])).toEqual([
      [second.id, 'offered', 0],
      [third.id, 'planned', 1],
    ]);
  });

  it('pushes the offer to the phone of its technician and to no other', async () => {
    const ilse = await aTechnician(server, 'Ilse Rowan');
    const [phone, other] = [await theo.socket(), await ilse.socket()];
    const heard: Numbered<DayChange>[] = [];
    const overheard: unknown[] = [];
    phone.on('day:changed', (change) => heard.push(change));
    other.onAny((...event) => overheard.push(event));
    const stop = await aStop(server, mara, theo.technicianId);
    await until(() => heard.length > 0, 'the phone hears of the offer');
    expect(heard[0]).toMatchObject({
      n: 1,
      change: { kind: 'stop', card: { stop: { id: stop.id, state: 'offered' } } },
    });
    expect(overheard).toEqual([]);
    phone.close();
    other.close();
  });

  it('goes back to waiting with the reason when it is declined, and is not offered to them again', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    const reply = await act(theo, 'declineStop', first, {
      reason: 'missing-part',
      note: 'no relay left',
    });
    expect(reply.status).toBe(200);
    expect((reply.body as { card: StopCard }).card.stop.state).toBe('declined');
    expect(await stateOf(server, first.callId)).toBe('waiting');
    const history = await select<{ to_state: string; reason: string; actor: string }>(
      server.sequelize,
      'SELECT to_state, reason, actor FROM call_changes WHERE call_id = ? ORDER BY n DESC LIMIT 1',
      [first.callId],
    );
    expect(history).toEqual([
      {
        to_state: 'waiting',
        reason: 'declined: missing-part: no relay left',
        actor: 'Theo Larkspur',
      },
    ]);
    const { stops } = await dayOf(theo);
    expect(stops.map(({ stop }) => [stop.id, stop.state])).toEqual([[second.id, 'offered']]);
  });

  it('asks the desk to ring a customer whose stop is given back on the way', async () => {
    const stop = await travelling(await aStop(server, mara, theo.technicianId));
    const reply = await act(theo, 'declineStop', stop, { reason: 'road-closed', note: '' });
    expect(reply.status).toBe(200);
    const [remark] = await select<{ text: string }>(
      server.sequelize,
      'SELECT text FROM remarks WHERE call_id = ?',
      [stop.callId],
    );
    expect(remark?.text).toContain('ring them');
  });
});

describe('arrival times', () => {
  it('come from the drive when travel starts, and the customer is told', async () => {
    const stop = await accepted(await aStop(server, mara, theo.technicianId));
    // Five hundredths of a degree of latitude: 5.56 km straight, 7.5 km driven at 25 mph, 2 min to park.
    const reply = await act(theo, 'startTravel', stop, { from: [-47.7, 36.45] });
    const { etaAt, driveMinutes } = (reply.body as { card: StopCard }).card.stop;
    const minutes = ((5.56 * 1.35) / (25 * 1.609344)) * 60 + 2;
    expect(((etaAt ?? 0) - NIGHT) / MINUTE_MS).toBeCloseTo(minutes, 1);
    expect(driveMinutes).toBeCloseTo(minutes, 1);
    const texts = await MessageRecord.findAll({ where: { callId: stop.callId } });
    expect(texts.map((text) => text.milestone)).toContain('on-the-way');
  });

  it('are the technician’s to correct while driving; the customer is told of a large move', async () => {
    const stop = await travelling(await aStop(server, mara, theo.technicianId));
    server.setNow(NIGHT + 20 * MINUTE_MS);
    const reply = await act(theo, 'tellEta', stop, { etaAt: NIGHT + 3 * HOUR_MS });
    expect((reply.body as { card: StopCard }).card.stop).toMatchObject({
      etaAt: NIGHT + 3 * HOUR_MS,
      arriveAt: NIGHT + 3 * HOUR_MS,
      version: stop.version + 1,
    });
    const texts = await MessageRecord.findAll({ where: { callId: stop.callId } });
    expect(texts.some((text) => text.body.includes('5:00'))).toBe(true);
  });

  it('of yesterday or of the day after tomorrow are refused', async () => {
    const stop = await travelling(await aStop(server, mara, theo.technicianId));
    for (const etaAt of [NIGHT - HOUR_MS, NIGHT + 30 * HOUR_MS]) {
      const reply = await act(theo, 'tellEta', stop, { etaAt });
      expect(reply.status).toBe(422);
      expect(reply.body).toMatchObject({ type: '/problems/times-disagree' });
    }
  });

  it('of the stops behind move with a visit that takes longer', async () => {
    const first = await aStop(server, mara, theo.technicianId);
    const second = await aStop(server, mara, theo.technicianId);
    const here = await onSite(first);
    server.setNow(NIGHT + 2 * HOUR_MS);
    await finish(here);
    const [next] = (await dayOf(theo)).stops;
    expect(next?.stop.id).toBe(second.id);
    expect(next?.stop.arriveAt).toBe(NIGHT + 2 * HOUR_MS);
    expect(next?.stop.arriveAt).toBeGreaterThan(second.arriveAt);
  });
});

describe('who may', () => {
  it('be no one but the technician whose stop it is: for others there is none', async () => {
    const ilse = await aTechnician(server, 'Ilse Rowan');
    const stop = await aStop(server, mara, theo.technicianId);
    const bodies = {
      acceptStop: {},
      declineStop: { reason: 'other', note: '' },
      startTravel: { from: null },
      tellEta: { etaAt: NIGHT + HOUR_MS },
      arrive: {},
      finishStop: { outcome: 'restored', note: '', partsUsed: [] },
    } as const;
    for (const [route, body] of Object.entries(bodies)) {
      const name = route as keyof typeof bodies;
      expect((await act(ilse, name, stop, body)).status).toBe(404);
      for (const role of ['dispatcher', 'manager', 'owner'] as const) {
        const reply = await act(await server.signIn(role), name, stop, body);
        expect(reply.status).toBe(403);
      }
    }
    expect(await stateOf(server, stop.callId)).toBe('offered');
  });

  it('not act on what has changed meanwhile: the answer holds the card as it is now', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    await accepted(stop);
    const reply = await act(theo, 'declineStop', stop, { reason: 'other', note: '' });
    expect(reply.status).toBe(409);
    expect(reply.body).toMatchObject({
      type: '/problems/stale-version',
      current: { stop: { id: stop.id, state: 'accepted', version: stop.version + 1 } },
    });
  });

  it('hears in words why a stop is gone', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    await done(mara, 'pullStop', stop, { reason: 'nobody at home' });
    const reply = await act(theo, 'acceptStop', stop);
    expect(reply.status).toBe(409);
    expect((reply.body as { detail: string }).detail).toContain('nobody at home');
  });

  it('not send what does not fit', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const replies = [
      await act(theo, 'acceptStop', { id: stop.id, version: -1 }),
      await act(theo, 'declineStop', stop, { reason: 'tired', note: '' }),
      await act(theo, 'startTravel', stop, { from: [200, 99] }),
      await act(theo, 'tellEta', stop, { etaAt: 'soon' }),
      await act(theo, 'arrive', stop, { surprise: 1 }),
      await act(theo, 'finishStop', stop, { outcome: 'eaten', note: '', partsUsed: ['spoon'] }),
    ];
    expect(replies.map((reply) => reply.status)).toEqual([422, 422, 422, 422, 422, 422]);
  });

  it('send the same command twice: it counts once, with the first answer', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const commandId = randomUUID();
    const first = await act(theo, 'acceptStop', stop, { commandId });
    const again = await act(theo, 'acceptStop', stop, { commandId });
    expect(again.body).toEqual(first.body);
    expect(again.status).toBe(200);
  });
});

describe('one technician, two places', () => {
  it('is refused by the database itself', async () => {
    const here = await onSite(await aStop(server, mara, theo.technicianId));
    const next = await aStop(server, mara, theo.technicianId);
    await expect(
      change(server.sequelize, "UPDATE stops SET state = 'travelling' WHERE id = ?", [next.id]),
    ).rejects.toMatchObject({ parent: { errno: 1062 } });
    expect((await dayOf(theo)).stops[0]?.stop.id).toBe(here.id);
  });

  it('accepts once when two windows of one technician press at once', async () => {
    const stop = await aStop(server, mara, theo.technicianId);
    const row = { table: 'technicians', id: theo.technicianId } as const;
    const accept = () => act(theo, 'acceptStop', stop);
    const replies = await atOnce(server, row, [accept, accept, accept]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409, 409]);
  });

  it('gives a stop either to the hand that pulls it or to the one that accepts', async () => {
    const row = { table: 'technicians', id: theo.technicianId } as const;
    const pull = (stop: StopDto) => () => act(mara, 'pullStop', stop, { reason: 'at the desk' });
    const accept = (stop: StopDto) => () => act(theo, 'acceptStop', stop);
    const orders = [
      (stop: StopDto) => [pull(stop), accept(stop)],
      (stop: StopDto) => [accept(stop), pull(stop)],
    ];
    for (const order of orders) {
      const stop = await aStop(server, mara, theo.technicianId);
      const replies = await atOnce(server, row, order(stop));
      expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
      const won = replies.find((reply) => reply.status === 200)?.body as { card?: StopCard };
      expect(await stateOf(server, stop.callId)).toBe(won.card ? 'accepted' : 'waiting');
      if (won.card) await done(mara, 'pullStop', won.card.stop, { reason: 'next round' });
    }
  });
});
