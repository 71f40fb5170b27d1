import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatButtonToggleHarness } from '@angular/material/button-toggle/testing';
import { provideRouter } from '@angular/router';
import type { PartsAheadDto, WhatIfDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS } from '@shared/domain/instant';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { aCallRow, aMe, aStorm, settled } from '../core/testing';
import { provideIcons } from '../ui/icons';
import { AT, aDrain, aForecast, anOutlook } from './drain-fixture';
import { DrainPage } from './drain-page';

const FULL = aDrain({
  arrivals: 40,
  settledByPhone: 12,
  settledByVisit: 3,
  open: 25,
  valueAtRiskCents: 50_000,
  savedCents: 20_000,
  lostCents: 30_000,
});

const PARTS: PartsAheadDto = {
  at: AT,
  until: AT + 30 * HOUR_MS,
  mostLackChance: 0.05,
  vans: [
    {
      technicianId: aStorm().id,
      name: 'Theo Larkspur',
      stops: 2,
      lackChance: 0.25,
      parts: [{ part: 'start-relay', onVan: 1, expected: 1, lackChance: 0.25, load: 1 }],
    },
  ],
  shelf: [{ part: 'start-relay', onRoutes: 1, waiting: 2.5, onVans: 1, load: 1 }],
  waitingCalls: 5,
};

const WHAT_IF: WhatIfDto = {
  at: AT,
  change: { technicians: 2, overtimeHours: 0, secondShift: 0, phoneStaff: 0, partsOnEachVan: 0 },
  asItIs: anOutlook(),
  changed: anOutlook(),
  difference: {
    emptyHours: { low: -3, middle: -2, high: -1 },
    lostCents: { low: -100, middle: 0, high: 0 },
    medicineLost: { low: 0, middle: 0, high: 0 },
    openAtEnd: { low: 0, middle: 0, high: 0 },
    soonerShare: 1,
  },
  elapsedMs: 5,
};

describe('DrainPage', () => {
  const storm = signal<ReturnType<typeof aStorm> | null>(null);
  const n = signal(1);
  let storms: ReturnType<typeof aStorm>[];
  let answer: DrainDto | ProblemError;
  const asked: { name: string; query?: unknown }[] = [];
  let answerWhatIf: () => void;

  async function show(): Promise<{ text: () => string; loader: HarnessLoader; root: HTMLElement }> {
    const fixture = TestBed.createComponent(DrainPage);
    const root = fixture.nativeElement as HTMLElement;
    await fixture.whenStable();
    await settled();
    await settled();
    await fixture.whenStable();
    return {
      text: () => (root.textContent ?? '').replace(/\s+/g, ' '),
      loader: TestbedHarnessEnvironment.loader(fixture),
      root,
    };
  }

  beforeEach(() => {
    // jsdom draws nothing; the page must not need the picture.
    HTMLCanvasElement.prototype.getContext = () => null;
    asked.length = 0;
    storm.set(aStorm());
    storms = [aStorm()];
    answer = FULL;
    const call = (name: string, args?: { query?: unknown }) => {
      asked.push({ name, query: args?.query });
      if (name === 'listStorms') return Promise.resolve({ storms });
      if (name === 'forecast') return Promise.resolve(aForecast());
      if (name === 'partsAhead') return Promise.resolve(PARTS);
      return answer instanceof ProblemError ? Promise.reject(answer) : Promise.resolve(answer);
    };
    const callUntil = (stop: AbortSignal, name: string, args?: { body?: unknown }) => {
      asked.push({ name, query: args?.body });
      return new Promise((resolve, reject) => {
        stop.addEventListener('abort', () => reject(new DOMException('taken back', 'AbortError')));
        answerWhatIf = () => resolve(WHAT_IF);
      });
    };
    TestBed.configureTestingModule({
      providers: [
        provideIcons(),
        provideRouter([]),
        { provide: Api, useValue: { call, callUntil } },
        { provide: Clock, useValue: { now: signal(AT), exact: () => AT } },
        {
          provide: Session,
          useValue: {
            storm,
            zone: signal('America/New_York'),
            region: signal(aMe().region),
            settings: signal(aMe().settings),
          },
        },
        {
          provide: BoardStore,
          useValue: {
            n,
            storm,
            link: signal('live'),
            calls: signal(new Map([[aCallRow(1).id, aCallRow(1)]])),
          },
        },
      ],
    });
  });

  it('names the source of the map, as its licence asks', async () => {
    const { text } = await show();
    expect(text()).toContain('Map data: Invented');
  });

  it('shows two sums that add up', async () => {
    const { root } = await show();
    const sums = [...root.querySelectorAll('dl')].map((dl) =>
      [...dl.querySelectorAll('dd')].map((dd) => dd.textContent?.trim()),
    );
    expect(sums).toEqual([
      ['40', '12', '3', '25'],
      ['$1,000', '$500', '$200', '$300'],
    ]);
  });

  it('says in words what the pictures show, and holds their figures as a table', async () => {
    const { root, loader } = await show();
    const words = [...root.querySelectorAll('canvas')].map((c) => c.getAttribute('aria-label'));
    expect(words[0]).toContain('40 came in, 15 were settled, 25 are open');
    expect(words[1]).toContain('$200 saved, $500 at risk, $300 lost');
    await (await loader.getHarness(MatButtonHarness.with({ text: /Show the figures/ }))).click();
    const rows = root.querySelectorAll('thaw-time-table tbody tr');
    expect(rows).toHaveLength(2);
    expect(rows[0]?.textContent).toContain('25');
    expect(words[0]).toContain('four times of five between');
    const ahead = [...root.querySelectorAll('thaw-forecast-table tbody tr')].map((row) =>
      [...row.querySelectorAll('td')].map((cell) => cell.textContent?.trim()),
    );
    expect(ahead).toEqual([
      ['25', '25', '25'],
      ['8', '12', '17'],
      ['0', '0', '1'],
    ]);
  });

  it('tries a change of the crew, which can be taken back, and tells the difference', async () => {
    const { root, loader, text } = await show();
    const press = async (words: RegExp) =>
      (await loader.getHarness(MatButtonHarness.with({ text: words }))).click();
    await press(/Try it/);
    expect(text()).toContain('Change a number first');
    expect(asked.some(({ name }) => name === 'whatIf')).toBe(false);

    const box = root.querySelector<HTMLInputElement>('#what-if-technicians');
    box!.value = '2';
    box!.dispatchEvent(new Event('input'));
    await press(/Try it/);
    expect(asked.at(-1)).toMatchObject({
      name: 'whatIf',
      query: { technicians: 2, phoneStaff: 0 },
    });
    expect(text()).toContain('Playing the futures');
    await press(/Stop/);
    expect(text()).not.toContain('Playing the futures');

    await press(/Try it/);
    answerWhatIf();
    await settled();
    await settled();
    await loader.getAllHarnesses(MatButtonHarness);
    expect(text()).toContain('2 technicians more');
    expect(text()).toContain('Empty 2 h 00 sooner');
    expect(root.querySelectorAll('thaw-what-if tbody tr')).toHaveLength(3);
  });

  it('says who on the phones is enough, and what each van lacks', async () => {
    const { root, text } = await show();
    const phones = root.querySelectorAll('thaw-phone-table tbody tr');
    expect(phones[0]?.textContent).toContain('grows');
    expect(phones[1]?.textContent).toContain('2 (now)');
    expect(text()).toContain('To load tonight: 1 × start relay.');
    expect(root.querySelector('thaw-parts-table a')?.getAttribute('href')).toBe(
      `/api/storms/${aStorm().id}/parts?format=csv`,
    );
  });

  it('asks again in the chosen buckets, also for the file', async () => {
    const { root, loader } = await show();
    await (await loader.getHarness(MatButtonToggleHarness.with({ text: '10 min' }))).check();
    await settled();
    await settled();
    expect(asked.filter(({ name }) => name === 'drain').at(-1)?.query).toEqual({
      bucketMinutes: '10',
    });
    expect(root.querySelector('a[download]')?.getAttribute('href')).toBe(
      `/api/storms/${aStorm().id}/drain?format=csv&bucketMinutes=10`,
    );
  });

  it('asks once for many changes, three seconds after the last time', async () => {
    await show();
    const before = asked.filter(({ name }) => name === 'drain').length;
    for (let i = 0; i < 20; i++) {
      n.update((old) => old + 1);
      await settled();
    }
    expect(asked.filter(({ name }) => name === 'drain')).toHaveLength(before);
    await new Promise((done) => setTimeout(done, 3_100));
    expect(asked.filter(({ name }) => name === 'drain')).toHaveLength(before + 1);
  });

  it('keeps the last figures and says so when newer ones cannot be had', async () => {
    const { text, loader } = await show();
    answer = new ProblemError({ type: '/problems/no-connection', title: 'No line', status: 0 });
    await (await loader.getHarness(MatButtonToggleHarness.with({ text: '60 min' }))).check();
    await settled();
    await settled();
    await loader.getAllHarnesses(MatButtonHarness);
    expect(text()).toContain('Figures as of Thu 02:15, not newer: No line');
    expect(text()).toContain('settled by phone');
  });

  it('says that there is no call, no storm, or that the storm is over', async () => {
    answer = aDrain({});
    expect((await show()).text()).toContain('No call yet');

    answer = { ...FULL };
    const closed = aStorm({ state: 'closed', closedAt: AT });
    storm.set(null);
    storms = [closed];
    const over = await show();
    expect(over.text()).toContain('Closed Thu 02:15; these figures are final');
    expect(over.text()).not.toContain('What if');
    expect(over.root.querySelector('thaw-parts-table')).toBeNull();
    expect(over.root.querySelector('thaw-loss-ahead')).toBeNull();

    storms = [];
    expect((await show()).text()).toContain('No storm yet');
  });
});
