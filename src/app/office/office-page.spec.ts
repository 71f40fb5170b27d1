import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { signal, type Type } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MATERIAL_ANIMATIONS } from '@angular/material/core';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import { MatTabNavBarHarness } from '@angular/material/tabs/testing';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { aCallRow, aMe, aStorm, aTechnician, idOf, NOW, settled } from '../core/testing';
import { provideIcons } from '../ui/icons';
import { AccountsPart } from './accounts-part';
import { AuditPart } from './audit-part';
import { OfficePage } from './office-page';
import { SettingsPart } from './settings-part';
import { StormsPart } from './storms-part';
import { TechniciansPart } from './technicians-part';

interface Asked {
  readonly name: string;
  readonly body: Record<string, unknown>;
  readonly query: Record<string, unknown>;
}

const asked: Asked[] = [];
let answers: Record<string, (asked: Asked) => unknown>;
const settings = signal(aMe().settings);
const storm = signal<ReturnType<typeof aStorm> | null>(null);
const role = signal<'manager' | 'owner'>('manager');

beforeEach(() => {
  asked.length = 0;
  settings.set(aMe().settings);
  storm.set(aStorm());
  role.set('owner');
  answers = {
    listStorms: () => ({ storms: storm() ? [storm()] : [] }),
    listTechnicians: () => ({ technicians: [aTechnician(1), aTechnician(2)] }),
    listUsers: () => ({ users: [aMe('owner').user] }),
    nearestAddress: () => ({ suggestion: null }),
    audit: () => ({ entries: [] }),
    officeAudit: () => ({ entries: [] }),
  };
  const call = async (name: string, args: Partial<Asked> = {}): Promise<unknown> => {
    const one = { name, body: args.body ?? {}, query: args.query ?? {} };
    asked.push(one);
    const answer = answers[name]?.(one);
    if (answer instanceof Error) throw answer;
    return await Promise.resolve(answer);
  };
  TestBed.configureTestingModule({
    providers: [
      provideIcons(),
      { provide: MATERIAL_ANIMATIONS, useValue: { animationsDisabled: true } },
      { provide: Api, useValue: { call } },
      { provide: Clock, useValue: { now: signal(NOW), exact: () => NOW } },
      {
        provide: BoardStore,
        useValue: {
          storm,
          technicians: signal(new Map()),
          calls: signal(new Map([[aCallRow(7).id, aCallRow(7)]])),
          openCalls: signal([aCallRow(7)]),
        },
      },
      {
        provide: Session,
        useValue: {
          storm,
          settings,
          role,
          user: signal(aMe('owner').user),
          zone: signal('America/New_York'),
          takeSettings: (next: ReturnType<typeof settings>) => settings.set(next),
          takeStorm: (next: ReturnType<typeof aStorm>) => storm.set(next),
          refresh: () => Promise.resolve(storm.set(null)),
        },
      },
    ],
  });
});

interface Shown {
  readonly fixture: ComponentFixture<unknown>;
  readonly loader: HarnessLoader;
  readonly everywhere: HarnessLoader;
  text(): string;
}

async function show(part: Type<unknown>): Promise<Shown> {
  const fixture = TestBed.createComponent(part);
  await fixture.whenStable();
  await settled();
  await fixture.whenStable();
  return {
    fixture,
    loader: TestbedHarnessEnvironment.loader(fixture),
    everywhere: TestbedHarnessEnvironment.documentRootLoader(fixture),
    text: () => ((fixture.nativeElement as HTMLElement).textContent ?? '').replace(/\s+/g, ' '),
  };
}

const press = async (loader: HarnessLoader, text: RegExp): Promise<void> => {
  await (await loader.getHarness(MatButtonHarness.with({ text }))).click();
  await settled();
};

const field = async (loader: HarnessLoader, label: RegExp): Promise<MatInputHarness> => {
  const found = await loader.getHarness(MatFormFieldHarness.with({ floatingLabelText: label }));
  const control = await found.getControl(MatInputHarness);
  if (!control) throw new Error(`no field ${String(label)}`);
  return control;
};

const sent = (name: string): Record<string, unknown>[] =>
  asked.filter((one) => one.name === name).map(({ body }) => body);

const noLine = (): ProblemError =>
  new ProblemError({ type: '/problems/no-connection', title: 'No line', status: 0 });

describe('OfficePage', () => {
  it('shows the accounts to the owner only', async () => {
    const names = async () => {
      const { loader } = await show(OfficePage);
      const bar = await loader.getHarness(MatTabNavBarHarness);
      return Promise.all((await bar.getLinks()).map((link) => link.getLabel()));
    };
    expect(await names()).toContain('Accounts');
    role.set('manager');
    expect(await names()).toEqual(['Storms', 'Settings', 'Technicians', 'Audit trail']);
  });
});

describe('a part of the office', () => {
  it('still holds what was typed after a look at another', async () => {
    const { loader } = await show(OfficePage);
    const bar = await loader.getHarness(MatTabNavBarHarness);
    await bar.clickLink({ label: 'Settings' });
    await settled();
    await (await field(loader, /Driving speed/)).setValue('42');
    await bar.clickLink({ label: 'Audit trail' });
    await settled();
    await bar.clickLink({ label: 'Settings' });
    expect(await (await field(loader, /Driving speed/)).getValue()).toBe('42');
  });
});

describe('the settings', () => {
  it('send only what was changed, and keep one order id over a lost line', async () => {
    answers['changeSettings'] = noLine;
    const { loader, text } = await show(SettingsPart);
    await (await field(loader, /Driving speed/)).setValue('42');
    await press(loader, /Save settings/);
    expect(text()).toContain('No line');
    expect(await (await field(loader, /Driving speed/)).getValue()).toBe('42');

    answers['changeSettings'] = () => ({ ...settings(), speedMph: 42, version: 2 });
    await press(loader, /Save settings/);
    const [first, second] = sent('changeSettings');
    expect(first).toEqual({ commandId: first?.['commandId'], version: 1, speedMph: 42 });
    expect(second).toEqual(first);
  });

  it('show what somebody else changed meanwhile, keep what was typed, and save on top of it', async () => {
    const theirs = { ...settings(), speedMph: 30, claimMinutes: 20, pocketCalls: 9, version: 5 };
    answers['changeSettings'] = () =>
      new ProblemError({
        type: '/problems/stale-version',
        title: 'It has changed meanwhile',
        status: 409,
        current: theirs,
      });
    const { loader, text } = await show(SettingsPart);
    await (await field(loader, /A claim on a call ends/)).setValue('15');
    await press(loader, /Save settings/);
    expect(text()).toContain('A claim on a call ends after: was 10, now 20 (you wrote 15)');
    expect(text()).toContain('A pocket begins with: was 3, now 9');
    expect(await (await field(loader, /A pocket begins/)).getValue()).toBe('9');
    expect(await (await field(loader, /A claim on a call ends/)).getValue()).toBe('15');

    answers['changeSettings'] = () => ({ ...theirs, claimMinutes: 15, version: 6 });
    await press(loader, /Save settings/);
    expect(sent('changeSettings').at(-1)).toMatchObject({ version: 5, claimMinutes: 15 });
    expect(sent('changeSettings').at(-1)).not.toHaveProperty('pocketCalls');
  });

  it('ask nothing of the server while a field is wrong', async () => {
    const { loader } = await show(SettingsPart);
    await (await field(loader, /Driving speed/)).setValue('200');
    await press(loader, /Save settings/);
    const faulty = await loader.getHarness(
      MatFormFieldHarness.with({ floatingLabelText: /Driving speed/ }),
    );
    expect(await faulty.getTextErrors()).toEqual(['A number from 5 to 80 is needed.']);
    expect(sent('changeSettings')).toEqual([]);
  });

  it('show a refusal of the server beside its field', async () => {
    answers['changeSettings'] = () =>
      new ProblemError({
        type: '/problems/invalid-request',
        title: 'The request does not fit',
        status: 422,
        errors: [{ pointer: '/circuity', detail: 'Too big' }],
      });
    const { loader } = await show(SettingsPart);
    await (await field(loader, /Road distance/)).setValue('2.5');
    await press(loader, /Save settings/);
    const faulty = await loader.getHarness(
      MatFormFieldHarness.with({ floatingLabelText: /Road distance/ }),
    );
    expect(await faulty.getTextErrors()).toEqual(['A number from 1 to 3 is needed.']);
  });
});

describe('the storms', () => {
  it('close only after a yes, with the number of open calls', async () => {
    answers['closeStorm'] = () => aStorm({ state: 'closed', closedAt: NOW, version: 2 });
    const { loader, everywhere } = await show(StormsPart);
    await press(loader, /Close September ice/);
    const dialog = await everywhere.getHarness(MatDialogHarness);
    expect(await dialog.getText()).toContain('1 call is still open');
    await press(everywhere, /Leave it/);
    expect(sent('closeStorm')).toEqual([]);

    await press(loader, /Close September ice/);
    await press(everywhere, /Close the storm/);
    expect(sent('closeStorm')).toMatchObject([{ version: 1 }]);
  });

  it('open a named one when none is open', async () => {
    storm.set(null);
    answers['openStorm'] = ({ body }) => aStorm({ name: String(body['name']) });
    const { loader, text } = await show(StormsPart);
    await press(loader, /Open the storm/);
    expect(text()).toContain('A storm needs a name');
    await (await field(loader, /Name of the storm/)).setValue('  October gale ');
    await press(loader, /Open the storm/);
    expect(sent('openStorm')).toMatchObject([{ name: 'October gale' }]);
  });
});

describe('the accounts', () => {
  it('show a new password once, with a warning, until it is passed on', async () => {
    answers['addUser'] = ({ body }) => ({
      user: { ...aMe().user, id: body['userId'], name: body['name'], mustChangePassword: true },
      password: 'amber-anchor-basin-beacon-birch-42',
    });
    const { loader, everywhere } = await show(AccountsPart);
    await press(loader, /Make an account/);
    await (await field(loader, /^Name$/)).setValue('Mara Quill');
    await (await field(loader, /Sign-in name/)).setValue('mara@example.com');
    await press(loader, /Make the account/);
    const dialog = await everywhere.getHarness(MatDialogHarness);
    const words = await dialog.getText();
    expect(words).toContain('amber-anchor-basin-beacon-birch-42');
    expect(words).toContain('shown this once');
    await press(everywhere, /I have passed it on/);
    expect(await everywhere.getAllHarnesses(MatDialogHarness)).toHaveLength(0);
    expect(sent('addUser')).toMatchObject([{ role: 'dispatcher', technicianId: null }]);
  });

  it('say so when the password was lost with its answer', async () => {
    answers['addUser'] = ({ body }) => ({
      user: { ...aMe().user, id: body['userId'], name: body['name'] },
      password: '',
    });
    const { loader, everywhere } = await show(AccountsPart);
    await press(loader, /Make an account/);
    await (await field(loader, /^Name$/)).setValue('Mara Quill');
    await (await field(loader, /Sign-in name/)).setValue('mara@example.com');
    await press(loader, /Make the account/);
    const dialog = await everywhere.getHarness(MatDialogHarness);
    expect(await dialog.getText()).toContain('cannot be shown again');
  });

  it('ask whose phone it is before they make a technician’s', async () => {
    answers['listUsers'] = () => ({
      users: [aMe('owner').user, { ...aMe('technician').user, technicianId: idOf(2001) }],
    });
    const { loader, text } = await show(AccountsPart);
    await press(loader, /Make an account/);
    await (await field(loader, /^Name$/)).setValue('Theo Larkspur');
    await (await field(loader, /Sign-in name/)).setValue('theo@example.com');
    const selects = await loader.getAllHarnesses(MatSelectHarness);
    await selects[0]?.open();
    await selects[0]?.clickOptions({ text: /^Technician/ });
    await press(loader, /Make the account/);
    expect(sent('addUser')).toEqual([]);
    expect(text()).toContain('Choose the technician whose phone this is.');
    const [, whose] = await loader.getAllHarnesses(MatSelectHarness);
    await whose?.open();
    const names = await Promise.all((await whose?.getOptions())?.map((one) => one.getText()) ?? []);
    expect(names).toEqual(['Technician 2']);
  });

  it('offer no way to lock oneself out', async () => {
    const { text } = await show(AccountsPart);
    expect(text()).toContain('Ana Ruiz (you)');
    expect(text()).not.toContain('Disable');
    expect(text()).not.toContain('New password');
  });
});

describe('the technicians', () => {
  it('are changed by what is different only, with counts and skills', async () => {
    answers['changeTechnician'] = () => aTechnician(1, { version: 2 });
    const { loader, fixture } = await show(TechniciansPart);
    await press(loader, /Change/);
    const root = fixture.nativeElement as HTMLElement;
    const relay = root.querySelector<HTMLInputElement>('.van input');
    relay!.value = '4';
    relay!.dispatchEvent(new Event('input'));
    await press(loader, /^Save$/);
    expect(sent('changeTechnician')).toEqual([
      { commandId: expect.any(String) as string, version: 1, van: { 'start-relay': 4 } },
    ]);
  });

  it('keep what was typed when somebody else was first, and say which fields', async () => {
    answers['changeTechnician'] = () =>
      new ProblemError({
        type: '/problems/stale-version',
        title: 'It has changed meanwhile',
        status: 409,
        current: aTechnician(1, { phone: '+12525550177', name: 'Theo', version: 8 }),
      });
    const { loader, text } = await show(TechniciansPart);
    await press(loader, /Change/);
    await (await field(loader, /^Name$/)).setValue('Theo Larkspur');
    await press(loader, /^Save$/);
    expect(text()).toContain('Name: changed by somebody else too; yours stands here');
    expect(text()).toContain('Phone: changed by somebody else, and shown here');
    expect(await (await field(loader, /^Name$/)).getValue()).toBe('Theo Larkspur');
    expect(await (await field(loader, /Phone/)).getValue()).toBe('(252) 555-0177');

    answers['changeTechnician'] = () => aTechnician(1, { version: 9 });
    await press(loader, /^Save$/);
    const last = sent('changeTechnician').at(-1);
    expect(last).toMatchObject({ version: 8, name: 'Theo Larkspur' });
    expect(last).not.toHaveProperty('phone');
  });

  it('are not added without a name, a phone and a place to start from', async () => {
    const { loader, text } = await show(TechniciansPart);
    await press(loader, /Add a technician/);
    await press(loader, /^Save$/);
    expect(text()).toContain('A name is needed.');
    expect(text()).toContain('A number is needed.');
    expect(text()).toContain('Choose where the day begins.');
    expect(sent('addTechnician')).toEqual([]);
  });
});

describe('the audit trail', () => {
  const entry = (n: number) => ({
    n,
    at: NOW,
    by: 'Ana Ruiz',
    command: 'takeCall',
    entity: 'call',
    entityId: idOf(1007),
    summary: `took call ${n}`,
  });

  it('pages back and forth by the numbers of the entries', async () => {
    answers['audit'] = ({ query }) => {
      const before = Number(query['before'] ?? 151);
      const count = Math.min(100, before - 1);
      return { entries: Array.from({ length: count }, (_, i) => entry(before - 1 - i)) };
    };
    const { loader, text } = await show(AuditPart);
    expect(text()).toContain('took call 150');
    await press(loader, /Older/);
    expect(text()).toContain('page 2');
    expect(text()).toContain('took call 50');
    expect(text()).not.toContain('took call 51');
    await press(loader, /Newer/);
    expect(text()).toContain('took call 150');
    const queries = asked.filter(({ name }) => name === 'audit').map(({ query }) => query);
    expect(queries).toEqual([{}, { before: '51' }, {}]);
  });

  it('narrows down to one call by its number, or says that there is none', async () => {
    const { loader, text } = await show(AuditPart);
    await (await field(loader, /Only call/)).setValue('7');
    await press(loader, /Look/);
    expect(asked.at(-1)?.query).toEqual({ entityId: idOf(1007) });
    await (await field(loader, /Only call/)).setValue('99');
    await press(loader, /Look/);
    expect(text()).toContain('There is no call 99 in this storm.');
  });
});
