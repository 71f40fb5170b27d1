import { provideHttpClient } from '@angular/common/http';
import {
  HttpTestingController,
  provideHttpClientTesting,
  type TestRequest,
} from '@angular/common/http/testing';
import { provideZonelessChangeDetection, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { HOUR_MS } from '@shared/domain/instant';
import { BoardStore } from '../core/board-store';
import { Drafts } from '../core/drafts';
import { Session } from '../core/session';
import { IntakeModel } from './intake-model';

const STORM = 'storm-1';
const USER = 'user-1';

function aModel(storm: object | null = { id: STORM, state: 'open' }): {
  model: IntakeModel;
  http: HttpTestingController;
  taken: unknown[];
} {
  const taken: unknown[] = [];
  TestBed.configureTestingModule({
    providers: [
      provideZonelessChangeDetection(),
      provideHttpClient(),
      provideHttpClientTesting(),
      IntakeModel,
      {
        provide: BoardStore,
        useValue: {
          areas: signal(new Map()),
          takeReply: (change: unknown) => taken.push(change),
        },
      },
      {
        provide: Session,
        useValue: {
          storm: signal(storm),
          zone: signal('America/New_York'),
          settings: signal(null),
        },
      },
    ],
  });
  TestBed.inject(Drafts).of(USER);
  return { model: TestBed.inject(IntakeModel), http: TestBed.inject(HttpTestingController), taken };
}

/** Lets effects run and the promises behind an answer settle. */
async function settle(): Promise<void> {
  TestBed.tick();
  await new Promise((resolve) => setTimeout(resolve));
}

function fill(model: IntakeModel): void {
  model.change({
    name: 'Ada Marsh',
    phone: '252 555 0142',
    address: { text: '12 Tern Court', unitNo: '', lonLat: null, kind: 'unlocated' },
  });
  model.addUnit('chest-freezer');
  model.typeTime('out', '6 h ago');
  model.typeTime('back', '1 h ago');
}

const bodyOf = (request: TestRequest) => request.request.body as Record<string, unknown>;
const POST = `/api/storms/${STORM}/calls`;
const aRow = (id: string) => ({ id, number: 214 });

describe('IntakeModel', () => {
  afterEach(() => localStorage.clear());

  async function lookedUp(http: HttpTestingController, found: object): Promise<void> {
    await settle();
    http.expectOne((request) => request.url.includes('/household')).flush(found);
    await settle();
  }
  const NOBODY = { household: null, openCall: null, earlierCalls: 0 };

  it('sends the very same command again after an answer that never came', async () => {
    const { model, http, taken } = aModel();
    fill(model);
    await lookedUp(http, NOBODY);

    const first = model.save();
    const lost = http.expectOne(POST);
    lost.error(new ProgressEvent('error'));
    expect(await first).toBeNull();
    expect(model.problem()?.code).toBe('no-connection');
    expect(model.draft().name).toBe('Ada Marsh');

    const second = model.save();
    const again = http.expectOne(POST);
    expect(bodyOf(again)).toEqual(bodyOf(lost));
    again.flush({ row: aRow(model.draft().callId) });
    expect(await second).toEqual({ callId: bodyOf(lost)['callId'] });
    expect(taken).toHaveLength(1);
    expect(model.draft().name).toBe('');
  });

  it('keeps everything and puts a complaint of the server beside its field', async () => {
    const { model, http } = aModel();
    fill(model);
    await lookedUp(http, NOBODY);
    const saving = model.save();
    http.expectOne(POST).flush(
      {
        type: '/problems/invalid-request',
        title: 'Some fields need another look',
        status: 422,
        errors: [{ pointer: '#/address/text', detail: 'Too short.' }],
      },
      { status: 422, statusText: '' },
    );
    await saving;
    expect(model.errors()).toEqual({ address: 'Too short.' });
    expect(model.draft().units).toHaveLength(1);

    model.change({ address: { ...model.draft().address, text: '112 Tern Court' } }, 'address');
    expect(model.errors()).toEqual({});
  });

  it('takes its own earlier attempt for saved, when only the answer was lost', async () => {
    const { model, http } = aModel();
    fill(model);
    await lookedUp(http, NOBODY);
    const { callId } = model.draft();
    const saving = model.save();
    http.expectOne(POST).flush(
      {
        type: '/problems/household-has-open-call',
        title: 'This household already has an open call',
        status: 409,
        current: aRow(callId),
      },
      { status: 409, statusText: '' },
    );
    expect(await saving).toEqual({ callId });
  });

  it('offers the open call of the household instead of taking a second one', async () => {
    const { model, http } = aModel();
    model.change({ phone: '252 555 0142' });
    await lookedUp(http, { ...NOBODY, openCall: aRow('call-214') });
    expect(model.sameCall()).toMatchObject({ number: 214 });
  });

  it('fills in a known household without overwriting what was just said', async () => {
    const { model, http } = aModel();
    model.change({ phone: '252 555 0142', name: 'Ada’s neighbour' });
    const address = { text: '9 Pilot Street', unitNo: '', lonLat: [-52.3, 34], kind: 'rooftop' };
    await lookedUp(http, {
      household: {
        id: 'household-1',
        name: 'Ada Marsh',
        phone: '+12525550142',
        address,
        language: 'es',
        mayText: true,
        optedOut: true,
      },
      openCall: null,
      earlierCalls: 1,
    });
    expect(model.draft()).toMatchObject({
      name: 'Ada’s neighbour',
      address,
      language: 'es',
      mayText: false,
    });
  });

  it('has the draft again after a reload', async () => {
    const { model } = aModel();
    model.change({ name: 'Ada Marsh' });
    model.addUnit('walk-in');
    const { callId, commandId } = model.draft();
    await settle();
    TestBed.resetTestingModule();

    const { model: reloaded } = aModel();
    expect(reloaded.draft()).toMatchObject({ callId, commandId, name: 'Ada Marsh' });
    expect(reloaded.draft().units).toHaveLength(1);
  });

  it('says that no storm is open, and keeps what was typed until one is', async () => {
    const { model, http } = aModel(null);
    fill(model);
    expect(model.hasStorm()).toBe(false);
    expect(await model.save()).toBeNull();
    http.verify();
    expect(model.draft().name).toBe('Ada Marsh');
    TestBed.resetTestingModule();
    expect(aModel().model.hasStorm()).toBe(true);
  });

  it('asks nothing of the server while the call is not complete', async () => {
    const { model, http } = aModel();
    model.change({ name: 'Ada Marsh' });
    expect(await model.save()).toBeNull();
    http.expectNone(POST);
    expect(Object.keys(model.errors())).toContain('phone');
  });

  it('shows the clocks of the published rules while the caller still talks', () => {
    const { model } = aModel();
    model.addUnit('fridge-freezer');
    expect(model.preview()).toBeNull();
    model.typeTime('out', '3 h ago');
    const outAt = model.times().outAt ?? 0;
    const saveBy = model.preview()?.compartments.map(({ kind, saveByAt }) => [kind, saveByAt]);
    // USDA FSIS: 4 h for a closed refrigerator; a freezer of unknown fill counts as half full, 24 h.
    expect(saveBy).toEqual([
      ['fresh-food', outAt + 4 * HOUR_MS],
      ['freezer', outAt + 24 * HOUR_MS],
    ]);
  });
});
