import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import type { DayChange } from '@shared/contract/realtime';
import type { StopCard, StopDto, TechnicianDay } from '@shared/contract/routes';
import { DayStore } from './day-store';
import { LIVE_SOCKET } from './live';
import {
  aCallRow,
  aMe,
  aStop,
  aStorm,
  aTechnician,
  FakeSocket,
  idOf,
  settled,
  STORM_ID,
} from './testing';
import { Session } from './session';

function aCard(n: number, stop: Partial<StopDto> = {}): StopCard {
  const call = aCallRow(n);
  return {
    stop: aStop(n, stop),
    callNumber: n,
    callState: 'offered',
    name: call.name,
    phone: call.phone,
    address: call.address,
    lostAt: call.lostAt,
    units: [],
    skills: [],
    parts: [],
    causes: [],
    remarks: [],
    danger: false,
  };
}

const aDay = (...stops: StopCard[]): TechnicianDay => ({
  stormId: STORM_ID,
  n: 4,
  technician: aTechnician(1),
  stops,
});

describe('DayStore', () => {
  let socket: FakeSocket;
  let http: HttpTestingController;
  let day: DayStore;

  beforeEach(async () => {
    socket = new FakeSocket();
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        { provide: LIVE_SOCKET, useFactory: () => socket.asSocket() },
      ],
    });
    http = TestBed.inject(HttpTestingController);
    const asked = TestBed.inject(Session).refresh();
    http.expectOne('/api/me').flush({ me: aMe('technician') });
    await asked;
    day = TestBed.inject(DayStore);
  });
  afterEach(() => TestBed.resetTestingModule());

  async function open(picture: TechnicianDay): Promise<void> {
    day.open();
    socket.up();
    http.expectOne('/api/day').flush(picture);
    await settled();
  }

  const announce = async (n: number, change: DayChange): Promise<void> => {
    socket.announce('day:changed', { stormId: STORM_ID, n, change });
    await new Promise((done) => setTimeout(done, 270));
  };

  it('puts the stop to act on first: on site, under way, accepted, offered', async () => {
    await open(aDay(aCard(2, { state: 'offered' }), aCard(1, { state: 'done' })));
    expect(day.next()?.callNumber).toBe(2);
    expect(day.cards().map((card) => card.callNumber)).toEqual([1, 2]);
    await announce(5, { kind: 'stop', card: aCard(3, { state: 'accepted' }) });
    expect(day.next()?.callNumber).toBe(3);
    expect(day.ahead().map((card) => card.callNumber)).toEqual([2, 3]);
  });

  it('asks for what was missed after a break', async () => {
    await open(aDay());
    socket.cut();
    socket.answer = () => ({
      kind: 'changes',
      changes: [{ stormId: STORM_ID, n: 5, change: { kind: 'stop', card: aCard(1) } }],
    });
    socket.up();
    await new Promise((done) => setTimeout(done, 270));
    expect(socket.asked.at(-1)).toEqual({
      event: 'day:resume',
      sent: { stormId: STORM_ID, after: 4 },
    });
    expect(day.next()?.callNumber).toBe(1);
    expect(day.link()).toBe('live');
  });

  it('says why a stop went, and takes it off', async () => {
    await open(aDay(aCard(1)));
    await announce(5, { kind: 'gone', stopId: idOf(3001), reason: 'It runs again.' });
    expect(day.cards()).toEqual([]);
    expect(day.taken()).toMatchObject([
      { card: { name: 'Household 1' }, reason: 'It runs again.' },
    ]);
  });

  it('keeps what was taken until it is acknowledged, but not what was only planned', async () => {
    await open(aDay(aCard(1), aCard(2, { state: 'planned' })));
    await announce(5, { kind: 'gone', stopId: idOf(3001), reason: 'It runs again.' });
    await announce(6, { kind: 'gone', stopId: idOf(3002), reason: 'It runs again.' });
    expect(day.taken().map(({ card }) => card.callNumber)).toEqual([1]);
    day.acknowledgeTaken();
    expect(day.taken()).toEqual([]);
  });

  it('tells of stops that went while it was away too long to be told of each', async () => {
    await open(aDay(aCard(1), aCard(2)));
    socket.cut();
    socket.answer = () => ({ kind: 'start-over' });
    socket.up();
    await settled();
    http.expectOne('/api/me').flush({ me: aMe('technician') });
    await settled();
    socket.answer = () => ({ kind: 'changes', changes: [] });
    http.expectOne('/api/day').flush({ ...aDay(aCard(2)), n: 900 });
    await settled();
    expect(day.taken().map(({ card }) => card.callNumber)).toEqual([1]);
  });

  it('says nothing of a stop that this technician ended, in whichever order the news come', async () => {
    await open(aDay(aCard(1), aCard(2)));
    day.endsByMe(idOf(3001));
    await announce(5, { kind: 'gone', stopId: idOf(3001), reason: 'Finished: cooling restored' });
    day.endsByMe(idOf(3002));
    day.takeReply(aCard(2, { state: 'done', version: 2 }));
    await announce(6, { kind: 'gone', stopId: idOf(3002), reason: 'Finished: cooling restored' });
    expect(day.taken()).toEqual([]);
    expect(day.ahead()).toEqual([]);
  });

  it('never shows an older stop over a newer one, from a reply or from an announcement', async () => {
    await open(aDay(aCard(1, { version: 3, state: 'travelling' })));
    day.takeReply(aCard(1, { version: 2, state: 'accepted' }));
    await announce(5, { kind: 'stop', card: aCard(1, { version: 2, state: 'accepted' }) });
    expect(day.next()?.stop.state).toBe('travelling');
    day.takeReply(aCard(1, { version: 4, state: 'on-site' }));
    expect(day.next()?.stop.state).toBe('on-site');
  });

  it('fetches the day when a storm opens while it had none', async () => {
    await open({ ...aDay(), stormId: null, n: 0 });
    expect(day.link()).toBe('live');
    // The phone took the storm for open: it asks what has become of it.
    const over = { ...aStorm(), state: 'closed' as const, closedAt: 1, version: 9 };
    http.expectOne('/api/me').flush({ me: { ...aMe('technician'), storm: over } });
    await settled();
    expect(TestBed.inject(Session).hasOpenStorm()).toBe(false);
    socket.announce('day:changed', {
      stormId: STORM_ID,
      n: 1,
      change: { kind: 'stop', card: aCard(1) },
    });
    await settled();
    http.expectOne('/api/me').flush({ me: aMe('technician') });
    await settled();
    http.expectOne('/api/day').flush({ ...aDay(aCard(1)), n: 1 });
    await settled();
    expect(day.next()?.callNumber).toBe(1);
  });
});
