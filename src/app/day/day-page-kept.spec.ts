import { TestBed } from '@angular/core/testing';
import { idOf } from '../core/testing';
import { aCard, aPage } from './testing';

describe('DayPage, when an answer or the connection fails', () => {
  afterEach(() => {
    TestBed.resetTestingModule();
    localStorage.clear();
  });

  it('keeps what could not be sent, through a closed browser, and sends the very same again', async () => {
    const page = await aPage(aCard(1, { state: 'travelling' }));
    await page.tap('I have arrived');
    const first = page.sent('arrival');
    first.error(new ProgressEvent('error'));
    await page.settle();
    expect(page.text('[role=alert]')).toContain(
      'Not sent yet: Arrived at call 1, 02:15. It is kept on this phone',
    );
    expect(page.buttons()).toContain('Send it now');
    expect(page.buttons()).not.toContain('I have arrived');
    TestBed.resetTestingModule();

    const after = await aPage(aCard(1, { state: 'travelling' }));
    const second = after.sent('arrival');
    expect(second.request.body).toEqual(first.request.body);
    second.flush({ card: aCard(1, { state: 'on-site', version: 2 }) });
    await after.settle();
    expect(after.text()).not.toContain('Not sent yet');
    expect(after.buttons()).toContain('Finish the visit');
  });

  it('sends what was kept as soon as the connection is back', async () => {
    const page = await aPage(aCard(1));
    page.socket.cut();
    await page.tap('Accept this stop');
    page.sent('acceptance').error(new ProgressEvent('error'));
    await page.settle();
    page.socket.up();
    await page.settle();
    await page.answer('acceptance', aCard(1, { state: 'accepted', version: 2 }));
    expect(page.buttons()).toContain('Start travel');
  });

  it('keeps a half-filled finish when the page is closed', async () => {
    const page = await aPage(aCard(1, { state: 'on-site' }));
    await page.tap('Finish the visit');
    await page.tap('Needs a part');
    await page.write('Control board, ordered twice');
    TestBed.resetTestingModule();
    const after = await aPage(aCard(1, { state: 'on-site' }));
    await after.tap('Finish the visit');
    await after.tap('Finish: needs a part');
    expect(after.sent('finish').request.body).toMatchObject({
      outcome: 'parts-on-order',
      note: 'Control board, ordered twice',
    });
  });

  it('keeps a form open when the same stop is announced once more', async () => {
    const page = await aPage(aCard(1, { state: 'on-site', version: 5 }));
    await page.tap('Finish the visit');
    await page.hear({ kind: 'stop', card: aCard(1, { state: 'on-site', version: 5 }) });
    await page.tap('Cooling again');
    expect(page.buttons()).toContain('Finish: cooling again');
  });

  it('says what happened when a stop was taken back, and moves on', async () => {
    const page = await aPage(aCard(1), aCard(2, { state: 'planned' }));
    await page.tap('Accept this stop');
    page.sent('acceptance').flush(
      {
        type: '/problems/stale-version',
        title: 'Stale',
        detail: 'This stop is over. Pulled by Mara Quill: it runs again',
        status: 409,
        current: aCard(1, { state: 'pulled', version: 2 }),
      },
      { status: 409, statusText: 'Conflict' },
    );
    await page.settle();
    expect(page.text('[role=alert]')).toContain(
      '“Accepted call 1” was not taken. This stop is over. Pulled by Mara Quill: it runs again',
    );
    await page.hear({ kind: 'stop', card: aCard(2, { version: 2 }) });
    expect(page.text('h1')).toBe('2 Tern Lane');
    expect(page.buttons()).toContain('Accept this stop');
  });

  it('keeps the news of a stop taken back until it is read', async () => {
    const page = await aPage(aCard(1, { state: 'accepted' }));
    await page.hear({ kind: 'gone', stopId: idOf(3001), reason: 'Pulled: it runs again.' });
    expect(page.text('[role=alert]')).toContain(
      'This stop was taken back: 1 Tern Lane, Household 1. Pulled: it runs again.',
    );
    await page.tap('OK');
    expect(page.text()).not.toContain('taken back');
  });

  it('says from when what it shows is, while there is no connection', async () => {
    const page = await aPage(aCard(1));
    expect(page.text('.link')).toBe('');
    page.socket.cut();
    await page.settle();
    expect(page.text('.link')).toContain(
      'go on, what you do is kept and sent later. What you see is as of 02:15.',
    );
  });
});
