import { signal } from '@angular/core';
import { TestBed, type ComponentFixture } from '@angular/core/testing';
import { MATERIAL_ANIMATIONS } from '@angular/material/core';
import { provideRouter } from '@angular/router';
import type { ReplyOf } from '@shared/contract/http';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Live } from '../core/live';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { aCallRow, idOf, NOW, settled } from '../core/testing';
import { provideIcons } from '../ui/icons';
import { RegionPart } from './region-part';

type Listed = ReplyOf<'listRegions'>;
type Asked = { readonly name: string; readonly body?: Record<string, unknown> };

const REPORT: NonNullable<Listed['regions'][number]['report']> = {
  seconds: 12.3,
  peakMegabytes: 410,
  steps: [],
  leftOut: [{ what: 'House numbers', count: 7, why: 'they name no street' }],
  addressFile: {
    rows: 1200,
    added: 900,
    merged: 280,
    unitRows: 40,
    citiesFilled: 12,
    rejectedCount: 20,
    reasons: { 'it has no street': 20 },
    rejected: [{ line: 31, reason: 'it has no street' }],
  },
};
const aRegion = (key: string, name: string, more = {}): Listed['regions'][number] => ({
  key,
  name,
  timeZone: 'America/New_York',
  attribution: 'Invented',
  isInUse: false,
  isOutdated: false,
  counts: { addresses: 1, streets: 2_000, places: 3, tiles: 40, roadKm: 1234.5, bytes: 2_500_000 },
  report: REPORT,
  ...more,
});
const anImport = (more = {}): NonNullable<Listed['latestImport']> => ({
  id: idOf(1),
  name: 'Marl County',
  state: 'running',
  step: 'map',
  share: 0.42,
  trouble: null,
  regionKey: null,
  startedAt: NOW,
  endedAt: null,
  ...more,
});
const aSwitch = (more = {}): NonNullable<Listed['latestSwitch']> => ({
  id: idOf(2),
  toKey: 'marl-0',
  toName: 'Marl County',
  state: 'done',
  total: 3,
  done: 3,
  located: 1,
  returned: 0,
  kept: 0,
  outside: 2,
  at: NOW,
  ...more,
});

let listed: Listed;
let asked: Asked[];
let told: Record<string, (sent: unknown) => void>;
let importAnswer: unknown;

beforeEach(() => {
  asked = [];
  told = {};
  importAnswer = anImport();
  listed = {
    regions: [
      aRegion('demo-0', 'Demo County', { isInUse: true }),
      aRegion('marl-0', 'Marl County'),
      aRegion('old-0', 'Old County', { isOutdated: true }),
    ],
    latestImport: null,
    latestSwitch: null,
    files: [{ name: 'marl-county-latest.osm.pbf', from: 'folder', bytes: 12_000_000 }],
    filesFolder: '/srv/region-files',
    mostUploadBytes: 2e9,
    techniciansOutside: [],
    areasOutside: [],
  };
  const call = (name: string, args: { body?: Record<string, unknown> } = {}): Promise<unknown> => {
    asked.push({ name, ...(args.body ? { body: args.body } : {}) });
    const answers: Record<string, unknown> = {
      listRegions: listed,
      importRegion: importAnswer,
      useRegion: aSwitch({ state: 'locating', done: 0 }),
      cancelRegionImport: anImport({ state: 'cancelled' }),
      unlocatedCalls: {
        change: aSwitch(),
        calls: [
          { callId: idOf(7), number: 7, address: '7 Nowhere Road', outcome: 'outside' },
          { callId: idOf(8), number: 8, address: '8 Nowhere Road', outcome: 'kept' },
        ],
      },
    };
    const answer = answers[name];
    return answer instanceof Error ? Promise.reject(answer) : Promise.resolve(answer);
  };
  TestBed.configureTestingModule({
    providers: [
      provideIcons(),
      provideRouter([]),
      { provide: MATERIAL_ANIMATIONS, useValue: { animationsDisabled: true } },
      { provide: Api, useValue: { call } },
      {
        provide: Live,
        useValue: {
          on: (event: string, heard: (sent: unknown) => void) => {
            told[event] = heard;
            return () => undefined;
          },
        },
      },
      { provide: BoardStore, useValue: { calls: signal(new Map([[idOf(7), aCallRow(7)]])) } },
      { provide: Session, useValue: { zone: signal('America/New_York') } },
    ],
  });
});

async function show(): Promise<{
  fixture: ComponentFixture<RegionPart>;
  text: () => string;
  press: (words: string) => Promise<void>;
}> {
  const fixture = TestBed.createComponent(RegionPart);
  const root = fixture.nativeElement as HTMLElement;
  const calm = async (): Promise<void> => {
    await fixture.whenStable();
    await settled();
    await fixture.whenStable();
  };
  await calm();
  return {
    fixture,
    text: () => (root.textContent ?? '').replace(/\s+/g, ' '),
    press: async (words) => {
      const button = [...document.querySelectorAll('button')].find(
        (one) => (one.getAttribute('aria-label') ?? one.textContent ?? '').trim() === words,
      );
      if (!button) throw new Error(`no button "${words}"`);
      button.click();
      await calm();
    },
  };
}

describe('the regions', () => {
  it('are listed with what may be done with each', async () => {
    const { text } = await show();
    expect(text()).toContain('1 address, 2,000 streets, 767 mi of road');
    const labels = [...document.querySelectorAll('button')].map((one) =>
      one.getAttribute('aria-label'),
    );
    expect(labels).toContain('Switch to Marl County');
    expect(labels).not.toContain('Switch to Demo County');
    expect(labels).not.toContain('Remove Demo County');
    expect(labels).not.toContain('Switch to Old County');
    expect(text()).toContain('import it again');
  });

  it('tell what an import made and left out, with lines and reasons', async () => {
    const { text, press } = await show();
    await press('Details of Marl County');
    expect(text()).toContain('12.3 s, 410 MB of memory at most');
    expect(text()).toContain('1,200 rows: 900 new, 280 known or flats, 20 not taken');
    expect(text()).toContain('House numbers: 7, since they name no street.');
    expect(text()).toContain('31it has no street');
  });

  it('are switched only when that was confirmed, and say what becomes of the calls', async () => {
    const { text, press } = await show();
    await press('Switch to Marl County');
    expect(document.body.textContent).toContain(
      '1 call of the open storm, each with its address, is looked up there',
    );
    await press('Leave it');
    expect(asked.map(({ name }) => name)).not.toContain('useRegion');
    await press('Switch to Marl County');
    await press('Switch');
    expect(asked.find(({ name }) => name === 'useRegion')?.body).toMatchObject({ key: 'marl-0' });

    listed = { ...listed, latestSwitch: aSwitch() };
    told['region:switch-progressed']?.(aSwitch());
    await settled();
    await settled();
    expect(text()).toContain('1 call found, 2 calls not in this region.');
    const link = [...document.querySelectorAll('a')].find((one) => one.textContent === 'Call 7');
    expect(link?.getAttribute('href')).toBe(`/board?call=${idOf(7)}`);
    expect(text()).toContain('8 Nowhere Road kept, within the region');
  });

  it('warn of technicians and areas that lie outside', async () => {
    listed = { ...listed, techniciansOutside: ['Noor'], areasOutside: ['Gullwick', 'Pell'] };
    const { text } = await show();
    expect(text()).toContain('1 technician starts outside of this region: Noor.');
    expect(text()).toContain('2 outage areas lie outside of this region: Gullwick, Pell.');
  });
});

describe('an import', () => {
  it('asks for an extract and a name, and begins with what the form says', async () => {
    const { fixture, text, press } = await show();
    await press('Import');
    expect(text()).toContain('Send an extract, or choose one that is on the server.');
    expect(asked.map(({ name }) => name)).not.toContain('importRegion');
    (fixture.nativeElement as HTMLElement).querySelector<HTMLElement>('mat-select')?.click();
    await settled();
    document.querySelectorAll<HTMLElement>('mat-option')[0]?.click();
    await settled();
    await press('Import');
    expect(asked.find(({ name }) => name === 'importRegion')?.body).toMatchObject({
      name: 'Marl County',
      timeZone: 'America/New_York',
      extract: { name: 'marl-county-latest.osm.pbf', from: 'folder' },
      addresses: null,
    });
    expect(text()).toContain('Drawing the map: 42 % of the import');
  });

  it('keeps what was chosen when the server refuses it', async () => {
    importAnswer = new ProblemError({
      type: '/problems/region-busy',
      title: 'Busy',
      status: 409,
      detail: 'A region is being imported already.',
    });
    const { fixture, text, press } = await show();
    (fixture.nativeElement as HTMLElement).querySelector<HTMLElement>('mat-select')?.click();
    await settled();
    document.querySelectorAll<HTMLElement>('mat-option')[0]?.click();
    await settled();
    await press('Import');
    expect(text()).toContain('A region is being imported already.');
    expect(text()).toContain('marl-county-latest.osm.pbf, 12 MB, on the server');
  });

  it('shows its progress as it is told, and can be stopped', async () => {
    listed = { ...listed, latestImport: anImport() };
    const { text, press } = await show();
    told['region:import-progressed']?.(anImport({ step: 'house numbers', share: 0.9 }));
    await settled();
    expect(text()).toContain('Drawing the house numbers: 90 % of the import');
    listed = { ...listed, latestImport: anImport({ state: 'cancelled' }) };
    await press('Stop the import');
    expect(asked.map(({ name }) => name)).toContain('cancelRegionImport');
    expect(text()).not.toContain('is being imported');
  });

  it('says why it failed', async () => {
    listed = {
      ...listed,
      latestImport: anImport({ state: 'failed', trouble: 'The disk is full. Make room.' }),
    };
    const { text } = await show();
    expect(text()).toContain('Marl County was not imported. The disk is full. Make room.');
  });
});
