import { CUSTOM_ELEMENTS_SCHEMA, provideZonelessChangeDetection, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatIcon } from '@angular/material/icon';
import type { CallDetail } from '@shared/contract/calls';
import { MINUTE_MS } from '@shared/domain/instant';
import { SAFETY_QUESTIONS } from '@shared/domain/phone-check/safety-questions';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { Drafts } from '../core/drafts';
import { CallModel } from './call-model';
import { PhoneCheckPanel } from './phone-check-panel';

const aDetail = (answers: Record<string, string | number> = {}): CallDetail =>
  ({
    row: { id: 'call-1' },
    units: [{ id: 'unit-1', kind: 'fridge-freezer', compressorStart: 'relay', place: 'garage' }],
    phoneCheck: { answers, startedAt: null, concludedAt: null },
  }) as unknown as CallDetail;

/** Stands in for the call: takes answers, or refuses them as a stale write is refused. */
class FakeCall {
  readonly detail = signal<CallDetail | null>(aDetail());
  readonly isMine = signal(true);
  readonly isAnothers = signal(false);
  readonly isBusy = signal(false);
  readonly claim = signal<{ name: string } | null>(null);
  readonly sent: Record<string, string | number>[] = [];
  refuses = false;

  answer(answers: Record<string, string | number>): Promise<boolean> {
    if (this.refuses) return Promise.resolve(false);
    this.sent.push(answers);
    this.detail.set(aDetail(answers));
    return Promise.resolve(true);
  }

  takeClaim(): Promise<boolean> {
    this.isMine.set(true);
    return Promise.resolve(true);
  }
}

/** The panel as the person at the keyboard has it. */
class PanelHarness {
  constructor(
    private readonly fixture: ComponentFixture<PhoneCheckPanel>,
    readonly call: FakeCall,
    private readonly time: { now: number },
    readonly warned: string[],
  ) {}

  get host(): HTMLElement {
    return this.fixture.nativeElement as HTMLElement;
  }

  async press(...keys: string[]): Promise<void> {
    for (const key of keys) {
      this.host.dispatchEvent(
        new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }),
      );
      await this.settle();
    }
  }

  async settle(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await this.fixture.whenStable();
  }

  async pass(milliseconds: number): Promise<void> {
    this.time.now += milliseconds;
    await new Promise((resolve) => setTimeout(resolve, 1050));
    await this.settle();
  }

  question(): string {
    return this.host.querySelector('.ask')?.textContent?.trim() ?? '';
  }
  text(): string {
    return this.host.textContent?.replace(/\s+/g, ' ') ?? '';
  }
  timer(): string {
    return this.host.querySelector('.timer .left')?.textContent?.trim() ?? '';
  }
}

const START = Date.UTC(2026, 8, 3, 6, 0);

async function aPanel(call = new FakeCall(), time = { now: START }): Promise<PanelHarness> {
  const warned: string[] = [];
  TestBed.configureTestingModule({
    providers: [
      provideZonelessChangeDetection(),
      { provide: CallModel, useValue: call },
      { provide: Clock, useValue: { now: () => time.now, exact: () => time.now } },
      {
        provide: Announce,
        useValue: { say: () => undefined, warn: (w: string) => warned.push(w) },
      },
    ],
  });
  TestBed.overrideComponent(PhoneCheckPanel, {
    remove: { imports: [MatIcon] },
    add: { schemas: [CUSTOM_ELEMENTS_SCHEMA] },
  });
  TestBed.inject(Drafts).of('user-1');
  const fixture = TestBed.createComponent(PhoneCheckPanel);
  const harness = new PanelHarness(fixture, call, time, warned);
  await harness.settle();
  return harness;
}

describe('PhoneCheckPanel', () => {
  afterEach(() => localStorage.clear());

  it('asks every safety question before anything else', async () => {
    const panel = await aPanel();
    for (const { ask } of SAFETY_QUESTIONS) {
      expect(panel.question()).toBe(ask);
      await panel.press('1');
    }
    expect(SAFETY_QUESTIONS.map(({ ask }) => ask)).not.toContain(panel.question());
  });

  it('takes a digit or the letter of an answer', async () => {
    const panel = await aPanel();
    await panel.press('1', 'n');
    expect(panel.call.sent.at(-1)).toEqual({ fire: 'no', line: 'no' });
  });

  it('stops at smoke, says what to do, and warns aloud', async () => {
    const panel = await aPanel();
    await panel.press('s');
    expect(panel.question()).toBe('');
    expect(panel.text()).toContain('Stop: Smoke or fire');
    expect(panel.text()).toContain('Call 911 from outside');
    expect(panel.warned).toHaveLength(1);
  });

  it('does nothing while another dispatcher holds the call', async () => {
    const call = new FakeCall();
    call.isMine.set(false);
    call.isAnothers.set(true);
    call.claim.set({ name: 'Tom Ebner' });
    const panel = await aPanel(call);
    await panel.press('1', '2', 'n');
    expect(call.sent).toEqual([]);
    expect(panel.text()).toContain('Tom Ebner is on this call');
  });

  it('lets no slip of a key out to the board while a question stands', async () => {
    const panel = await aPanel();
    const board = jest.fn();
    document.addEventListener('keydown', board);
    document.body.append(panel.host);
    await panel.press('x', '9');
    document.removeEventListener('keydown', board);
    expect(board).not.toHaveBeenCalled();
    expect(panel.question()).toBe(SAFETY_QUESTIONS[0]?.ask);
  });

  it('takes back the last answer with Backspace', async () => {
    const panel = await aPanel();
    await panel.press('1', '1', 'Backspace');
    expect(panel.question()).toBe(SAFETY_QUESTIONS[1]?.ask);
    expect(panel.call.sent.at(-1)).toEqual({ fire: 'no' });
  });

  it('keeps answers that were refused, shows that, and sends them with the next one', async () => {
    const panel = await aPanel();
    panel.call.refuses = true;
    await panel.press('1');
    expect(panel.question()).toBe(SAFETY_QUESTIONS[1]?.ask);
    expect(panel.text()).toContain('not saved yet');
    panel.call.refuses = false;
    await panel.press('1');
    expect(panel.call.sent).toEqual([{ fire: 'no', line: 'no' }]);
    expect(panel.text()).not.toContain('not saved yet');
  });

  it('has unsent answers again after a reload', async () => {
    const before = await aPanel();
    before.call.refuses = true;
    await before.press('1', '1');
    TestBed.resetTestingModule();
    const after = await aPanel();
    expect(after.question()).toBe(SAFETY_QUESTIONS[2]?.ask);
  });

  it('runs the five-minute timer on through a reload', async () => {
    const upToWait = {
      fire: 'no',
      line: 'no',
      generator: 'none',
      lights: 'no',
      water: 'no',
      device: 'no',
      power: 'on',
      doing: 'lit-silent',
      settings: 'normal',
    };
    const time = { now: START };
    const call = new FakeCall();
    call.detail.set(aDetail(upToWait));
    const before = await aPanel(call, time);
    expect(before.question()).toContain('five minutes');
    expect(before.timer()).toBe('5:00');
    await before.press('Enter');
    await before.pass(2 * MINUTE_MS);
    expect(before.timer()).toBe('3:00');
    TestBed.resetTestingModule();

    const again = new FakeCall();
    again.detail.set(aDetail(upToWait));
    time.now += MINUTE_MS;
    const after = await aPanel(again, time);
    expect(after.timer()).toBe('2:00');
  });
});
