import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatIconTestingModule } from '@angular/material/icon/testing';
import { provideRouter } from '@angular/router';
import type { DayChange } from '@shared/contract/realtime';
import type { StopCard, StopDto, TechnicianDay } from '@shared/contract/routes';
import { MINUTE_MS } from '@shared/domain/instant';
import { CAUTIONS } from '@shared/domain/phone-check/cautions';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { DayStore } from '../core/day-store';
import { LIVE_SOCKET } from '../core/live';
import { Session } from '../core/session';
import {
  aCallRow,
  aMe,
  aStop,
  aTechnician,
  FakeSocket,
  idOf,
  NOW,
  settled,
  STORM_ID,
} from '../core/testing';
import { DayPage } from './day-page';

function aCard(n: number, stop: Partial<StopDto> = {}, card: Partial<StopCard> = {}): StopCard {
  const call = aCallRow(n);
  return {
    stop: aStop(n, stop),
    callNumber: n,
    callState: 'offered',
    name: call.name,
    phone: call.phone,
    address: call.address,
    lostAt: call.lostAt,
    units: call.units.map((unit) => ({ ...unit, place: 'kitchen' })),
    skills: [],
    parts: [],
    causes: [],
    remarks: [],
    danger: false,
    ...card,
  };
}

/** Answers to the phone's question for its position, as a browser gives them. */
class FakeGeolocation {
  watching = 0;
  asked = 0;
  fix: { readonly longitude: number; readonly latitude: number } | null = {
    longitude: -40.1,
    latitude: 34.2,
  };
  private heard: ((fix: GeolocationPosition) => void) | null = null;

  getCurrentPosition(
    found: (fix: GeolocationPosition) => void,
    failed: (error: { code: number; PERMISSION_DENIED: number }) => void,
  ): void {
    this.asked++;
    if (this.fix) found(this.position());
    else failed({ code: 1, PERMISSION_DENIED: 1 });
  }
  watchPosition(found: (fix: GeolocationPosition) => void): number {
    this.watching++;
    this.heard = found;
    return this.watching;
  }
  clearWatch(): void {
    this.watching--;
    this.heard = null;
  }
  drive(): void {
    this.heard?.(this.position());
  }
  private position(): GeolocationPosition {
    return { coords: { ...this.fix, accuracy: 12 } } as unknown as GeolocationPosition;
  }
}

/** The page as the hand on the phone has it. */
class DayHarness {
  constructor(
    readonly fixture: ComponentFixture<DayPage>,
    readonly http: HttpTestingController,
    readonly socket: FakeSocket,
    readonly said: string[],
    readonly time: { now: number },
  ) {}
  private n = 4;

  private get host(): HTMLElement {
    return this.fixture.nativeElement as HTMLElement;
  }
  text(selector?: string): string {
    const found = selector === undefined ? this.host : this.host.querySelector(selector);
    return found?.textContent?.replace(/\s+/g, ' ').trim() ?? '';
  }
  buttons(): string[] {
    return [...this.host.querySelectorAll('button')].map((one) => one.textContent?.trim() ?? '');
  }
  link(words: string): string {
    const link = [...this.host.querySelectorAll('a')].find((a) => a.textContent?.includes(words));
    return link?.getAttribute('href') ?? '';
  }
  async tap(words: string): Promise<void> {
    const all = [...this.host.querySelectorAll<HTMLElement>('button, label.choice')];
    const found = all.find((one) => one.textContent?.trim().startsWith(words));
    if (!found)
      throw new Error(`nothing to tap that reads ${words}; there is: ${this.buttons().join()}`);
    (found.querySelector('input') ?? found).click();
    await this.settle();
  }
  async write(words: string): Promise<void> {
    const field = this.host.querySelector('textarea')!;
    field.value = words;
    field.dispatchEvent(new Event('input'));
    await this.settle();
  }
  /** The one request to this stop's route that waits for its answer. */
  sent(what: string, n = 1) {
    return this.http.expectOne(`/api/stops/${idOf(3000 + n)}/${what}`);
  }
  async answer(what: string, card: StopCard, n = 1): Promise<Record<string, unknown>> {
    const request = this.sent(what, n);
    request.flush({ card });
    await this.settle();
    return request.request.body as Record<string, unknown>;
  }
  async hear(change: DayChange): Promise<void> {
    this.socket.announce('day:changed', { stormId: STORM_ID, n: ++this.n, change });
    await new Promise((done) => setTimeout(done, 270));
    await this.settle();
  }
  async settle(): Promise<void> {
    await settled();
    await this.fixture.whenStable();
    await settled();
  }
}

let geolocation: FakeGeolocation;

async function aPage(...stops: StopCard[]): Promise<DayHarness> {
  const socket = new FakeSocket();
  const said: string[] = [];
  const time = { now: NOW };
  TestBed.configureTestingModule({
    imports: [MatIconTestingModule],
    providers: [
      provideZonelessChangeDetection(),
      provideHttpClient(),
      provideHttpClientTesting(),
      provideRouter([]),
      { provide: LIVE_SOCKET, useFactory: () => socket.asSocket() },
      {
        provide: Clock,
        useValue: { now: () => time.now, exact: () => time.now, correct: () => undefined },
      },
      {
        provide: Announce,
        useValue: { say: (w: string) => said.push(w) },
      },
    ],
  });
  const http = TestBed.inject(HttpTestingController);
  const asked = TestBed.inject(Session).refresh();
  http.expectOne('/api/me').flush({ me: aMe('technician') });
  await asked;
  const day: TechnicianDay = {
    stormId: STORM_ID,
    n: 4,
    technician: aTechnician(1, { van: { 'start-relay': 2 } }),
    stops,
  };
  TestBed.inject(DayStore).open();
  socket.up();
  http.expectOne('/api/day').flush(day);
  await settled();
  const fixture = TestBed.createComponent(DayPage);
  const page = new DayHarness(fixture, http, socket, said, time);
  await page.settle();
  return page;
}

describe('DayPage', () => {
  beforeEach(() => {
    geolocation = new FakeGeolocation();
    Object.defineProperty(navigator, 'geolocation', { value: geolocation, configurable: true });
  });
  afterEach(() => {
    TestBed.resetTestingModule();
    localStorage.clear();
  });

  it('says that the next stop comes by itself while there is none', async () => {
    const page = await aPage();
    expect(page.text()).toContain('Nothing for you yet. The next stop appears here by itself.');
    expect(page.link('Ring the desk')).toBe('tel:+12525550100');
  });

  it('shows the offered stop with the reason for its place, its address and its phone', async () => {
    const page = await aPage(
      aCard(1, {}, { parts: ['start-relay', 'overload'], causes: ['Start relay is burnt'] }),
    );
    expect(page.text('h1')).toBe('1 Tern Lane');
    expect(page.text('.because')).toBe('Here because Nearest with time to save the freezer');
    expect(page.link('Open in maps')).toBe(
      'geo:34.000000,-40.000000?q=34.000000,-40.000000(1%20Tern%20Lane)',
    );
    expect(page.link('Ring')).toBe('tel:+12525550101');
    expect(page.text()).toContain('start relay2 on the van');
    expect(page.text()).toContain('overload protectornone on the van');
    expect(page.buttons()).toEqual(['Decline, with a reason', 'Accept this stop']);
  });

  it('puts danger before everything else', async () => {
    const page = await aPage(aCard(1, {}, { danger: true }));
    expect(page.text().startsWith('Danger was reported on the phone.')).toBe(true);
  });

  it('goes from offer to finish, one thing to do at a time', async () => {
    const page = await aPage(aCard(1), aCard(2, { state: 'planned' }));
    await page.tap('Accept this stop');
    await page.answer('acceptance', aCard(1, { state: 'accepted', version: 2 }));

    await page.tap('Start travel');
    expect(page.text('.bar')).toContain('May the desk see where you are while you drive?');
    await page.tap('Share and start');
    const travel = await page.answer(
      'travel',
      aCard(1, { state: 'travelling', version: 3, etaAt: NOW + 12 * MINUTE_MS }),
    );
    expect(travel).toMatchObject({ from: [-40.1, 34.2], version: 2 });
    expect(page.text('.when')).toBe('Arrive 02:27, in 12 min');

    await page.tap('10 min later');
    const eta = await page.answer(
      'eta',
      aCard(1, { state: 'travelling', version: 4, etaAt: NOW + 22 * MINUTE_MS }),
    );
    expect(eta).toMatchObject({ etaAt: NOW + 22 * MINUTE_MS });

    await page.tap('I have arrived');
    await page.answer('arrival', aCard(1, { state: 'on-site', version: 5 }));
    expect(page.text('.before')).toContain(CAUTIONS['unplug-first'].words);
    expect(page.text('.before')).toContain(CAUTIONS['stored-charge'].words);

    await page.tap('Finish the visit');
    await page.tap('Finish');
    expect(page.text('[role=alert]')).toBe('Choose what came of it first.');
    await page.tap('Cooling again');
    await page.write('Relay was burnt.');
    await page.tap('+');
    await page.tap('Finish: cooling again');
    const finish = await page.answer('finish', aCard(1, { state: 'done', version: 6 }));
    expect(finish).toMatchObject({
      outcome: 'restored',
      note: 'Relay was burnt.',
      partsUsed: ['start-relay'],
      version: 5,
    });
    await page.hear({ kind: 'stop', card: aCard(2, { version: 2 }) });
    expect(page.text('h1')).toBe('2 Tern Lane');
    expect(page.said.at(-1)).toContain('New offer: 2 Tern Lane');
  });

  it('declines only with a reason, and with words when it is something else', async () => {
    const page = await aPage(aCard(1));
    await page.tap('Decline, with a reason');
    await page.tap('Give it back');
    expect(page.text('[role=alert]')).toBe('Choose a reason first.');
    await page.tap('Something else');
    await page.tap('Give it back');
    expect(page.text('[role=alert]')).toBe('Say in a few words what it is.');
    await page.write('Flat tyre');
    await page.tap('Give it back');
    const body = await page.answer('decline', aCard(1, { state: 'declined', version: 2 }));
    expect(body).toMatchObject({ reason: 'other', note: 'Flat tyre' });
    expect(page.text('.done')).toBe('Call 1 is given back.');
    expect(page.text()).toContain('Nothing for you yet');
  });

  it('starts travel when the phone may not say where it is, and does not ask again', async () => {
    geolocation.fix = null;
    const page = await aPage(aCard(1, { state: 'accepted' }));
    await page.tap('Start travel');
    await page.tap('Share and start');
    const body = await page.answer('travel', aCard(1, { state: 'travelling', version: 2 }));
    expect(body).toMatchObject({ from: null });
    expect(page.text()).toContain('This phone does not tell where it is.');
    TestBed.resetTestingModule();

    const again = await aPage(aCard(2, { state: 'accepted' }));
    await again.tap('Start travel');
    again.sent('travel', 2);
  });

  it('never asks the phone for its place when it was told not to', async () => {
    const page = await aPage(aCard(1, { state: 'accepted' }));
    await page.tap('Start travel');
    await page.tap('Start without');
    const body = await page.answer('travel', aCard(1, { state: 'travelling', version: 2 }));
    expect(body).toMatchObject({ from: null });
    expect(geolocation).toMatchObject({ asked: 0, watching: 0 });
  });

  it('reports its place while driving, every 30 seconds at most, and stops on arrival', async () => {
    localStorage.setItem('thawline:share-position', 'yes');
    const page = await aPage(aCard(1, { state: 'travelling' }));
    expect(geolocation.watching).toBe(1);
    geolocation.drive();
    const report = page.http.expectOne('/api/day/position');
    expect(report.request.body).toEqual({
      position: { lonLat: [-40.1, 34.2], at: NOW, accuracyMeters: 12 },
    });
    report.flush({ done: true });
    page.time.now += 29_000;
    geolocation.drive();
    page.http.expectNone('/api/day/position');
    page.time.now += 1_000;
    geolocation.drive();
    page.http.expectOne('/api/day/position').flush({ done: true });
    await page.hear({ kind: 'stop', card: aCard(1, { state: 'on-site', version: 2 }) });
    expect(geolocation.watching).toBe(0);
  });

  it('keeps what could not be sent, through a closed browser, and sends the very same again', async () => {
    const page = await aPage(aCard(1, { state: 'travelling' }));
    await page.tap('I have arrived');
    const first = page.sent('arrival');
    first.error(new ProgressEvent('error'));
    await page.settle();
    expect(page.text('[role=alert]')).toContain(
      'Not sent yet: Arrived at call 1, 02:15. It is kept on this phone',
    );
    expect(page.buttons()).toContain('Send it now');
    expect(page.buttons()).not.toContain('I have arrived');
    TestBed.resetTestingModule();

    const after = await aPage(aCard(1, { state: 'travelling' }));
    const second = after.sent('arrival');
    expect(second.request.body).toEqual(first.request.body);
    second.flush({ card: aCard(1, { state: 'on-site', version: 2 }) });
    await after.settle();
    expect(after.text()).not.toContain('Not sent yet');
    expect(after.buttons()).toContain('Finish the visit');
  });

  it('sends what was kept as soon as the connection is back', async () => {
    const page = await aPage(aCard(1));
    page.socket.cut();
    await page.tap('Accept this stop');
    page.sent('acceptance').error(new ProgressEvent('error'));
    await page.settle();
    page.socket.up();
    await page.settle();
    await page.answer('acceptance', aCard(1, { state: 'accepted', version: 2 }));
    expect(page.buttons()).toContain('Start travel');
  });

  it('keeps a half-filled finish when the page is closed', async () => {
    const page = await aPage(aCard(1, { state: 'on-site' }));
    await page.tap('Finish the visit');
    await page.tap('Needs a part');
    await page.write('Control board, ordered twice');
    TestBed.resetTestingModule();
    const after = await aPage(aCard(1, { state: 'on-site' }));
    await after.tap('Finish the visit');
    await after.tap('Finish: needs a part');
    expect(after.sent('finish').request.body).toMatchObject({
      outcome: 'parts-on-order',
      note: 'Control board, ordered twice',
    });
  });

  it('keeps a form open when the same stop is announced once more', async () => {
    const page = await aPage(aCard(1, { state: 'on-site', version: 5 }));
    await page.tap('Finish the visit');
    await page.hear({ kind: 'stop', card: aCard(1, { state: 'on-site', version: 5 }) });
    await page.tap('Cooling again');
    expect(page.buttons()).toContain('Finish: cooling again');
  });

  it('says what happened when a stop was taken back, and moves on', async () => {
    const page = await aPage(aCard(1), aCard(2, { state: 'planned' }));
    await page.tap('Accept this stop');
    page.sent('acceptance').flush(
      {
        type: '/problems/stale-version',
        title: 'Stale',
        detail: 'This stop is over. Pulled by Mara Quill: it runs again',
        status: 409,
        current: aCard(1, { state: 'pulled', version: 2 }),
      },
      { status: 409, statusText: 'Conflict' },
    );
    await page.settle();
    expect(page.text('[role=alert]')).toContain(
      '“Accepted call 1” was not taken. This stop is over. Pulled by Mara Quill: it runs again',
    );
    await page.hear({ kind: 'stop', card: aCard(2, { version: 2 }) });
    expect(page.text('h1')).toBe('2 Tern Lane');
    expect(page.buttons()).toContain('Accept this stop');
  });

  it('keeps the news of a stop taken back until it is read', async () => {
    const page = await aPage(aCard(1, { state: 'accepted' }));
    await page.hear({ kind: 'gone', stopId: idOf(3001), reason: 'Pulled: it runs again.' });
    expect(page.text('[role=alert]')).toContain(
      'This stop was taken back: 1 Tern Lane, Household 1. Pulled: it runs again.',
    );
    await page.tap('OK');
    expect(page.text()).not.toContain('taken back');
  });

  it('says from when what it shows is, while there is no connection', async () => {
    const page = await aPage(aCard(1));
    expect(page.text('.link')).toBe('');
    page.socket.cut();
    await page.settle();
    expect(page.text('.link')).toContain('Reconnecting. What you see is as of 02:15.');
  });
});
