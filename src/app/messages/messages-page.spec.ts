import { Component, input, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatIcon } from '@angular/material/icon';
import { Router } from '@angular/router';
import type { CallDetail } from '@shared/contract/calls';
import type { MessageDto, MessageList } from '@shared/contract/messages';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Drafts } from '../core/drafts';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { aCallRow, aMe, aStorm, NOW } from '../core/testing';
import { SetbackBox } from '../ui/setback-box';
import { MessageListView } from './message-list';
import { MessagesPage } from './messages-page';
import { ReplyBox } from './reply-box';
import { aMessage } from './testing';
import { ThreadView } from './thread-view';

// It takes the place of another's component.
// eslint-disable-next-line @angular-eslint/component-selector
@Component({ selector: 'mat-icon', template: '' })
class NoIcon {
  readonly svgIcon = input<string>();
}

const PHONE = '+12525550142';
const STRANGER = '+12525550177';
const CALL = aCallRow(1, { phone: PHONE, name: 'Wren Ashdown' });

const UNKNOWN = aMessage(1, {
  phone: PHONE,
  callId: CALL.id,
  state: 'unknown',
  trouble: 'timed out',
});
const REPLY = aMessage(2, {
  phone: PHONE,
  callId: CALL.id,
  direction: 'in',
  state: 'received',
  body: 'Gate code is 12',
  at: NOW - 30_000,
});
const LOST = aMessage(3, {
  phone: STRANGER,
  callId: null,
  direction: 'in',
  state: 'received',
  body: 'Is this the repair people?',
});

/** The server as far as this page speaks to it. */
class FakeServer {
  list: MessageList = {
    needPerson: [UNKNOWN, LOST],
    recent: [REPLY, UNKNOWN, LOST],
    countsByState: { unknown: 1, received: 2 },
    segmentsSent: 12,
  };
  optedOut = false;
  refuses: ProblemError | null = null;
  readonly asked: { name: string; args: { body?: Record<string, unknown> } }[] = [];

  call(name: string, args: { params: Record<string, string>; body?: Record<string, unknown> }) {
    this.asked.push({ name, args });
    if (this.refuses && name !== 'listMessages') return Promise.reject(this.refuses);
    return Promise.resolve(this.answer(name, args));
  }

  named(name: string) {
    return this.asked.filter((one) => one.name === name);
  }

  private answer(
    name: string,
    { params, body }: { params: Record<string, string>; body?: Record<string, unknown> },
  ): unknown {
    switch (name) {
      case 'listMessages':
        return this.list;
      case 'findHousehold':
        return {
          household: { name: 'Wren Ashdown', optedOut: this.optedOut },
          openCall: null,
          earlierCalls: 0,
        };
      case 'readCall':
        return this.detail(this.list.recent.filter(({ callId }) => callId === CALL.id));
      case 'readMessages':
        return this.detail([{ ...REPLY, readAt: NOW, version: 2 }]);
      case 'resolveMessage':
        return { ...UNKNOWN, state: 'sent', readAt: NOW, version: 2 };
      case 'sendMessage':
        return aMessage(9, {
          phone: PHONE,
          callId: params['callId']!,
          state: 'new',
          body: String(body?.['body']),
        });
      default:
        throw new Error(`unexpected: ${name}`);
    }
  }

  private detail(messages: readonly MessageDto[]): CallDetail {
    return { row: CALL, mayText: true, messages } as unknown as CallDetail;
  }
}

describe('MessagesPage', () => {
  let server: FakeServer;
  let board: { calls: ReturnType<typeof signal>; messagesTick: ReturnType<typeof signal<number>> };
  let fixture: ComponentFixture<MessagesPage>;
  const navigate = jest.fn();

  const host = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const rows = (): HTMLElement[] => [...host().querySelectorAll<HTMLElement>('[role=option]')];
  const buttons = (words: string): HTMLButtonElement =>
    [...host().querySelectorAll('button')].find((one) => one.textContent?.includes(words))!;

  async function settle(): Promise<void> {
    for (let i = 0; i < 4; i++) {
      await new Promise((done) => setTimeout(done));
      await fixture.whenStable();
    }
  }
  /** Presses a key where the focus is, as a keyboard does. */
  async function press(key: string): Promise<void> {
    (document.activeElement ?? document.body).dispatchEvent(
      new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }),
    );
    await settle();
  }
  async function click(element: HTMLElement): Promise<void> {
    element.click();
    await settle();
  }

  async function show(): Promise<void> {
    fixture = TestBed.createComponent(MessagesPage);
    document.body.append(host());
    await settle();
  }

  beforeEach(() => {
    Element.prototype.scrollIntoView = jest.fn();
    localStorage.clear();
    navigate.mockReset();
    server = new FakeServer();
    board = { calls: signal(new Map([[CALL.id, CALL]])), messagesTick: signal(0) };
    const drafts = new Drafts();
    drafts.of('user-1');
    TestBed.configureTestingModule({
      providers: [
        { provide: Api, useValue: server },
        {
          provide: BoardStore,
          useValue: {
            ...board,
            link: signal('live'),
            selectedCallId: signal(null),
            takeReply: () => undefined,
          },
        },
        {
          provide: Session,
          useValue: { storm: signal(aStorm()), me: signal(aMe()), zone: signal('UTC') },
        },
        { provide: Drafts, useValue: drafts },
        { provide: Announce, useValue: { say: jest.fn(), notice: jest.fn() } },
        { provide: Router, useValue: { navigate } },
      ],
    });
    for (const part of [MessagesPage, MessageListView, ThreadView, ReplyBox, SetbackBox]) {
      TestBed.overrideComponent(part, {
        remove: { imports: [MatIcon] },
        add: { imports: [NoIcon] },
      });
    }
  });

  it('puts what needs a person before the threads', async () => {
    await show();
    expect(rows().map(({ id }) => id)).toEqual([
      `need-${UNKNOWN.id}`,
      `need-${LOST.id}`,
      `thread-${PHONE}`,
      `thread-${STRANGER}`,
    ]);
    expect(host().querySelector('.bar')?.textContent).toContain('12 segments sent');
  });

  it('opens the thread with the decision in hand, and sends it with the version that was seen', async () => {
    await show();
    await press('j');
    await press('Enter');
    expect(document.activeElement?.textContent?.trim()).toBe('Send again');
    await click(buttons('It was sent'));
    expect(server.named('resolveMessage')[0]?.args.body).toMatchObject({
      decision: 'was-sent',
      version: 1,
    });
    expect(rows().find(({ id }) => id === `need-${UNKNOWN.id}`)?.textContent ?? '').not.toContain(
      'nobody knows',
    );
  });

  it('marks replies as read once the thread is opened, and not before', async () => {
    await show();
    await press('j');
    await press('j');
    await press('j');
    expect(server.named('readMessages')).toHaveLength(0);
    await press('Enter');
    expect(server.named('readMessages')).toHaveLength(1);
  });

  it('sends a reply to the call, and keeps what was written when the line is down', async () => {
    await show();
    await click(rows()[2]!);
    const box = host().querySelector('textarea')!;
    box.value = 'On our way';
    box.dispatchEvent(new Event('input'));
    await settle();
    server.refuses = new ProblemError({
      type: '/problems/no-connection',
      title: 'No connection',
      status: 0,
    });
    await click(buttons('Send text'));
    expect(host().querySelector('textarea')!.value).toBe('On our way');
    server.refuses = null;
    await click(buttons('Try again'));
    const [first, second] = server.named('sendMessage');
    expect(second?.args.body).toEqual(first?.args.body);
  });

  it('takes Enter while a text is on its way: what was written by then goes after it, once', async () => {
    await show();
    await click(rows()[2]!);
    const write = (text: string): void => {
      const box = host().querySelector('textarea')!;
      box.value = text;
      box.dispatchEvent(new Event('input'));
    };
    // Pressed in one breath: nothing of the first has been answered yet.
    const enter = (): void => {
      const button = host().querySelector<HTMLButtonElement>('thaw-reply-box [type=submit]')!;
      if (!button.disabled) host().querySelector('form')!.requestSubmit();
    };
    write('On our way');
    await settle();
    enter();
    enter();
    write('Keep it shut');
    enter();
    await settle();
    await settle();
    expect(
      server.named('sendMessage').map(({ args }) => (args.body as { body: string }).body),
    ).toEqual(['On our way', 'Keep it shut']);
    expect(host().querySelector('textarea')!.value).toBe('');
  });

  it('says that a phone has opted out instead of offering a reply', async () => {
    server.optedOut = true;
    await show();
    await click(rows()[2]!);
    expect(host().querySelector('textarea')).toBeNull();
    expect(host().textContent).toContain('opted out of texts');
  });

  it('goes to the call on the board', async () => {
    await show();
    await click(rows()[2]!);
    await press('b');
    expect(navigate).toHaveBeenCalledWith(['/board'], { queryParams: { call: CALL.id } });
  });

  it('moves no row while somebody is in the list, and says how many are newer', async () => {
    await show();
    host().querySelector<HTMLElement>('[role=listbox]')!.focus();
    const before = rows().map(({ id }) => id);
    server.list = {
      ...server.list,
      recent: [
        aMessage(8, { phone: '+12525550160', callId: null, at: NOW }),
        ...server.list.recent,
      ],
    };
    board.messagesTick.set(1);
    await new Promise((done) => setTimeout(done, 1_600));
    await settle();
    expect(rows().map(({ id }) => id)).toEqual(before);
    expect(host().textContent).toContain('1 newer');
    await press('u');
    expect(rows()).toHaveLength(before.length + 1);
  });

  it('asks once for many changes that come at once', async () => {
    await show();
    const before = server.named('listMessages').length;
    for (let tick = 1; tick <= 20; tick++) {
      board.messagesTick.set(tick);
      await settle();
    }
    await new Promise((done) => setTimeout(done, 1_600));
    expect(server.named('listMessages').length - before).toBe(1);
  });

  it('says in words that there is nothing', async () => {
    server.list = { needPerson: [], recent: [], countsByState: {}, segmentsSent: 0 };
    await show();
    expect(host().textContent).toContain('Nothing waits');
    expect(host().textContent).toContain('No texts yet');
  });
});
