import { TestBed } from '@angular/core/testing';
import { MatDialog } from '@angular/material/dialog';
import { type KeyAction, Keys } from './keys';

describe('Keys', () => {
  let keys: Keys;
  let openDialogs: unknown[];
  const run = jest.fn();

  beforeEach(() => {
    localStorage.clear();
    run.mockReset();
    document.body.innerHTML = '<input id="text"><input id="box" type="checkbox"><p id="plain"></p>';
    openDialogs = [];
    TestBed.configureTestingModule({
      providers: [{ provide: MatDialog, useValue: { openDialogs } }],
    });
    keys = TestBed.inject(Keys);
  });

  const action = (does: string, change: Partial<KeyAction> = {}): KeyAction => ({
    keys: 'j',
    does,
    scope: 'Queue',
    run: () => run(does),
    ...change,
  });

  function press(key: string, init: KeyboardEventInit = {}, on = 'plain'): KeyboardEvent {
    const event = new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...init });
    document.getElementById(on)!.dispatchEvent(event);
    return event;
  }

  it('does what was registered, and keeps the key from the browser', () => {
    keys.register([action('next')]);
    expect(press('j').defaultPrevented).toBe(true);
    expect(run).toHaveBeenCalledWith('next');
    expect(press('k').defaultPrevented).toBe(false);
  });

  it('leaves the keys to a field that is typed in, but not to a checkbox', () => {
    keys.register([action('next')]);
    press('j', {}, 'text');
    expect(run).not.toHaveBeenCalled();
    press('j', {}, 'box');
    expect(run).toHaveBeenCalledTimes(1);
  });

  it('works in a field with Ctrl, and where the action says so', () => {
    keys.register([
      action('save', { keys: 'Ctrl+Enter' }),
      action('leave', { keys: 'Escape', inFields: true }),
    ]);
    press('Enter', { ctrlKey: true }, 'text');
    press('Escape', {}, 'text');
    expect(run.mock.calls).toEqual([['save'], ['leave']]);
  });

  it('reads two steps, and forgets the first after a pause', () => {
    keys.register([action('map', { keys: 'g m' }), action('merge', { keys: 'm' })]);
    press('g');
    press('m');
    expect(run.mock.calls).toEqual([['map']]);

    const first = press('g');
    const late = new KeyboardEvent('keydown', { key: 'm', bubbles: true, cancelable: true });
    Object.defineProperty(late, 'timeStamp', { value: first.timeStamp + 5_000 });
    document.getElementById('plain')!.dispatchEvent(late);
    expect(run.mock.calls).toEqual([['map'], ['merge']]);
  });

  it('gives a key to the newest registration, and back when that is gone', () => {
    keys.register([action('queue')]);
    const remove = keys.register([action('map')]);
    press('j');
    remove();
    press('j');
    expect(run.mock.calls).toEqual([['map'], ['queue']]);
  });

  it('passes a key on from an action that does not apply now', () => {
    keys.register([action('queue')]);
    keys.register([action('map', { when: () => false })]);
    press('j');
    expect(run).toHaveBeenCalledWith('queue');
  });

  it('does not repeat while a key is held, unless asked to', () => {
    keys.register([action('claim', { keys: 'c' }), action('next', { repeats: true })]);
    press('c', { repeat: true });
    press('j', { repeat: true });
    expect(run.mock.calls).toEqual([['next']]);
  });

  it('is quiet while a dialog is open', () => {
    keys.register([action('next'), action('help', { keys: '?', inDialogs: true })]);
    openDialogs.push({});
    press('j');
    press('?', { shiftKey: true });
    expect(run.mock.calls).toEqual([['help']]);
  });

  it('can be turned off for single characters only, and remembers it', () => {
    keys.register([action('next'), action('back', { keys: 'Escape' })]);
    keys.turn('off');
    press('j');
    press('Escape');
    expect(run.mock.calls).toEqual([['back']]);
    const afterReload = TestBed.runInInjectionContext(() => new Keys());
    expect(afterReload.isOn()).toBe(false);
  });

  it('lists what works now by scope, each key once', () => {
    keys.register([action('next'), action('search', { keys: '/' })]);
    keys.register([action('pan', { scope: 'Map' })]);
    expect(
      keys.byScope().map(({ scope, actions }) => [scope, actions.map((one) => one.does)]),
    ).toEqual([
      ['Queue', ['search']],
      ['Map', ['pan']],
    ]);
  });
});
