import { computed, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import type { AreaDto } from '@shared/contract/areas';
import type { CallRow } from '@shared/contract/calls';
import type { LonLat } from '@shared/contract/common';
import type { BoardChange } from '@shared/contract/realtime';
import { HOUR_MS } from '@shared/domain/instant';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { aCallRow, aStorm, idOf, NOW, STORM_ID } from '../core/testing';
import { Zone } from '../core/zone';
import { AreaEditor } from './area-editor';
import { moveCorner, removeCorner } from './outline';

const SQUARE: readonly LonLat[] = [
  [-40, 34],
  [-39.9, 34],
  [-39.9, 34.1],
  [-40, 34.1],
];
const RING: LonLat[] = [...SQUARE, [-40, 34]];

const anArea = (change: Partial<AreaDto> = {}): AreaDto => ({
  id: idOf(77),
  stormId: STORM_ID,
  name: 'Heron 1',
  shape: [[RING]],
  outAt: NOW - 5 * HOUR_MS,
  backAt: null,
  version: 3,
  ...change,
});

const refused = (code: string, current?: unknown): ProblemError =>
  new ProblemError({
    type: `/problems/${code}`,
    title: code,
    status: 409,
    ...(current === undefined ? {} : { current }),
  });

class Board {
  readonly rows = signal<ReadonlyMap<string, AreaDto>>(new Map());
  readonly calls = signal<readonly CallRow[]>([]);
  readonly areas = computed(() => this.rows());
  readonly openCalls = computed(() => this.calls());
  readonly storm = signal(aStorm());

  takeReply(change: BoardChange): void {
    if (change.kind !== 'areas') throw new Error('Only areas change here.');
    const rows = new Map(this.rows());
    for (const area of change.areas) rows.set(area.id, area);
    for (const id of change.gone) rows.delete(id);
    this.rows.set(rows);
  }
}

function setUp() {
  const board = new Board();
  const call = jest.fn();
  const notices: string[] = [];
  let goOn: () => void = () => undefined;
  TestBed.configureTestingModule({
    providers: [
      AreaEditor,
      { provide: Api, useValue: { call } },
      { provide: BoardStore, useValue: board },
      { provide: Clock, useValue: { now: () => NOW, exact: () => NOW } },
      {
        provide: Zone,
        useValue: { name: () => 'UTC', dayTime: (at: number) => new Date(at).toISOString() },
      },
      {
        provide: Announce,
        useValue: {
          say: () => undefined,
          notice: (words: string, action?: { readonly run: () => void }) => {
            notices.push(words);
            if (action) goOn = action.run;
          },
        },
      },
    ],
  });
  const editor = TestBed.inject(AreaEditor);
  return { editor, board, call, notices, goOn: () => goOn() };
}

function drawSquare(editor: AreaEditor): void {
  editor.draw();
  for (const corner of SQUARE) editor.addCorner(corner);
  editor.finish();
  editor.rename('Heron 1');
  editor.typeOut('5 h ago');
}

describe('drawing an outage area', () => {
  it('sends a closed ring with its name and times, and shows the answer at once', async () => {
    const { editor, board, call, notices } = setUp();
    board.calls.set([
      aCallRow(1, { address: { text: '', unitNo: '', lonLat: [-39.95, 34.05], kind: 'pin' } }),
      aCallRow(2, { address: { text: '', unitNo: '', lonLat: [-38, 34.05], kind: 'pin' } }),
    ]);
    call.mockImplementation((_: string, { body }: { body: Partial<AreaDto> }) =>
      Promise.resolve(anArea({ ...body, id: idOf(78), version: 0 })),
    );
    drawSquare(editor);
    expect(editor.callsInside()).toBe(1);
    await editor.save();
    expect(call).toHaveBeenCalledWith('drawArea', {
      params: { stormId: STORM_ID },
      body: expect.objectContaining({
        name: 'Heron 1',
        shape: [[RING]],
        outAt: NOW - 5 * HOUR_MS,
        backAt: null,
      }) as unknown,
    });
    expect(board.areas().has(idOf(78))).toBe(true);
    expect(editor.isOpen()).toBe(false);
    expect(notices[0]).toMatch(/1 open call lies inside/);
  });

  it('says what is missing and sends nothing', async () => {
    const { editor, call } = setUp();
    editor.draw();
    await editor.save();
    expect(editor.problem()).toMatch(/three corners/);
    drawSquare(editor);
    editor.rename(' ');
    await editor.save();
    expect(editor.problem()).toBe('The area needs a name.');
    editor.rename('Heron');
    editor.shape((outline) => moveCorner(outline, 2, [-40.05, 34.02]));
    await editor.save();
    expect(editor.problem()).toMatch(/crosses itself/);
    expect(call).not.toHaveBeenCalled();
  });

  it('repeats the very same command after a lost answer, and a new one after a change', async () => {
    const { editor, call } = setUp();
    call.mockRejectedValue(refused('no-connection'));
    drawSquare(editor);
    await editor.save();
    await editor.save();
    editor.rename('Heron 2');
    await editor.save();
    const ids = call.mock.calls.map(
      ([, { body }]: [string, { body: { commandId: string; areaId: string } }]) => body,
    );
    expect(ids[1]).toEqual(ids[0]);
    expect(ids[2]?.commandId).not.toBe(ids[0]?.commandId);
    expect(ids[2]?.areaId).toBe(ids[0]?.areaId);
    expect(editor.isOpen()).toBe(true);
  });

  it('takes steps back one by one, a whole drag as one', () => {
    const { editor } = setUp();
    drawSquare(editor);
    editor.shape((outline) => moveCorner(outline, 0, [-40.01, 34]));
    editor.drag((outline) => moveCorner(outline, 0, [-40.02, 34]));
    editor.drag((outline) => moveCorner(outline, 0, [-40.03, 34]));
    editor.undo();
    expect(editor.outline().corners).toEqual(SQUARE);
    editor.undo();
    expect(editor.isDrawing()).toBe(true);
    editor.undo();
    expect(editor.outline().corners).toEqual(SQUARE.slice(0, 3));
  });

  it('can be taken up again after it was left', () => {
    const { editor, goOn } = setUp();
    drawSquare(editor);
    editor.cancel();
    expect(editor.isOpen()).toBe(false);
    goOn();
    expect(editor.isOpen()).toBe(true);
    expect(editor.outline().corners).toEqual(SQUARE);
    expect(editor.times().name).toBe('Heron 1');
  });
});

describe('changing an outage area', () => {
  function changing() {
    const all = setUp();
    all.board.rows.set(new Map([[anArea().id, anArea()]]));
    all.editor.change(anArea());
    return all;
  }

  it('sends only what was changed, with the version that was seen', async () => {
    const { editor, call } = changing();
    call.mockResolvedValue(anArea({ name: 'Heron', version: 4 }));
    editor.rename('Heron');
    await editor.save();
    const [, sent] = call.mock.calls[0] as [string, { body: Record<string, unknown> }];
    expect(sent.body).toEqual({
      name: 'Heron',
      version: 3,
      commandId: expect.any(String) as string,
    });
  });

  it('shows after a refusal what somebody else changed, and keeps what was typed', async () => {
    const { editor, call } = changing();
    const theirs = anArea({ backAt: NOW - HOUR_MS, version: 4 });
    call.mockRejectedValueOnce(refused('stale-version', theirs));
    editor.rename('Heron');
    await editor.save();
    expect(editor.times().name).toBe('Heron');
    expect(editor.theirChanges()).toEqual([
      `Came back: still out, now ${new Date(NOW - HOUR_MS).toISOString()}`,
    ]);
    await editor.save();
    expect(call).toHaveBeenCalledTimes(1);
  });

  it('joins both changes when asked to keep one’s own too', async () => {
    const { editor, board, call } = changing();
    editor.rename('Heron');
    const theirs = anArea({ backAt: NOW - HOUR_MS, version: 4 });
    board.takeReply({ kind: 'areas', areas: [theirs], gone: [] });
    editor.keepMine();
    expect(editor.theirs()).toBeNull();
    expect(editor.times()).toMatchObject({ backAt: NOW - HOUR_MS, isStillOut: false });
    call.mockResolvedValue({ ...theirs, name: 'Heron', version: 5 });
    await editor.save();
    const [, sent] = call.mock.calls[0] as [string, { body: Record<string, unknown> }];
    expect(sent.body).toMatchObject({ name: 'Heron', version: 4 });
    expect(sent.body).not.toHaveProperty('backAt');
  });

  it('keeps an own outline while the other one changed theirs', () => {
    const { editor, board } = changing();
    editor.shape((outline) => removeCorner(outline, 0));
    const theirs = anArea({ shape: [[[[-41, 34], ...RING.slice(1, 4), [-41, 34]]]], version: 4 });
    board.takeReply({ kind: 'areas', areas: [theirs], gone: [] });
    expect(editor.theirChanges()).toEqual(['The outline was changed']);
    editor.keepMine();
    expect(editor.outline().corners).toEqual(SQUARE.slice(1));
  });

  it('goes on as a new area when somebody else removed it', async () => {
    const { editor, board, call } = changing();
    board.takeReply({ kind: 'areas', areas: [], gone: [anArea().id] });
    expect(editor.isGone()).toBe(true);
    editor.keepAsNew();
    expect(editor.isGone()).toBe(false);
    call.mockResolvedValue(anArea({ id: idOf(79) }));
    await editor.save();
    expect(call.mock.calls[0]?.[0]).toBe('drawArea');
  });

  it('removes it with the version that was seen', async () => {
    const { editor, board, call } = changing();
    call.mockResolvedValue({ done: true });
    await editor.remove();
    expect(call).toHaveBeenCalledWith('removeArea', {
      params: { areaId: anArea().id },
      body: { commandId: expect.any(String) as string, version: 3 },
    });
    expect(board.areas().size).toBe(0);
    expect(editor.isOpen()).toBe(false);
  });
});
