import { TestBed } from '@angular/core/testing';
import type { LonLat } from '@shared/contract/common';
import { Api } from '../core/api';
import { PinRequest } from '../intake/pin-request';
import { PinTool } from './pin-tool';

const HERE: LonLat = [-47.71, 36.4];

function setUp() {
  const call = jest.fn();
  TestBed.configureTestingModule({ providers: [PinTool, { provide: Api, useValue: { call } }] });
  return { call, pin: TestBed.inject(PinTool), pins: TestBed.inject(PinRequest) };
}

const suggestion = (label: string) => ({ suggestion: { label } });

describe('PinTool', () => {
  beforeEach(() => jest.useFakeTimers());
  afterEach(() => jest.useRealTimers());

  it('asks for the nearest address once the hand rests, and not on its way', async () => {
    const { call, pin, pins } = setUp();
    call.mockResolvedValue(suggestion('14 Tern Lane'));
    void pins.ask({ prompt: 'Where?', near: null });
    pin.look([-47.7, 36.4]);
    await jest.advanceTimersByTimeAsync(100);
    pin.look(HERE);
    await jest.advanceTimersByTimeAsync(1000);
    expect(call).toHaveBeenCalledTimes(1);
    expect(call).toHaveBeenCalledWith('nearestAddress', {
      query: { lon: '-47.710000', lat: '36.400000' },
    });
    expect(pin.nearest()).toBe('14 Tern Lane');
  });

  it('asks nothing while nobody wants a point', async () => {
    const { call, pin } = setUp();
    pin.look(HERE);
    await jest.advanceTimersByTimeAsync(1000);
    expect(call).not.toHaveBeenCalled();
  });

  it('passes over an answer that comes after a newer one', async () => {
    const { call, pin, pins } = setUp();
    let late: (value: unknown) => void = () => undefined;
    call.mockReturnValueOnce(new Promise((resolve) => (late = resolve)));
    call.mockResolvedValueOnce(suggestion('second'));
    void pins.ask({ prompt: 'Where?', near: null });
    pin.look([-47.7, 36.4]);
    await jest.advanceTimersByTimeAsync(1000);
    pin.look(HERE);
    await jest.advanceTimersByTimeAsync(1000);
    late(suggestion('first'));
    await jest.advanceTimersByTimeAsync(0);
    expect(pin.nearest()).toBe('second');
  });

  it('gives the point to whoever asked, and leaves nothing behind', async () => {
    const { pin, pins } = setUp();
    const asked = pins.ask({ prompt: 'Where?', near: null });
    pin.put(HERE);
    expect(pin.placed()).toEqual(HERE);
    pin.take(HERE);
    await expect(asked).resolves.toEqual(HERE);
    expect(pin.isOn()).toBe(false);
    expect(pin.placed()).toBeNull();
  });

  it('gives no point when the person thinks better of it', async () => {
    const { pin, pins } = setUp();
    const asked = pins.ask({ prompt: 'Where?', near: null });
    pin.cancel();
    await expect(asked).resolves.toBeNull();
  });
});
