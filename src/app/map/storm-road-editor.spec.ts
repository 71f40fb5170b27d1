import { signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import type { BoardChange } from '@shared/contract/realtime';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { HOUR_MS } from '@shared/domain/instant';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { aStorm, idOf, NOW, STORM_ID } from '../core/testing';
import { Zone } from '../core/zone';
import { StormRoadActs } from './storm-road-acts';
import { StormRoadEditor } from './storm-road-editor';

const POINTS: [number, number][] = [
  [-40, 34],
  [-39.99, 34],
];
const aRoad = (change: Partial<StormRoadDto> = {}): StormRoadDto => ({
  id: idOf(88),
  stormId: STORM_ID,
  kind: 'closed',
  state: 'confirmed',
  name: 'Pell Bridge',
  notes: '',
  shape: { type: 'line', points: POINTS },
  startsAt: NOW - HOUR_MS,
  endsAt: null,
  speedShare: null,
  by: 'Mara',
  at: NOW - HOUR_MS,
  liftedAt: null,
  canUndo: true,
  version: 3,
  ...change,
});

class Board {
  readonly stormRoads = signal<ReadonlyMap<string, StormRoadDto>>(new Map());
  readonly storm = signal(aStorm());

  takeReply(change: BoardChange): void {
    if (change.kind !== 'storm-roads') throw new Error('Only storm roads change here.');
    const rows = new Map(this.stormRoads());
    for (const road of change.roads) rows.set(road.id, road);
    for (const id of change.gone) rows.delete(id);
    this.stormRoads.set(rows);
  }
}

function setUp() {
  const board = new Board();
  const call = jest.fn();
  const notices: { words: string; undo: (() => void) | undefined }[] = [];
  TestBed.configureTestingModule({
    providers: [
      StormRoadActs,
      StormRoadEditor,
      { provide: Api, useValue: { call } },
      { provide: BoardStore, useValue: board },
      { provide: Clock, useValue: { now: () => NOW, exact: () => NOW } },
      { provide: Zone, useValue: { name: () => 'UTC', dayTime: (at: number) => String(at) } },
      {
        provide: Announce,
        useValue: {
          say: () => undefined,
          notice: (words: string, action?: { readonly run: () => void }) =>
            notices.push({ words, undo: action?.run }),
        },
      },
    ],
  });
  return { editor: TestBed.inject(StormRoadEditor), board, call, notices };
}

const stretch = (name: string | null = 'Pell Road') => ({
  stretch: { points: POINTS, name, metres: 920 },
});

describe('StormRoadEditor', () => {
  it('takes the piece of road of one place, the way between two, and starts again with a third', async () => {
    const { editor, call } = setUp();
    call.mockResolvedValue(stretch());
    editor.draw();
    await editor.pick([-40, 34]);
    expect(call).toHaveBeenLastCalledWith('roadStretch', { query: { lon: '-40', lat: '34' } });
    expect([editor.line(), editor.draft().name]).toEqual([POINTS, 'Pell Road']);
    await editor.pick([-39.9, 34]);
    expect(call).toHaveBeenLastCalledWith('roadStretch', {
      query: { lon: '-40', lat: '34', toLon: '-39.9', toLat: '34' },
    });
    await editor.pick([-39.8, 34]);
    expect(editor.picks()).toEqual([[-39.8, 34]]);
    editor.undo();
    expect([editor.picks(), editor.line()]).toEqual([[], null]);
  });

  it('says when no road is there, and keeps a name that was typed', async () => {
    const { editor, call } = setUp();
    editor.draw();
    call.mockResolvedValueOnce({ stretch: null });
    await editor.pick([-40, 35]);
    expect([editor.problem(), editor.picks()]).toEqual(['No road is near that place.', []]);
    editor.edit({ name: 'By the mill', isNameTyped: true });
    call.mockResolvedValueOnce(stretch());
    await editor.pick([-40, 34]);
    expect(editor.draft().name).toBe('By the mill');
  });

  it('shows the answer to the newest question only', async () => {
    const { editor, call } = setUp();
    editor.draw();
    let late: (answer: unknown) => void = () => undefined;
    call.mockReturnValueOnce(new Promise((resolve) => (late = resolve)));
    const first = editor.pick([-40, 34]);
    call.mockResolvedValueOnce(stretch('Second'));
    await editor.pick([-39.9, 34]);
    late(stretch('First'));
    await first;
    expect(editor.draft().name).toBe('Second');
  });

  it('saves what was picked, shows it at once, and offers to take it back', async () => {
    const { editor, board, call, notices } = setUp();
    editor.draw();
    call.mockResolvedValueOnce(stretch());
    await editor.pick([-40, 34]);
    call.mockResolvedValueOnce(aRoad({ name: 'Pell Road', version: 0 }));
    await editor.save();
    expect(call).toHaveBeenLastCalledWith('addStormRoad', {
      params: { stormId: STORM_ID },
      body: expect.objectContaining({
        kind: 'closed',
        name: 'Pell Road',
        endsAt: null,
        speedShare: null,
        shape: { type: 'line', points: POINTS },
      }) as object,
    });
    expect([editor.isOpen(), board.stormRoads().size]).toEqual([false, 1]);
    call.mockResolvedValueOnce({ road: null });
    notices[0]?.undo?.();
    await new Promise((done) => setTimeout(done));
    expect(board.stormRoads().size).toBe(0);
  });

  it('repeats a save that got no answer as the very same command', async () => {
    const { editor, call } = setUp();
    editor.draw();
    call.mockResolvedValueOnce(stretch());
    await editor.pick([-40, 34]);
    call.mockRejectedValue(new ProblemError({ type: 'about:blank', title: 'lost', status: 0 }));
    await editor.save();
    await editor.save();
    const ids = call.mock.calls
      .filter(([name]) => name === 'addStormRoad')
      .map(([, args]) => (args as { body: { commandId: string } }).body.commandId);
    expect([ids.length, new Set(ids).size, editor.isOpen()]).toEqual([2, 1, true]);
  });

  it('shows what somebody else saved first, and keeps both where they do not meet', async () => {
    const { editor, board, call } = setUp();
    board.takeReply({ kind: 'storm-roads', roads: [aRoad()], gone: [] });
    editor.change(aRoad());
    editor.edit({ notes: 'Barrier up' });
    const theirs = aRoad({ kind: 'flooded', version: 4 });
    call.mockRejectedValueOnce(
      new ProblemError({
        type: '/problems/stale-version',
        title: 'changed',
        status: 409,
        current: theirs,
      }),
    );
    await editor.save();
    expect(editor.theirChanges()).toEqual(['What it is: Closed, now Flooded']);
    call.mockClear();
    await editor.save();
    expect(call).not.toHaveBeenCalled();
    editor.keepMine();
    call.mockResolvedValueOnce(aRoad({ version: 5 }));
    await editor.save();
    expect(call).toHaveBeenLastCalledWith('changeStormRoad', {
      params: { stormRoadId: idOf(88) },
      body: { commandId: expect.any(String) as string, version: 4, notes: 'Barrier up' },
    });
  });

  it('goes on as a new one when somebody has taken it back', () => {
    const { editor, board } = setUp();
    board.takeReply({ kind: 'storm-roads', roads: [aRoad()], gone: [] });
    editor.change(aRoad());
    board.takeReply({ kind: 'storm-roads', roads: [], gone: [idOf(88)] });
    expect(editor.isGone()).toBe(true);
    editor.keepAsNew();
    expect([editor.isGone(), editor.draft().name]).toEqual([false, 'Pell Bridge']);
  });
});
