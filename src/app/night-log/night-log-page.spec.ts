import { Component, input, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatDialog } from '@angular/material/dialog';
import { MatIcon } from '@angular/material/icon';
import { Router } from '@angular/router';
import type { ColumnGuess, NightLogDto, NightLogRowView } from '@shared/contract/night-logs';
import type { ColumnRole } from '@shared/domain/night-log/column-map';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Drafts } from '../core/drafts';
import { Live } from '../core/live';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { aCallRow, aStorm, idOf, NOW, STORM_ID } from '../core/testing';
import { SetbackBox } from '../ui/setback-box';
import { AsideActions } from './aside-actions';
import { AsideList } from './aside-list';
import { ColumnMapping } from './column-mapping';
import { DropFile } from './drop-file';
import { LogPreview } from './log-preview';
import { LogView } from './log-view';
import { NightLogPage } from './night-log-page';

// It takes the place of another's component.
// eslint-disable-next-line @angular-eslint/component-selector
@Component({ selector: 'mat-icon', template: '' })
class NoIcon {
  readonly svgIcon = input<string>();
}

const LOG_ID = idOf(70);
const CALL = aCallRow(7, { phone: '+12525550142', name: 'Wren Ashdown' });

const column = (index: number, role: ColumnRole, confidence = 0.9): ColumnGuess => ({
  index,
  header: `Title ${index}`,
  role,
  confidence,
  why: 'titled so',
  samples: ['a cell'],
});
const aLog = (change: Partial<NightLogDto> = {}): NightLogDto => ({
  id: LOG_ID,
  stormId: STORM_ID,
  fileName: 'night.csv',
  state: 'read',
  uploadedAt: NOW,
  uploadedBy: 'Ana Ruiz',
  encoding: 'utf-8',
  rowCount: 3,
  doneCount: 0,
  counts: { calls: 1, folded: 1, aside: 1, empty: 0, known: 0 },
  columns: [column(0, 'phone'), column(1, 'altPhone'), column(2, 'remarks', 0.2)],
  trouble: null,
  ...change,
});
const aRow = (line: number, change: Partial<NightLogRowView> = {}): NightLogRowView => ({
  id: null,
  logId: LOG_ID,
  line,
  outcome: 'call',
  reason: '',
  cells: ['(252) 555-0142', '', 'fridge warm'],
  name: 'Wren Ashdown',
  phone: '(252) 555-0142',
  address: '',
  units: 'fridge',
  receivedAt: NOW,
  callId: null,
  ...change,
});
const ASIDE = aRow(4, {
  id: idOf(81),
  outcome: 'aside',
  reason: 'the phone number cannot be read',
});

type Args = { params: Record<string, string>; body?: Record<string, unknown> };

class FakeServer {
  logs: NightLogDto[] = [];
  asides: NightLogRowView[] = [];
  refuses: { readonly name: string; readonly error: ProblemError } | null = null;
  readonly asked: { name: string; args: Args }[] = [];

  call(name: string, args: Args): Promise<unknown> {
    this.asked.push({ name, args });
    if (this.refuses?.name === name) return Promise.reject(this.refuses.error);
    return Promise.resolve(this.answer(name, args));
  }

  named(name: string): Args[] {
    return this.asked.filter((one) => one.name === name).map(({ args }) => args);
  }

  private answer(name: string, { body }: Args): unknown {
    switch (name) {
      case 'listNightLogs':
        return { logs: this.logs };
      case 'listAsides':
        return { rows: this.asides };
      case 'uploadNightLog':
        return { log: aLog(), rows: [aRow(2), aRow(3, { outcome: 'folded' }), ASIDE] };
      case 'previewNightLog': {
        const roles = body?.['columns'] as ColumnRole[];
        const columns = roles.map((role, i) => column(i, role, 1));
        return { log: aLog({ columns }), rows: [aRow(2, { outcome: 'known' })] };
      }
      case 'importNightLog':
        return aLog({ state: 'importing' });
      case 'readNightLog':
        return aLog({ state: 'importing' });
      default:
        return {};
    }
  }
}

describe('NightLogPage', () => {
  let server: FakeServer;
  let fixture: ComponentFixture<NightLogPage>;
  let progressed: (log: NightLogDto) => void;
  const navigate = jest.fn();
  const said = jest.fn();
  const calls = signal(new Map([[CALL.id, CALL]]));

  const host = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const text = (): string => host().textContent ?? '';
  const button = (words: string): HTMLButtonElement => {
    const found = [...host().querySelectorAll('button')].find((one) =>
      one.textContent?.includes(words),
    );
    if (!found) throw new Error(`no button says ${words}`);
    return found;
  };

  async function settle(wait = 0): Promise<void> {
    await new Promise((done) => setTimeout(done, wait));
    for (let i = 0; i < 4; i++) {
      await new Promise((done) => setTimeout(done));
      await fixture.whenStable();
    }
  }
  async function press(key: string, init: KeyboardEventInit = {}): Promise<void> {
    (document.activeElement ?? document.body).dispatchEvent(
      new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...init }),
    );
    await settle();
  }
  async function click(element: HTMLElement): Promise<void> {
    element.click();
    await settle();
  }
  async function choose(file: File): Promise<void> {
    const field = host().querySelector<HTMLInputElement>('input[type=file]')!;
    Object.defineProperty(field, 'files', { configurable: true, value: [file] });
    field.dispatchEvent(new Event('change'));
    await settle(20);
  }
  const aFile = (size = 10): File => {
    const file = new File(['Phone,Msg\n'], 'night.csv');
    Object.defineProperty(file, 'size', { value: size });
    // jsdom's File has no arrayBuffer.
    file.arrayBuffer = () => Promise.resolve(new ArrayBuffer(10));
    return file;
  };
  async function show(log?: string): Promise<void> {
    fixture = TestBed.createComponent(NightLogPage);
    if (log !== undefined) fixture.componentRef.setInput('log', log);
    document.body.append(host());
    await settle();
  }

  beforeEach(() => {
    localStorage.clear();
    navigate.mockReset();
    said.mockReset();
    server = new FakeServer();
    const drafts = new Drafts();
    drafts.of('user-1');
    TestBed.configureTestingModule({
      providers: [
        { provide: Api, useValue: server },
        { provide: BoardStore, useValue: { calls, selectedCallId: signal(null) } },
        { provide: Session, useValue: { storm: signal(aStorm()), zone: signal('UTC') } },
        { provide: Drafts, useValue: drafts },
        { provide: Announce, useValue: { say: said, notice: jest.fn() } },
        { provide: Router, useValue: { navigate } },
        { provide: MatDialog, useValue: { openDialogs: [] } },
        {
          provide: Live,
          useValue: {
            on: (_: string, heard: (log: NightLogDto) => void) => {
              progressed = heard;
              return () => undefined;
            },
          },
        },
      ],
    });
    for (const part of [
      NightLogPage,
      DropFile,
      LogView,
      ColumnMapping,
      LogPreview,
      AsideList,
      AsideActions,
      SetbackBox,
    ]) {
      TestBed.overrideComponent(part, {
        remove: { imports: [MatIcon] },
        add: { imports: [NoIcon] },
      });
    }
  });

  it('shows what would become of the rows before anything is imported', async () => {
    await show();
    await choose(aFile());
    expect(text()).toContain('1 row for a person');
    expect(text()).toContain('Would be put aside for a person: 1');
    expect(text()).toContain('the phone number cannot be read');
    expect(text()).toContain('A guess');
    expect(server.named('importNightLog')).toHaveLength(0);
  });

  it('refuses a file that is too big in words, without sending it', async () => {
    await show();
    await choose(aFile(13 * 1024 * 1024));
    expect(text()).toContain('night.csv has 13.0 MB');
    expect(server.named('uploadNightLog')).toHaveLength(0);
  });

  it('keeps the chosen file when the line is down, and sends it again', async () => {
    await show();
    server.refuses = {
      name: 'uploadNightLog',
      error: new ProblemError({
        type: '/problems/no-connection',
        title: 'No connection',
        status: 0,
      }),
    };
    await choose(aFile());
    expect(text()).toContain('No connection');
    server.refuses = null;
    await click(button('Try again'));
    expect(text()).toContain('1 row for a person');
  });

  it('previews once after several changes, and gives a role to one column only', async () => {
    await show();
    await choose(aFile());
    const [, second, third] = [...host().querySelectorAll('select')];
    third!.value = 'detail';
    third!.dispatchEvent(new Event('change'));
    second!.value = 'phone';
    second!.dispatchEvent(new Event('change'));
    await settle(450);
    expect(server.named('previewNightLog').map(({ body }) => body?.['columns'])).toEqual([
      ['detail', 'phone', 'detail'],
    ]);
  });

  it('shows how far an import is, and what it came to', async () => {
    await show();
    await choose(aFile());
    await press('Enter', { ctrlKey: true });
    expect(server.named('importNightLog')[0]?.body?.['columns']).toEqual([
      'phone',
      'altPhone',
      'remarks',
    ]);
    progressed(aLog({ state: 'importing', doneCount: 2 }));
    await settle();
    const bar = host().querySelector('[role=progressbar]');
    expect(bar?.getAttribute('aria-valuenow')).toBe('66');
    expect(bar?.getAttribute('aria-valuetext')).toBe('2 of 3 rows');
    progressed(aLog({ state: 'imported', doneCount: 3 }));
    await settle();
    expect(text()).toContain('Of 3 rows, 1 call was taken, 1 row joined another.');
    expect(said).toHaveBeenCalledWith(expect.stringContaining('1 call was taken'));
  });

  it('says that nothing was new when a log comes again', async () => {
    server.logs = [
      aLog({
        state: 'imported',
        counts: { calls: 0, folded: 0, aside: 0, empty: 0, known: 3 },
      }),
    ];
    await show(LOG_ID);
    expect(text()).toContain('Nothing in it was new: all 3 rows were known already.');
  });

  describe('with a row that was put aside', () => {
    beforeEach(async () => {
      server.logs = [aLog()];
      server.asides = [ASIDE];
      await show('aside');
      await press('j');
      await click(host().querySelector<HTMLElement>('[data-step]')!);
    });

    it('shows why, and the cells under the titles of its own log', () => {
      expect(text()).toContain('the phone number cannot be read');
      expect(host().querySelector('dl')?.textContent).toContain('Title 2fridge warm');
    });

    it('gives it to the call of the same phone with what it says, in this order', async () => {
      await press('b');
      expect(host().querySelector<HTMLInputElement>('#aside-number')?.value).toBe('7');
      await click(button('Settle'));
      expect(server.asked.slice(-2).map(({ name }) => name)).toEqual([
        'addRemark',
        'settleNightLogRow',
      ]);
      expect(server.named('settleNightLogRow')[0]?.body).toMatchObject({ callId: CALL.id });
      expect(text()).toContain('No row waits for a person');
    });

    it('closes it with a note when there is nothing to do', async () => {
      await press('x');
      const field = host().querySelector<HTMLInputElement>('#aside-note')!;
      expect(document.activeElement).toBe(field);
      field.value = 'a washer';
      field.dispatchEvent(new Event('input'));
      await settle();
      await click(button('Settle'));
      expect(server.named('settleNightLogRow')[0]?.body).toMatchObject({
        callId: null,
        note: 'a washer',
      });
    });

    it('takes it as a call, and offers to settle it once that call is on the board', async () => {
      await press('t');
      expect(navigate).toHaveBeenCalledWith(['/board'], { queryParams: { call: 'new' } });
      const kept = JSON.parse(localStorage.getItem('thawline:draft:user-1:intake') ?? '{}') as {
        value: { callId: string };
      };
      const taken = aCallRow(9, { id: kept.value.callId });
      calls.set(new Map([[taken.id, taken]]));
      await settle();
      await click(button('Settle: taken as call 9'));
      expect(server.named('settleNightLogRow')[0]?.body).toMatchObject({ callId: taken.id });
      calls.set(new Map([[CALL.id, CALL]]));
    });

    it('says so when somebody else was quicker, and shows what is left', async () => {
      server.refuses = {
        name: 'settleNightLogRow',
        error: new ProblemError({
          type: '/problems/already-used',
          title: 'Somebody has settled this row already.',
          status: 409,
        }),
      };
      await press('x');
      const field = host().querySelector<HTMLInputElement>('#aside-note')!;
      field.value = 'a washer';
      field.dispatchEvent(new Event('input'));
      await settle();
      server.asides = [];
      await click(button('Settle'));
      expect(text()).toContain('Somebody has settled this row already.');
      expect(text()).toContain('No row waits for a person');
    });
  });
});
