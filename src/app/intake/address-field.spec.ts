import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { Address, AddressSuggestion } from '@shared/contract/calls';
import { Api } from '../core/api';
import { AddressField } from './address-field';
import { NO_ADDRESS } from './intake-draft';

const HOUSE: AddressSuggestion = {
  label: '1214 N Heron St, Pell Harbor 00010',
  unitNo: 'Apt 4',
  lonLat: [-47.7, 36.4],
  kind: 'interpolated',
  confidence: 0.8,
};

let fixture: ComponentFixture<AddressField>;
let answer: readonly AddressSuggestion[];
let asked: string[];
let address: Address;

beforeEach(() => {
  jest.useFakeTimers();
  asked = [];
  answer = [HOUSE];
  TestBed.configureTestingModule({
    providers: [
      {
        provide: Api,
        useValue: {
          call: async (_: string, { query }: { query: { text: string } }) => {
            asked.push(query.text);
            return Promise.resolve({ suggestions: answer });
          },
        },
      },
    ],
  });
  fixture = TestBed.createComponent(AddressField);
  show({ ...NO_ADDRESS });
  fixture.componentInstance.changed.subscribe((changed) => show(changed));
});
afterEach(() => jest.useRealTimers());

function show(next: Address): void {
  address = next;
  fixture.componentRef.setInput('address', next);
  fixture.detectChanges();
}

const host = (): HTMLElement => fixture.nativeElement as HTMLElement;
const input = (): HTMLInputElement => host().querySelector('input[role=combobox]')!;
const note = (): string => host().querySelector('.note')!.textContent.trim();

async function type(text: string): Promise<void> {
  input().value = text;
  input().dispatchEvent(new Event('input'));
  await jest.advanceTimersByTimeAsync(500);
  fixture.detectChanges();
}

const press = (key: string): void => {
  input().dispatchEvent(new KeyboardEvent('keydown', { key }));
  fixture.detectChanges();
};

describe('AddressField', () => {
  it('says of each suggestion how well it is known, and which apartment it takes along', async () => {
    await type('1214 n heron apt 4');
    const option = host().querySelector('[role=option]')!;
    expect(option.textContent).toContain('1214 N Heron St, Pell Harbor 00010, Apt 4');
    expect(option.textContent).toContain('between known numbers');
  });

  it('keeps the apartment in its own field and the kind with the address', async () => {
    await type('1214 n heron apt 4');
    press('Enter');
    expect(address).toEqual({
      text: '1214 N Heron St, Pell Harbor 00010',
      unitNo: 'Apt 4',
      lonLat: [-47.7, 36.4],
      kind: 'interpolated',
    });
    expect(note()).toBe('between known numbers');
  });

  it('leaves an apartment that was typed already when the suggestion has none', async () => {
    show({ ...NO_ADDRESS, unitNo: 'Lot 7' });
    answer = [{ ...HOUSE, unitNo: '' }];
    await type('1214 n heron');
    press('Enter');
    expect(address.unitNo).toBe('Lot 7');
  });

  it('forgets the point once other words are typed', async () => {
    await type('1214 n heron apt 4');
    press('Enter');
    await type('99 larch');
    expect(address).toMatchObject({
      text: '99 larch',
      lonLat: null,
      kind: 'unlocated',
      unitNo: 'Apt 4',
    });
  });

  it('refuses a post box in words, without asking, and keeps what was typed', async () => {
    await type('PO Box 12, Pell Harbor');
    expect(asked).toEqual([]);
    expect(note()).toMatch(/Nobody can drive to a post box/);
    expect(address.text).toBe('PO Box 12, Pell Harbor');
    await type('PO Box 12, 1214 n heron');
    expect(asked).toEqual(['PO Box 12, 1214 n heron']);
    expect(note()).not.toMatch(/post box/);
  });

  it('says when nothing is like it', async () => {
    answer = [];
    await type('zzzz qqqq');
    expect(note()).toMatch(/Nothing like it in this region/);
    answer = [HOUSE];
    await type('1214 n heron');
    expect(note()).not.toMatch(/Nothing like it/);
  });
});
