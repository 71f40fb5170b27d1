import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatIconTestingModule } from '@angular/material/icon/testing';
import { provideRouter } from '@angular/router';
import type { DayChange } from '@shared/contract/realtime';
import type { StopCard, StopDto, TechnicianDay } from '@shared/contract/routes';
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

/** The technician's phone, for specs of its page. No screen imports this file. */

export function aCard(
  n: number,
  stop: Partial<StopDto> = {},
  card: Partial<StopCard> = {},
): StopCard {
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
export class FakeGeolocation {
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
export class DayHarness {
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

export async function aPage(...stops: StopCard[]): Promise<DayHarness> {
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
