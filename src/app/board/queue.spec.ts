import { CdkVirtualScrollViewport } from '@angular/cdk/scrolling';
import { provideZonelessChangeDetection, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { By } from '@angular/platform-browser';
import type { CallRow } from '@shared/contract/calls';
import { HOUR_MS } from '@shared/domain/instant';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { NO_FILTER, type QueueFilter } from '../core/queue-filter';
import { DEFAULT_WEIGHING, type RankedCall, rankedCall } from '../core/ranking';
import { Session } from '../core/session';
import { Queue } from './queue';

const NOW = Date.UTC(2026, 8, 3, 6, 0);

const aCall = (number: number, part: Partial<CallRow> = {}): CallRow => ({
  id: `call-${number}`,
  stormId: 'storm-1',
  number,
  state: 'waiting',
  version: 1,
  receivedAt: NOW - HOUR_MS,
  settledAt: null,
  name: `Caller ${number}`,
  phone: '+12525550142',
  address: {
    text: `${number} Tern Court, Northshore`,
    unitNo: '',
    lonLat: null,
    kind: 'unlocated',
  },
  areaId: null,
  lostAt: NOW - 2 * HOUR_MS,
  restoredAt: null,
  units: [
    {
      id: `unit-${number}`,
      kind: 'refrigerator',
      compartments: [
        {
          kind: 'fresh-food',
          valueCents: 15_000,
          atRiskAt: NOW + HOUR_MS,
          earliestAt: NOW + HOUR_MS,
          likelyAt: NOW + 2 * HOUR_MS,
          saveByAt: NOW + 2 * HOUR_MS,
        },
      ],
    },
  ],
  skills: [],
  parts: [],
  claim: null,
  technicianId: null,
  etaAt: null,
  danger: false,
  householdAtRisk: false,
  unreadTexts: 0,
  cutOff: false,
  source: 'phone',
  ...part,
});

class FakeBoard {
  private readonly order = signal<readonly CallRow[]>([]);
  readonly calls = signal<ReadonlyMap<string, CallRow>>(new Map());
  readonly ranked = signal<readonly RankedCall[]>([]);
  readonly shown = this.ranked;
  readonly openCalls = this.order;
  readonly filter = signal<QueueFilter>(NO_FILTER);
  readonly selectedCallId = signal<string | null>(null);
  readonly hoveredCallId = signal<string | null>(null);
  readonly areas = signal(new Map());
  readonly pockets = signal([]);
  readonly storm = signal({ id: 'storm-1' });
  readonly isLoaded = signal(true);

  /** What the server has just announced: these calls, in this order of urgency. */
  announce(...calls: CallRow[]): void {
    this.order.set(calls);
    this.calls.set(new Map([...this.calls(), ...calls.map((call) => [call.id, call] as const)]));
    this.ranked.set(calls.map((call) => rankedCall(call, NOW, DEFAULT_WEIGHING)));
  }
}

class QueueHarness {
  constructor(
    private readonly fixture: ComponentFixture<Queue>,
    readonly board: FakeBoard,
  ) {}

  get host(): HTMLElement {
    return this.fixture.nativeElement as HTMLElement;
  }
  private get body(): HTMLElement {
    return this.host.querySelector<HTMLElement>('.body')!;
  }
  private get grid(): HTMLElement {
    return this.host.querySelector<HTMLElement>('[role=grid]')!;
  }

  async settle(): Promise<void> {
    await this.fixture.whenStable();
    await new Promise((resolve) => setTimeout(resolve, 40));
    await this.fixture.whenStable();
  }
  async point(at: 'rows' | 'elsewhere'): Promise<void> {
    this.body.dispatchEvent(new MouseEvent(at === 'rows' ? 'mouseenter' : 'mouseleave'));
    await this.settle();
  }
  async press(key: string): Promise<void> {
    this.grid.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true }));
    await this.settle();
  }
  async focus(): Promise<void> {
    this.grid.focus();
    await this.settle();
  }
  rows(): string[] {
    return [...this.host.querySelectorAll<HTMLElement>('[data-call]')].map(
      (row) => row.querySelector('.number strong')?.textContent ?? '',
    );
  }
  waiting(): string {
    return this.host.querySelector('.waiting')?.textContent?.trim() ?? '';
  }
}

async function aQueue(...calls: CallRow[]): Promise<QueueHarness> {
  const board = new FakeBoard();
  board.announce(...calls);
  TestBed.configureTestingModule({
    providers: [
      provideZonelessChangeDetection(),
      { provide: BoardStore, useValue: board },
      { provide: Clock, useValue: { now: () => NOW } },
      { provide: Keys, useValue: { register: () => undefined } },
      { provide: Announce, useValue: { say: () => undefined } },
      {
        provide: Session,
        useValue: { user: signal({ id: 'me' }), zone: signal('America/New_York') },
      },
    ],
  });
  const fixture = TestBed.createComponent(Queue);
  document.body.append(fixture.nativeElement as HTMLElement);
  await fixture.whenStable();
  // jsdom has no layout; give the viewport the height that a screen would.
  const viewport = fixture.debugElement.query(By.directive(CdkVirtualScrollViewport));
  Object.defineProperty(viewport.nativeElement, 'clientHeight', { value: 520 });
  (viewport.componentInstance as CdkVirtualScrollViewport).checkViewportSize();
  const harness = new QueueHarness(fixture, board);
  await harness.settle();
  return harness;
}

describe('Queue', () => {
  it('follows the live order while nobody is at the rows', async () => {
    const queue = await aQueue(aCall(1), aCall(2));
    queue.board.announce(aCall(3), aCall(2), aCall(1));
    await queue.settle();
    expect(queue.rows()).toEqual(['3', '2', '1']);
  });

  it('moves no row under the pointer, says what waits, and takes it when asked', async () => {
    const queue = await aQueue(aCall(1), aCall(2));
    await queue.point('rows');
    queue.board.announce(aCall(3), aCall(4), aCall(2), aCall(1));
    await queue.settle();
    expect(queue.rows()).toEqual(['1', '2']);
    expect(queue.waiting()).toBe('2 newer, 1 moved: press U to take the new order');

    queue.host.querySelector<HTMLElement>('.waiting')!.click();
    await queue.settle();
    expect(queue.rows()).toEqual(['3', '4', '2', '1']);
    expect(queue.waiting()).toBe('');
  });

  it('moves no row while the keyboard works in them, and changes them in place', async () => {
    const queue = await aQueue(aCall(1), aCall(2));
    await queue.focus();
    queue.board.announce(aCall(2), aCall(1, { state: 'planned', version: 2 }));
    await queue.settle();
    expect(queue.rows()).toEqual(['1', '2']);
    expect(queue.host.querySelector('[data-call=call-1] .state')?.textContent).toContain(
      'On a route',
    );
  });

  it('keeps the row of a call that was settled where it is until the reader has gone', async () => {
    const queue = await aQueue(aCall(1), aCall(2));
    await queue.point('rows');
    queue.board.announce(aCall(2));
    await queue.settle();
    expect(queue.rows()).toEqual(['1', '2']);
    await queue.point('elsewhere');
    expect(queue.rows()).toEqual(['2']);
  });

  it('takes the rows of a new filter at once, even under the pointer', async () => {
    const queue = await aQueue(aCall(1), aCall(2));
    await queue.point('rows');
    queue.board.filter.set({ ...NO_FILTER, text: '2' });
    queue.board.announce(aCall(2));
    await queue.settle();
    expect(queue.rows()).toEqual(['2']);
  });

  it('keeps the selection through live updates', async () => {
    const queue = await aQueue(aCall(1), aCall(2), aCall(3));
    queue.board.selectedCallId.set('call-2');
    queue.board.announce(aCall(9), aCall(3), aCall(2), aCall(1));
    await queue.settle();
    const selected = queue.host.querySelector<HTMLElement>('[aria-selected=true]');
    expect(selected?.dataset['call']).toBe('call-2');
    expect(selected?.getAttribute('aria-rowindex')).toBe('4');
  });

  it('moves by the arrow keys and names the row for those who listen', async () => {
    const queue = await aQueue(aCall(1), aCall(2), aCall(3));
    await queue.focus();
    expect(queue.board.selectedCallId()).toBe('call-1');
    await queue.press('ArrowDown');
    await queue.press('ArrowDown');
    expect(queue.board.selectedCallId()).toBe('call-3');
    const grid = queue.host.querySelector('[role=grid]')!;
    expect(grid.getAttribute('aria-activedescendant')).toBe('queue-row-call-3');
    expect(grid.getAttribute('aria-rowcount')).toBe('4');
    await queue.press('Home');
    expect(queue.board.selectedCallId()).toBe('call-1');
  });

  it('draws at most 60 of 3,000 rows', async () => {
    const queue = await aQueue(...Array.from({ length: 3000 }, (_, i) => aCall(i + 1)));
    expect(queue.rows().length).toBeGreaterThan(10);
    expect(queue.rows().length).toBeLessThanOrEqual(60);
  });
});
