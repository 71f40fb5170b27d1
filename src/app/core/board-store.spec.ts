import { provideHttpClient } from '@angular/common/http';
import {
  HttpTestingController,
  provideHttpClientTesting,
  type TestRequest,
} from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import type { BoardPicture } from '@shared/contract/board';
import { Announce } from './announce';
import { BoardStore } from './board-store';
import { LIVE_SOCKET } from './live';
import { Session } from './session';
import {
  aBoard,
  aCallRow,
  aMe,
  aStop,
  aStorm,
  aTechnician,
  callsChanged,
  FakeSocket,
  idOf,
  NOW,
  numbered,
  settled,
  STORM_ID,
} from './testing';

const BOARD_URL = `/api/storms/${STORM_ID}/board`;
const tally = jest.fn();

describe('BoardStore', () => {
  let socket: FakeSocket;
  let http: HttpTestingController;
  let board: BoardStore;

  beforeEach(async () => {
    tally.mockReset();
    socket = new FakeSocket();
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        { provide: LIVE_SOCKET, useFactory: () => socket.asSocket() },
        { provide: Announce, useValue: { tally } },
      ],
    });
    http = TestBed.inject(HttpTestingController);
    const asked = TestBed.inject(Session).refresh();
    http.expectOne('/api/me').flush({ me: aMe() });
    await asked;
    board = TestBed.inject(BoardStore);
  });
  afterEach(() => {
    jest.useRealTimers();
    TestBed.resetTestingModule();
  });

  const pictureRequest = (): TestRequest => http.expectOne(BOARD_URL);

  async function open(picture: BoardPicture = aBoard()): Promise<void> {
    board.open();
    socket.up();
    pictureRequest().flush(picture);
    await settled();
    http.match(`/api/storms/${STORM_ID}/pockets`).forEach((one) => one.flush({ pockets: [] }));
    await settled();
  }

  const name = (n: number): string | undefined => board.calls().get(idOf(1000 + n))?.name;
  const renamed = (n: number, newName: string, version = 2) =>
    aCallRow(n, { name: newName, version });

  it('shows the picture, and is live only after what was missed has been asked for', async () => {
    board.open();
    socket.up();
    expect(board.link()).toBe('connecting');
    pictureRequest().flush(aBoard());
    await settled();
    expect(socket.asked).toEqual([
      { event: 'board:resume', sent: { stormId: STORM_ID, after: 10 } },
    ]);
    expect(board.link()).toBe('live');
    expect(board.calls().size).toBe(2);
    expect(board.n()).toBe(10);
  });

  it('shows the picture before the socket is up, and asks once it is', async () => {
    board.open();
    pictureRequest().flush(aBoard());
    await settled();
    expect(board.calls().size).toBe(2);
    expect(board.link()).toBe('connecting');
    expect(socket.asked).toEqual([]);
    socket.up();
    await settled();
    expect(socket.asked).toHaveLength(1);
    expect(board.link()).toBe('live');
  });

  it('applies changes in their order', async () => {
    await open();
    socket.announce('board:changed', callsChanged(11, renamed(1, 'first')));
    socket.announce('board:changed', callsChanged(12, renamed(1, 'second')));
    await waitMs(300);
    expect(name(1)).toBe('second');
    expect(board.n()).toBe(12);
    expect(socket.asked).toHaveLength(1);
  });

  it('ignores a change that comes twice', async () => {
    await open();
    socket.announce('board:changed', callsChanged(11, renamed(1, 'new', 2)));
    socket.announce('board:changed', callsChanged(12, renamed(1, 'newer', 3)));
    socket.announce('board:changed', callsChanged(11, renamed(1, 'new', 2)));
    await waitMs(300);
    expect(name(1)).toBe('newer');
    expect(board.n()).toBe(12);
    expect(socket.asked).toHaveLength(1);
  });

  it('fills a gap by asking, and applies what came early after what was missing', async () => {
    await open();
    socket.answer = () => ({
      kind: 'changes',
      changes: [callsChanged(11, renamed(1, 'eleven')), callsChanged(12, renamed(1, 'twelve', 3))],
    });
    socket.announce('board:changed', callsChanged(13, renamed(2, 'thirteen')));
    expect(name(2)).toBe('Household 2');
    await waitMs(300);
    expect(socket.asked.at(-1)?.sent).toEqual({ stormId: STORM_ID, after: 10 });
    expect([name(1), name(2)]).toEqual(['twelve', 'thirteen']);
    expect(board.n()).toBe(13);
  });

  it('puts two changes that changed places into order without asking twice for nothing', async () => {
    await open();
    let release: (value: unknown) => void = () => undefined;
    socket.answer = () => new Promise((done) => (release = done));
    socket.announce('board:changed', callsChanged(12, renamed(1, 'twelve', 3)));
    socket.announce('board:changed', callsChanged(11, renamed(1, 'eleven', 2)));
    release({ kind: 'changes', changes: [callsChanged(11, renamed(1, 'eleven', 2))] });
    await waitMs(300);
    expect(name(1)).toBe('twelve');
    expect(board.n()).toBe(12);
  });

  it('never lets an older version overwrite a newer one', async () => {
    await open(aBoard({ calls: [aCallRow(1, { version: 5, name: 'as it is' })] }));
    socket.announce('board:changed', callsChanged(11, renamed(1, 'stale', 4)));
    await settled();
    expect(name(1)).toBe('as it is');
    expect(board.n()).toBe(11);
  });

  it('ends after a break with the same picture as a board that stayed', async () => {
    await open();
    socket.cut();
    expect(board.link()).toBe('lost');
    socket.answer = () => ({
      kind: 'changes',
      changes: [
        callsChanged(11, renamed(1, 'while away')),
        numbered(12, { kind: 'stops', stops: [aStop(1)] }),
      ],
    });
    socket.up();
    await waitMs(300);
    expect(socket.asked.at(-1)?.sent).toEqual({ stormId: STORM_ID, after: 10 });
    expect(name(1)).toBe('while away');
    expect(board.stops().size).toBe(1);
    expect(board.link()).toBe('live');
  });

  it('starts over when too much was missed', async () => {
    await open();
    socket.cut();
    socket.answer = () => ({ kind: 'start-over' });
    socket.up();
    await settled();
    http.expectOne('/api/me').flush({ me: aMe() });
    await settled();
    socket.answer = () => ({ kind: 'changes', changes: [] });
    pictureRequest().flush(aBoard({ n: 900, calls: [aCallRow(7)] }));
    await settled();
    expect([...board.calls().keys()]).toEqual([idOf(1007)]);
    expect(board.n()).toBe(900);
    expect(board.link()).toBe('live');
  });

  it('starts over when the answer leaves a hole', async () => {
    await open();
    socket.answer = () => ({ kind: 'changes', changes: [callsChanged(14, renamed(1, 'late'))] });
    socket.announce('board:changed', callsChanged(13, renamed(1, 'early')));
    await settled();
    http.expectOne('/api/me').flush({ me: aMe() });
    await settled();
    pictureRequest().flush(aBoard({ n: 14 }));
    await settled();
    expect(board.n()).toBe(14);
  });

  it('does not lose what is announced while the picture is on its way', async () => {
    board.open();
    socket.up();
    socket.announce('board:changed', callsChanged(10, renamed(1, 'in the picture already')));
    socket.announce('board:changed', callsChanged(11, renamed(2, 'after the picture')));
    pictureRequest().flush(aBoard());
    await waitMs(300);
    expect([name(1), name(2)]).toEqual(['Household 1', 'after the picture']);
  });

  it('tries again after a failed picture, and says why it is empty until then', async () => {
    board.open();
    pictureRequest().error(new ProgressEvent('error'));
    await settled();
    expect(board.problem()?.code).toBe('no-connection');
    expect(board.isLoaded()).toBe(false);
    await waitMs(1_600);
    pictureRequest().flush(aBoard());
    await settled();
    expect(board.problem()).toBeNull();
    expect(board.calls().size).toBe(2);
  });

  it('shows a burst with few writes: the first at once, the rest within a quarter of a second', async () => {
    await open();
    await waitMs(300);
    const seen = new Set<unknown>([board.calls()]);
    for (let n = 11; n <= 60; n++) {
      socket.announce('board:changed', callsChanged(n, renamed(1, `change ${n}`, n)));
      seen.add(board.calls());
    }
    expect(name(1)).toBe('change 11');
    await waitMs(300);
    seen.add(board.calls());
    expect(name(1)).toBe('change 60');
    expect(seen.size).toBe(3);
  });

  it('takes a reply at once, but not over a newer announcement', async () => {
    await open();
    board.takeReply({ kind: 'calls', calls: [renamed(1, 'mine', 2)] });
    expect(name(1)).toBe('mine');
    socket.announce('board:changed', callsChanged(11, aCallRow(2, { unreadTexts: 1, version: 2 })));
    board.takeReply({ kind: 'calls', calls: [aCallRow(2, { unreadTexts: 0, version: 2 })] });
    await settled();
    expect(board.calls().get(idOf(1002))?.unreadTexts).toBe(1);
  });

  it('keeps only stops that are still to be done, in the order of each route', async () => {
    await open(aBoard({ stops: [aStop(2), aStop(1)] }));
    expect(
      board
        .routes()
        .get(idOf(2001))
        ?.map((stop) => stop.position),
    ).toEqual([1, 2]);
    socket.announce(
      'board:changed',
      numbered(11, { kind: 'stops', stops: [aStop(1, { state: 'done', version: 2 })] }),
    );
    await settled();
    expect([...board.stops().keys()]).toEqual([idOf(3002)]);
  });

  it('keeps the newest position of a technician, however it came', async () => {
    await open();
    const newer = { lonLat: [-40.1, 34.1] as [number, number], at: NOW + 2, accuracyMeters: 5 };
    const older = { lonLat: [-40.2, 34.2] as [number, number], at: NOW + 1, accuracyMeters: 5 };
    socket.announce('technician:moved', idOf(2001), newer);
    await waitMs(300);
    socket.announce(
      'board:changed',
      numbered(11, {
        kind: 'technicians',
        technicians: [aTechnician(1, { name: 'Renamed', position: older, version: 2 })],
      }),
    );
    socket.announce('technician:moved', idOf(2001), older);
    await waitMs(300);
    expect(board.technicians().get(idOf(2001))).toMatchObject({
      name: 'Renamed',
      position: { at: NOW + 2 },
    });
  });

  it('follows the storm itself: closed here is closed everywhere', async () => {
    await open();
    socket.announce(
      'board:changed',
      numbered(11, { kind: 'storm', storm: aStorm({ state: 'closed', version: 2 }) }),
    );
    await settled();
    expect(TestBed.inject(Session).storm()?.state).toBe('closed');
  });

  it('asks which storm is open when a change of another one comes', async () => {
    await open();
    socket.announce('board:changed', { ...callsChanged(1, aCallRow(9)), stormId: idOf(77) });
    const other = aStorm({ id: idOf(77), name: 'The next one' });
    http.expectOne('/api/me').flush({ me: { ...aMe(), storm: other } });
    await settled();
    TestBed.tick();
    http.expectOne('/api/me').flush({ me: { ...aMe(), storm: other } });
    await settled();
    http
      .expectOne(`/api/storms/${idOf(77)}/board`)
      .flush(aBoard({ n: 1, storm: other, calls: [] }));
    await settled();
    expect(board.storm()?.name).toBe('The next one');
    expect(board.calls().size).toBe(0);
  });

  it('tells of new calls in sum, not of changed ones', async () => {
    await open();
    socket.announce('board:changed', callsChanged(11, renamed(1, 'changed'), aCallRow(3)));
    await settled();
    expect(tally).toHaveBeenCalledWith('new call', 1);
  });

  it('ranks open calls by urgency and drops those that are settled', async () => {
    await open(
      aBoard({
        calls: [aCallRow(30), aCallRow(1), aCallRow(2, { state: 'restored' }), aCallRow(3)],
      }),
    );
    expect(board.ranked().map(({ call }) => call.number)).toEqual([1, 3, 30]);
    board.filter.update((filter) => ({ ...filter, text: 'household 3' }));
    expect(board.shown().map(({ call }) => call.number)).toEqual([3, 30]);
  });
});

const waitMs = (ms: number): Promise<void> => new Promise((done) => setTimeout(done, ms));
