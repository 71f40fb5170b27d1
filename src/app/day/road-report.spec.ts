import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatIconTestingModule } from '@angular/material/icon/testing';
import type { LonLat } from '@shared/contract/common';
import { Api } from '../core/api';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { RoadReport } from './road-report';

const call = jest.fn();
let fixture: ComponentFixture<RoadReport>;
let sent: number;
let here: () => Promise<LonLat | null>;

const element = (): HTMLElement => fixture.nativeElement as HTMLElement;
async function press(): Promise<void> {
  element().querySelector<HTMLButtonElement>('button[type=submit]')?.click();
  await fixture.whenStable();
  await new Promise((done) => setTimeout(done));
  fixture.detectChanges();
}
async function choose(index: number): Promise<void> {
  element().querySelectorAll<HTMLInputElement>('input[type=radio]')[index]?.click();
  await fixture.whenStable();
}
const wrong = (): string => element().querySelector('.wrong')?.textContent?.trim() ?? '';

beforeEach(() => {
  call.mockReset().mockResolvedValue({ done: true });
  here = () => Promise.resolve([-40.1, 34.2]);
  sent = 0;
  TestBed.configureTestingModule({
    providers: [
      { provide: Api, useValue: { call } },
      { provide: Session, useValue: { settings: () => ({ companyPhone: '+12525550100' }) } },
    ],
    imports: [MatIconTestingModule],
  });
  fixture = TestBed.createComponent(RoadReport);
  fixture.componentRef.setInput('here', () => here());
  fixture.componentInstance.sent.subscribe(() => (sent += 1));
  fixture.detectChanges();
});

describe('RoadReport', () => {
  it('asks what it is before it sends anything', async () => {
    await press();
    expect([wrong(), call.mock.calls.length]).toEqual(['Choose what it is first.', 0]);
  });

  it('sends the kind and where the phone is', async () => {
    await choose(1);
    await press();
    expect(call).toHaveBeenCalledWith('reportStormRoad', {
      body: expect.objectContaining({ kind: 'flooded', at: [-40.1, 34.2], notes: '' }) as object,
    });
    expect(sent).toBe(1);
  });

  it('says to ring when the phone does not tell where it is', async () => {
    here = () => Promise.resolve(null);
    await choose(0);
    await press();
    expect(wrong()).toContain('Ring the desk.');
    expect(element().querySelector('a')?.getAttribute('href')).toBe('tel:+12525550100');
    expect([call.mock.calls.length, sent]).toEqual([0, 0]);
  });

  it('repeats what got no answer as the very same report', async () => {
    call.mockRejectedValueOnce(new ProblemError({ type: 'about:blank', title: 'lost', status: 0 }));
    await choose(0);
    await press();
    expect(wrong()).not.toBe('');
    await press();
    const bodies = call.mock.calls.map(([, args]) => (args as { body: object }).body);
    expect(bodies[1]).toEqual(bodies[0]);
    expect(sent).toBe(1);
  });
});
