import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatIcon } from '@angular/material/icon';
import { MatIconTestingModule } from '@angular/material/icon/testing';
import { By } from '@angular/platform-browser';
import { provideRouter } from '@angular/router';
import type { BoardPicture } from '@shared/contract/board';
import type { BoardChange } from '@shared/contract/realtime';
import type { PlanDto } from '@shared/contract/routes';
import { HOUR_MS } from '@shared/domain/instant';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { LIVE_SOCKET } from '../core/live';
import { Session } from '../core/session';
import {
  aBoard,
  aCallRow,
  aMe,
  aStop,
  aStorm,
  aTechnician,
  FakeSocket,
  idOf,
  NOW,
  numbered,
  settled,
  STORM_ID,
} from '../core/testing';
import { RoutesPage } from './routes-page';
import { UnplannedList } from './unplanned-list';

const SHIFT = [{ startsAt: NOW - HOUR_MS, endsAt: NOW + 8 * HOUR_MS }];
const ANA = aTechnician(1, { name: 'Ana Quill', shifts: SHIFT });
const BEN = aTechnician(2, { name: 'Ben Holt', shifts: SHIFT });

const figures = {
  savedCents: 50_000,
  lostCents: 10_000,
  driveMinutes: 40,
  driveMiles: 20,
  lateMinutes: 0,
  stops: 2,
  moved: 0,
};
const aPlan = (change: Partial<PlanDto> = {}): PlanDto => ({
  id: idOf(7000),
  stormId: STORM_ID,
  state: 'proposed',
  proposedAt: NOW,
  proposedBy: 'Ana Ruiz',
  routes: [],
  unplanned: [{ callId: idOf(1002), reason: 'capacity', words: 'No shift has room before 19:00.' }],
  figures,
  inForce: figures,
  version: 1,
  ...change,
});

/** The page as the person at the keyboard has it. */
class RoutesHarness {
  n = 10;
  constructor(
    readonly fixture: ComponentFixture<RoutesPage>,
    readonly http: HttpTestingController,
    readonly socket: FakeSocket,
  ) {}

  private get host(): HTMLElement {
    return this.fixture.nativeElement as HTMLElement;
  }
  text(selector = '*'): string {
    const found = selector === '*' ? this.host : this.host.querySelector(selector);
    return found?.textContent?.replace(/\s+/g, ' ').trim() ?? '';
  }
  labels(): string[] {
    return [...this.host.querySelectorAll('button.block')].map(
      (one) => one.getAttribute('aria-label') ?? '',
    );
  }
  async press(key: string, init: KeyboardEventInit = {}): Promise<void> {
    (document.activeElement ?? document.body).dispatchEvent(
      new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...init }),
    );
    await this.settle();
  }
  async click(words: string): Promise<void> {
    const button = [...this.host.querySelectorAll('button')].find((one) =>
      one.textContent?.includes(words),
    );
    if (!button) throw new Error(`no button ${words}`);
    button.click();
    await this.settle();
  }
  async hear(change: BoardChange): Promise<void> {
    this.socket.announce('board:changed', numbered(++this.n, change));
    await new Promise((done) => setTimeout(done, 270));
    await this.settle();
  }
  async settle(): Promise<void> {
    await settled();
    await this.fixture.whenStable();
    await settled();
  }
}

async function aPage(picture: Partial<BoardPicture>): Promise<RoutesHarness> {
  const socket = new FakeSocket();
  TestBed.configureTestingModule({
    imports: [MatIconTestingModule, MatIcon],
    providers: [
      provideZonelessChangeDetection(),
      provideHttpClient(),
      provideHttpClientTesting(),
      provideRouter([]),
      { provide: LIVE_SOCKET, useFactory: () => socket.asSocket() },
      { provide: Clock, useValue: { now: () => NOW, exact: () => NOW, correct: () => undefined } },
    ],
  });
  const http = TestBed.inject(HttpTestingController);
  const asked = TestBed.inject(Session).refresh();
  http.expectOne('/api/me').flush({ me: aMe() });
  await asked;
  TestBed.inject(BoardStore).open();
  socket.up();
  http.expectOne(`/api/storms/${STORM_ID}/board`).flush(aBoard(picture));
  await settled();
  http.match(() => true).forEach((request) => request.flush({ pockets: [] }));
  const fixture = TestBed.createComponent(RoutesPage);
  document.body.append(fixture.nativeElement as HTMLElement);
  const page = new RoutesHarness(fixture, http, socket);
  await page.settle();
  return page;
}

const withStops = (): Partial<BoardPicture> => ({
  technicians: [ANA, BEN],
  calls: [aCallRow(1, { state: 'offered' }), aCallRow(2), aCallRow(3, { state: 'planned' })],
  stops: [aStop(1, { position: 0 }), aStop(3, { position: 1, state: 'planned' })],
});

describe('RoutesPage', () => {
  afterEach(() => document.body.replaceChildren());

  it('says who has to add technicians when there are none', async () => {
    const page = await aPage({ technicians: [], calls: [] });
    expect(page.text('.routes')).toContain('No technician is at work. A manager adds technicians');
  });

  it('says when the next shift begins while nobody is on shift', async () => {
    const later = [{ startsAt: NOW + 5 * HOUR_MS, endsAt: NOW + 14 * HOUR_MS }];
    const page = await aPage({ technicians: [{ ...ANA, shifts: later }] });
    // 06:15 UTC is 02:15 in New York in September.
    expect(page.text('.note-line')).toContain('The next shift begins 07:15 (Ana Quill)');
  });

  it('says that nothing is left to plan, and what waits before that', async () => {
    const none = await aPage({ technicians: [ANA], calls: [aCallRow(4, { state: 'new' })] });
    expect(none.text('thaw-unplanned-list')).toContain(
      'No call waits for a visit. 1 call waits for the phone check first.',
    );
    TestBed.resetTestingModule();
    const all = await aPage({
      technicians: [ANA],
      calls: [aCallRow(1, { state: 'offered' })],
      stops: [aStop(1)],
    });
    expect(all.text('thaw-unplanned-list')).toContain('Every waiting call is on a route.');
  });

  it('tells of each stop its state, its times and whether it comes in time', async () => {
    const page = await aPage(withStops());
    expect(page.labels()[0]).toContain('Call 1. Offered. arrives 02:45, done 03:30.');
    // The fresh food of call 1 is lost at 03:16, before the visit ends.
    expect(page.labels()[0]).toContain('Too late by 14 min for fresh food');
  });

  it('proposes nothing in a storm that was closed while the routes were on screen', async () => {
    const page = await aPage(withStops());
    await page.hear({ kind: 'storm', storm: aStorm({ state: 'closed', version: 2 }) });
    expect(page.text('.routes')).toContain('No storm is open.');
    await page.press('r');
    page.http.expectNone(`/api/storms/${STORM_ID}/plans`);
  });

  it('locks the stop under the cursor with L', async () => {
    const page = await aPage(withStops());
    await page.press('s');
    await page.press('ArrowRight');
    await page.press('l');
    const sent = page.http.expectOne(`/api/stops/${idOf(3001)}/lock`);
    expect(sent.request.body).toMatchObject({ locked: true, version: 1 });
    sent.flush({ stop: aStop(1, { position: 0, locked: true, version: 2 }) });
    await page.settle();
    expect(page.labels()[0]).toContain('Offered, locked');
  });

  it('moves no accepted stop, but pulls it with a reason', async () => {
    const page = await aPage({
      ...withStops(),
      stops: [aStop(1, { position: 0, state: 'accepted' })],
    });
    await page.press('s');
    await page.press('ArrowRight');
    await page.press('l');
    await page.press('m');
    page.http.verify();
    expect(page.text('thaw-stop-detail')).toContain('Accepted: it moves only if you pull it.');
    await page.press('p');
    const field = document.querySelector<HTMLInputElement>('thaw-pull-dialog input')!;
    field.value = 'It runs again';
    field.dispatchEvent(new Event('input'));
    document.querySelector<HTMLButtonElement>('thaw-pull-dialog [type=submit]')!.click();
    // Material takes the dialog away after its animation.
    await new Promise((done) => setTimeout(done, 300));
    await page.settle();
    const sent = page.http.expectOne(`/api/stops/${idOf(3001)}/pull`);
    expect(sent.request.body).toMatchObject({ reason: 'It runs again', version: 1 });
  });

  it('says who comes after the window that the customer agreed to, and by how much', async () => {
    const window = { from: NOW - HOUR_MS, to: NOW };
    const page = await aPage({
      ...withStops(),
      calls: [aCallRow(1, { state: 'offered', window })],
    });
    expect(page.labels()[0]).toContain('30 min after the end of the window');
    expect(page.text('.late')).toBe('+30 min');
    await page.press('s');
    await page.press('ArrowRight');
    expect(page.text('thaw-stop-detail')).toContain('30 min after the end of the window');
  });

  it('moves a stop to whoever is named in the field, by the keyboard alone', async () => {
    const page = await aPage(withStops());
    await page.press('s');
    await page.press('ArrowDown');
    await page.press('ArrowUp');
    await page.press('ArrowRight');
    await page.press('ArrowRight');
    await page.press('m');
    const field = document.querySelector<HTMLInputElement>('thaw-place-dialog input')!;
    const options = (): string[] =>
      [...document.querySelectorAll('thaw-place-dialog [role=option]')].map(
        (one) => `${one.getAttribute('aria-selected')} ${one.textContent?.trim().split(' ')[0]}`,
      );
    expect(options()).toEqual(['true Ana', 'false Ben']);
    field.value = 'ho';
    field.dispatchEvent(new Event('input'));
    await page.settle();
    expect(options()).toEqual(['true Ben']);
    expect(field.getAttribute('aria-activedescendant')).toBe(`to-${BEN.id}`);
    document.querySelector<HTMLButtonElement>('thaw-place-dialog [type=submit]')!.click();
    await new Promise((done) => setTimeout(done, 300));
    await page.settle();
    const sent = page.http.expectOne(`/api/stops/${idOf(3003)}/move`);
    expect(sent.request.body).toMatchObject({ technicianId: BEN.id, position: 0 });
  });

  it('shows what changed when somebody else was faster', async () => {
    const page = await aPage(withStops());
    await page.press('s');
    await page.press('ArrowRight');
    await page.press('l');
    page.http.expectOne(`/api/stops/${idOf(3001)}/lock`).flush(
      {
        type: '/problems/stale-version',
        title: 'Stale',
        detail: 'The stop has changed since you looked at it.',
        status: 409,
        current: aStop(1, { technicianId: BEN.id, position: 0, state: 'planned', version: 4 }),
      },
      { status: 409, statusText: 'Conflict' },
    );
    await page.settle();
    expect(page.text('[role=alert]')).toContain('Technician: Ana Quill, now Ben Holt');
    expect(page.text('[role=alert]')).toContain('State: Offered, now Planned');
    // The cursor has followed its stop.
    expect(page.text('thaw-stop-detail')).toContain('Ben Holt');
  });

  it('repeats the very same command after a lost answer', async () => {
    const page = await aPage(withStops());
    await page.press('s');
    await page.press('ArrowRight');
    await page.press('l');
    const first = page.http.expectOne(`/api/stops/${idOf(3001)}/lock`);
    first.error(new ProgressEvent('error'));
    await page.settle();
    await page.click('Try again');
    const second = page.http.expectOne(`/api/stops/${idOf(3001)}/lock`);
    expect(second.request.body).toEqual(first.request.body);
  });

  it('says why a call is on no route, as the proposal found out', async () => {
    const page = await aPage({ ...withStops(), plan: aPlan() });
    expect(page.text('thaw-plan-panel')).toContain('Food saved');
    // jsdom has no heights, so the virtual list draws no rows; this is what it is given.
    const list = page.fixture.debugElement.query(By.directive(UnplannedList));
    const { calls } = list.componentInstance as UnplannedList;
    expect(calls().map(({ call, why }) => [call.number, why.words])).toEqual([
      [2, 'No shift has room before 19:00.'],
    ]);
  });

  it('has nothing to publish where a proposal leaves every stop as it is', async () => {
    const asBefore = (n: number) => ({
      callId: idOf(1000 + n),
      arriveAt: aStop(n).arriveAt + 60_000,
      startAt: aStop(n).arriveAt + 60_000,
      finishAt: aStop(n).finishAt,
      driveMinutes: 12,
      firm: false,
      because: '',
    });
    const routes = [{ technicianId: ANA.id, stops: [asBefore(1), asBefore(3)] }];
    const page = await aPage({ ...withStops(), plan: aPlan({ routes }) });
    expect(page.text('thaw-plan-panel')).toContain('Nothing to publish: the routes in force stay');
    expect(page.text('thaw-plan-panel')).not.toContain('Ctrl');
    await page.press('Enter', { ctrlKey: true });
    page.http.expectNone(`/api/plans/${idOf(7000)}/publication`);
    await page.click('Close');
    page.http.expectOne(`/api/plans/${idOf(7000)}/discarding`);
  });

  it('publishes by Ctrl and Enter, and offers to propose again when it was overtaken', async () => {
    const page = await aPage({ ...withStops(), plan: aPlan() });
    await page.press('Enter', { ctrlKey: true });
    const sent = page.http.expectOne(`/api/plans/${idOf(7000)}/publication`);
    expect(sent.request.body).toMatchObject({ version: 1 });
    sent.flush(
      { type: '/problems/plan-overtaken', title: 'x', detail: 'The routes changed.', status: 409 },
      { status: 409, statusText: 'Conflict' },
    );
    await page.settle();
    expect(page.text('[role=alert]')).toContain('The routes changed.');
    page.http
      .match((request) => request.url === '/api/me')
      .forEach((me) => me.flush({ me: aMe() }));
    await page.click('Propose again');
    const again = page.http.expectOne(`/api/storms/${STORM_ID}/plans`);
    expect(again.request.body).toMatchObject({ seconds: 2 });
  });

  it.each(['before', 'after'])(
    'tells once who published, when that was announced %s the refusal',
    async (order) => {
      const page = await aPage({ ...withStops(), plan: aPlan() });
      await page.press('Enter', { ctrlKey: true });
      const sent = page.http.expectOne(`/api/plans/${idOf(7000)}/publication`);
      const refuse = (): void =>
        sent.flush(
          {
            type: '/problems/plan-overtaken',
            title: 'x',
            detail: 'Decided or changed.',
            status: 409,
          },
          { status: 409, statusText: 'Conflict' },
        );
      if (order === 'after') refuse();
      await page.hear({ kind: 'plan', plan: aPlan({ state: 'published', version: 2 }) });
      if (order === 'before') refuse();
      await page.settle();
      expect(page.text('[role=alert]')).toContain('Another desk has published this proposal.');
      expect(page.text('aside')).not.toContain('Decided or changed.');
      expect(page.text('aside').split('Another desk has published').length).toBe(2);
    },
  );

  it('tells when a proposal on screen is overtaken, and not when this desk ended it', async () => {
    const page = await aPage({ ...withStops(), plan: aPlan() });
    await page.hear({ kind: 'plan', plan: aPlan({ state: 'overtaken', version: 2 }) });
    expect(page.text('aside')).toContain('it can no longer be published');
    TestBed.resetTestingModule();
    document.body.replaceChildren();

    const own = await aPage({ ...withStops(), plan: aPlan() });
    await own.press('x');
    own.http
      .expectOne(`/api/plans/${idOf(7000)}/discarding`)
      .flush(aPlan({ state: 'discarded', version: 2 }));
    await own.settle();
    expect(own.text('aside')).not.toContain('discarded this proposal');
    expect(own.text('aside')).not.toContain('Propose again');
  });

  it('says what the automatic mode has done, and what it did it for', async () => {
    const page = await aPage(withStops());
    await page.hear({
      kind: 'plan',
      plan: aPlan({
        state: 'published',
        gainCents: 8_400,
        figures: { ...figures, moved: 1 },
        automatic: { because: 'a call came in or changed', heldBack: null },
      }),
    });
    expect(page.text('aside')).toContain(
      'the automatic mode published routes, since a call came in or changed. They gain $84; 1 stop moved.',
    );
    await page.hear({
      kind: 'plan',
      plan: aPlan({
        id: idOf(7001),
        automatic: { because: 'the roads changed', heldBack: 'it changes more stops of Ana Quill' },
      }),
    });
    expect(page.text('thaw-plan-panel')).toContain(
      'Not published by itself: it changes more stops of Ana Quill.',
    );
  });

  it('tells what the automatic mode did after a reload too, until somebody has closed it', async () => {
    const automaticDone = {
      planId: idOf(7002),
      at: NOW - 60_000,
      because: 'the roads changed',
      gainCents: 8_400,
      moved: 2,
    };
    const page = await aPage({ ...withStops(), automaticDone });
    expect(page.text('aside')).toContain('published routes, since the roads changed');
    await page.click('Close');
    expect(page.text('aside')).not.toContain('the roads changed');
    TestBed.resetTestingModule();
    const again = await aPage({ ...withStops(), automaticDone });
    expect(again.text('aside')).not.toContain('the roads changed');
    localStorage.clear();
  });

  it('says in full why the chosen call is on no route, and what would change that', async () => {
    const help = ['Overtime for Ana Quill, 40 min in all: there at 4:10 pm'];
    const page = await aPage(withStops());
    await page.hear({
      kind: 'plan',
      plan: aPlan({
        unplanned: [{ callId: idOf(1002), reason: 'capacity', words: 'No room.', help }],
      }),
    });
    // jsdom scrolls nothing.
    Element.prototype.scrollTo = () => undefined;
    await page.press('w');
    expect(page.text('.whole')).toContain('No room.');
    expect(page.text('.whole li')).toBe(help[0]);
  });

  it('tries other weights beside the routes and keeps nothing, until they are set', async () => {
    const page = await aPage(withStops());
    await page.press('v');
    const dialog = (): HTMLElement => document.querySelector('thaw-try-dialog')!;
    const [driving] = dialog().querySelectorAll('input');
    driving!.value = '80';
    driving!.dispatchEvent(new Event('input'));
    await page.settle();
    dialog().querySelector('form')!.requestSubmit();
    await page.settle();
    const asked = page.http.expectOne(`/api/storms/${STORM_ID}/plan-trials`);
    expect(asked.request.body).toEqual({ seconds: 1, prices: { driveDollarsPerHour: 80 } });
    asked.flush({
      inForce: figures,
      asSet: figures,
      tried: { ...figures, driveMiles: 12 },
      onlyAsSet: [],
      onlyTried: [idOf(1002)],
    });
    await page.settle();
    const text = dialog().textContent?.replace(/\s+/g, ' ');
    expect(text).toContain('better: 8 less');
    expect(text).toContain('Only with the tried weights on a route: 2.');
    page.http.verify();
  });
});
