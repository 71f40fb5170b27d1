import { TestBed } from '@angular/core/testing';
import { MINUTE_MS } from '@shared/domain/instant';
import { CAUTIONS } from '@shared/domain/phone-check/cautions';
import { idOf, NOW } from '../core/testing';
import { aCard, aPage, FakeGeolocation } from './testing';

let geolocation: FakeGeolocation;

describe('DayPage', () => {
  beforeEach(() => {
    geolocation = new FakeGeolocation();
    Object.defineProperty(navigator, 'geolocation', { value: geolocation, configurable: true });
  });
  afterEach(() => {
    TestBed.resetTestingModule();
    localStorage.clear();
  });

  it('says that the next stop comes by itself while there is none', async () => {
    const page = await aPage();
    expect(page.text()).toContain('Nothing for you yet. The next stop appears here by itself.');
    expect(page.link('Ring the desk')).toBe('tel:+12525550100');
  });

  it('shows the offered stop with the reason for its place, its address and its phone', async () => {
    const page = await aPage(
      aCard(1, {}, { parts: ['start-relay', 'overload'], causes: ['Start relay is burnt'] }),
    );
    expect(page.text('h1')).toBe('1 Tern Lane');
    expect(page.text('.because')).toBe('Here because Nearest with time to save the freezer');
    expect(page.link('Open in maps')).toBe(
      'geo:34.000000,-40.000000?q=34.000000,-40.000000(1%20Tern%20Lane)',
    );
    expect(page.link('Ring')).toBe('tel:+12525550101');
    expect(page.text()).toContain('start relay2 on the van');
    expect(page.text()).toContain('overload protectornone on the van');
    expect(page.buttons()).toEqual(['Decline, with a reason', 'Accept this stop']);
  });

  it('puts danger before everything else', async () => {
    const page = await aPage(aCard(1, {}, { danger: true }));
    expect(page.text().startsWith('Danger was reported on the phone.')).toBe(true);
  });

  it('goes from offer to finish, one thing to do at a time', async () => {
    const page = await aPage(aCard(1), aCard(2, { state: 'planned' }));
    await page.tap('Accept this stop');
    await page.answer('acceptance', aCard(1, { state: 'accepted', version: 2 }));

    await page.tap('Start travel');
    expect(page.text('.bar')).toContain('May the desk see where you are while you drive?');
    await page.tap('Share and start');
    const travel = await page.answer(
      'travel',
      aCard(1, { state: 'travelling', version: 3, etaAt: NOW + 12 * MINUTE_MS }),
    );
    expect(travel).toMatchObject({ from: [-40.1, 34.2], version: 2 });
    expect(page.text('.when')).toBe('Arrive 02:27, in 12 min');

    await page.tap('10 min later');
    const eta = await page.answer(
      'eta',
      aCard(1, { state: 'travelling', version: 4, etaAt: NOW + 22 * MINUTE_MS }),
    );
    expect(eta).toMatchObject({ etaAt: NOW + 22 * MINUTE_MS });

    await page.tap('I have arrived');
    await page.answer('arrival', aCard(1, { state: 'on-site', version: 5 }));
    expect(page.text('.before')).toContain(CAUTIONS['unplug-first'].words);
    expect(page.text('.before')).toContain(CAUTIONS['stored-charge'].words);

    await page.tap('Finish the visit');
    await page.tap('Finish');
    expect(page.text('[role=alert]')).toBe('Choose what came of it first.');
    await page.tap('Cooling again');
    await page.write('Relay was burnt.');
    await page.tap('+');
    await page.tap('Finish: cooling again');
    const finish = await page.answer('finish', aCard(1, { state: 'done', version: 6 }));
    expect(finish).toMatchObject({
      outcome: 'restored',
      note: 'Relay was burnt.',
      partsUsed: ['start-relay'],
      version: 5,
    });
    await page.hear({ kind: 'stop', card: aCard(2, { version: 2 }) });
    expect(page.text('h1')).toBe('2 Tern Lane');
    expect(page.said.at(-1)).toContain('New offer: 2 Tern Lane');
  });

  it('declines only with a reason, and with words when it is something else', async () => {
    const page = await aPage(aCard(1));
    await page.tap('Decline, with a reason');
    await page.tap('Give it back');
    expect(page.text('[role=alert]')).toBe('Choose a reason first.');
    await page.tap('Something else');
    await page.tap('Give it back');
    expect(page.text('[role=alert]')).toBe('Say in a few words what it is.');
    await page.write('Flat tyre');
    await page.tap('Give it back');
    const body = await page.answer('decline', aCard(1, { state: 'declined', version: 2 }));
    expect(body).toMatchObject({ reason: 'other', note: 'Flat tyre' });
    expect(page.text('.done')).toBe('Call 1 is given back.');
    expect(page.text()).toContain('Nothing for you yet');
  });

  it('keeps the five minutes after the plug through a closed page', async () => {
    const page = await aPage(aCard(1, { state: 'on-site' }));
    expect(page.text('[role=timer]')).toBe('');
    await page.tap('It is unplugged');
    expect(page.text('[role=timer]')).toBe('5:00');
    TestBed.resetTestingModule();
    const again = await aPage(aCard(1, { state: 'on-site' }));
    expect(again.text('[role=timer]')).toBe('5:00');
    TestBed.resetTestingModule();
    const other = await aPage(aCard(2, { state: 'on-site' }));
    expect(other.text('[role=timer]')).toBe('');
  });

  it('asks which part is needed before the visit ends without it', async () => {
    const page = await aPage(aCard(1, { state: 'on-site' }));
    await page.tap('Finish the visit');
    await page.tap('Needs a part');
    await page.tap('Finish: needs a part');
    expect(page.text('[role=alert]')).toContain('Say which part');
    page.http.expectNone(`/api/stops/${idOf(3001)}/finish`);
  });

  it('makes no promise of a time that has passed', async () => {
    const page = await aPage(aCard(1, { arriveAt: NOW - 5 * MINUTE_MS }));
    expect(page.text('.when')).toBe('Was planned for 02:10, 5 min ago');
  });

  it('starts travel when the phone may not say where it is, and does not ask again', async () => {
    geolocation.fix = null;
    const page = await aPage(aCard(1, { state: 'accepted' }));
    await page.tap('Start travel');
    await page.tap('Share and start');
    const body = await page.answer('travel', aCard(1, { state: 'travelling', version: 2 }));
    expect(body).toMatchObject({ from: null });
    expect(page.text()).toContain('This phone does not tell where it is.');
    TestBed.resetTestingModule();

    const again = await aPage(aCard(2, { state: 'accepted' }));
    await again.tap('Start travel');
    again.sent('travel', 2);
  });

  it('never asks the phone for its place when it was told not to', async () => {
    const page = await aPage(aCard(1, { state: 'accepted' }));
    await page.tap('Start travel');
    await page.tap('Start without');
    const body = await page.answer('travel', aCard(1, { state: 'travelling', version: 2 }));
    expect(body).toMatchObject({ from: null });
    expect(geolocation).toMatchObject({ asked: 0, watching: 0 });
  });

  it('reports its place while driving, every 30 seconds at most, and stops on arrival', async () => {
    localStorage.setItem('thawline:share-position', 'yes');
    const page = await aPage(aCard(1, { state: 'travelling' }));
    expect(geolocation.watching).toBe(1);
    geolocation.drive();
    const report = page.http.expectOne('/api/day/position');
    expect(report.request.body).toEqual({
      position: { lonLat: [-40.1, 34.2], at: NOW, accuracyMeters: 12 },
    });
    report.flush({ done: true });
    page.time.now += 29_000;
    geolocation.drive();
    page.http.expectNone('/api/day/position');
    page.time.now += 1_000;
    geolocation.drive();
    page.http.expectOne('/api/day/position').flush({ done: true });
    await page.hear({ kind: 'stop', card: aCard(1, { state: 'on-site', version: 2 }) });
    expect(geolocation.watching).toBe(0);
  });
});
