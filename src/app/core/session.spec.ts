import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { Component } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { provideRouter, Router } from '@angular/router';
import { Api } from './api';
import { Drafts } from './drafts';
import { homeGuard, roleGuard } from './role-guard';
import { isWorthReturningTo, Session } from './session';
import { aMe, aStorm, settled } from './testing';

@Component({ template: '' })
class Blank {}

const isText = (value: unknown): value is string => typeof value === 'string';

describe('Session', () => {
  let session: Session;
  let http: HttpTestingController;
  let router: Router;

  beforeEach(() => {
    localStorage.clear();
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([
          { path: 'sign-in', component: Blank },
          { path: 'password', component: Blank },
          { path: 'board', component: Blank, canActivate: [roleGuard('dispatcher', 'manager')] },
          { path: 'drain', component: Blank, canActivate: [roleGuard('manager', 'owner')] },
          { path: 'day', component: Blank, canActivate: [roleGuard('technician')] },
          { path: '**', canActivate: [homeGuard], children: [] },
        ]),
      ],
    });
    session = TestBed.inject(Session);
    http = TestBed.inject(HttpTestingController);
    router = TestBed.inject(Router);
  });
  afterEach(() => http.verify());

  async function signedIn(me = aMe()): Promise<void> {
    const asked = session.refresh();
    http.expectOne('/api/me').flush({ me });
    await asked;
  }

  it('knows the person, the storm and the region after asking', async () => {
    await signedIn();
    expect(session.state()).toBe('signed-in');
    expect(session.role()).toBe('dispatcher');
    expect(session.storm()?.name).toBe('September ice');
    expect(session.zone()).toBe('America/New_York');
  });

  it('takes the next storm once the one on the screen has ended', async () => {
    const over = { ...aStorm(), state: 'closed' as const, closedAt: 1 };
    await signedIn({ ...aMe(), storm: over });
    expect(session.hasOpenStorm()).toBe(false);
    const asked = session.refreshStorm();
    const next = { ...aStorm(), id: '00000000-0000-4000-8000-00000000000f', name: 'November gale' };
    http.expectOne('/api/me').flush({ me: { ...aMe(), storm: next } });
    await asked;
    expect([session.storm()?.name, session.hasOpenStorm()]).toEqual(['November gale', true]);
  });

  it('is signed out, not unreachable, when the server says nobody', async () => {
    const asked = session.refresh();
    http.expectOne('/api/me').flush({ me: null });
    await asked;
    expect(session.state()).toBe('signed-out');
  });

  it('is unreachable without an answer, and stays signed in when it already was', async () => {
    const first = session.refresh();
    http.expectOne('/api/me').error(new ProgressEvent('error'));
    await first;
    expect(session.state()).toBe('unreachable');

    await signedIn();
    const later = session.refresh();
    http.expectOne('/api/me').error(new ProgressEvent('error'));
    await later;
    expect(session.state()).toBe('signed-in');
  });

  it.each([
    ['technician', '/day'],
    ['dispatcher', '/board'],
    ['manager', '/drain'],
    ['owner', '/drain'],
  ] as const)('starts a %s at %s', async (role, home) => {
    await signedIn(aMe(role));
    expect(session.home()).toBe(home);
  });

  it('keeps out whoever has another role, and sends them to their own work', async () => {
    await signedIn(aMe('dispatcher'));
    await router.navigateByUrl('/drain');
    expect(router.url).toBe('/board');
  });

  it('lets nobody work before a given password is replaced', async () => {
    await signedIn(aMe('dispatcher', { mustChangePassword: true }));
    await router.navigateByUrl('/board');
    expect(router.url).toBe('/password');
    session.passwordChanged();
    await router.navigateByUrl('/board');
    expect(router.url).toBe('/board');
  });

  it('keeps the address for later when nobody is signed in', async () => {
    await router.navigateByUrl('/board');
    expect(router.url).toBe('/sign-in?back=%2Fboard');
  });

  it('goes to sign-in on a lost session, with the address and the drafts kept', async () => {
    await signedIn();
    await router.navigateByUrl('/board');
    const drafts = TestBed.inject(Drafts);
    drafts.save('call', 'half a call');

    const refused = TestBed.inject(Api)
      .call('settings')
      .catch(() => undefined);
    http
      .expectOne('/api/settings')
      .flush(
        { type: '/problems/not-signed-in', title: 'Sign in first', status: 401 },
        { status: 401, statusText: 'Unauthorized' },
      );
    await refused;
    await settled();

    expect(session.state()).toBe('signed-out');
    expect(session.endReason()).toContain('signed out');
    expect(router.url).toBe('/sign-in?back=%2Fboard');
    await signedIn();
    expect(drafts.load('call', isText)).toBe('half a call');
  });

  it.each([
    ['clear-drafts', null],
    ['keep-drafts', 'half a call'],
  ] as const)('signs out with %s', async (choice, left) => {
    await signedIn();
    const drafts = TestBed.inject(Drafts);
    drafts.save('call', 'half a call');
    const signedOut = session.signOut(choice);
    http.expectOne({ method: 'DELETE', url: '/api/session' }).flush({ done: true });
    await signedOut;
    expect(router.url).toBe('/sign-in');
    expect(session.endReason()).toBeNull();
    await signedIn();
    expect(drafts.load('call', isText)).toBe(left);
  });

  it('stays signed in when signing out did not reach the server', async () => {
    await signedIn();
    const signedOut = session.signOut();
    http.expectOne('/api/session').error(new ProgressEvent('error'));
    await expect(signedOut).rejects.toMatchObject({ code: 'no-connection' });
    expect(session.state()).toBe('signed-in');
  });

  it('never takes older settings', async () => {
    await signedIn();
    session.takeSettings({ ...aMe().settings, version: 3, speedMph: 20 });
    session.takeSettings({ ...aMe().settings, version: 2, speedMph: 60 });
    expect(session.settings()?.speedMph).toBe(20);
  });
});

describe('isWorthReturningTo', () => {
  it.each(['/board', '/office?tab=people'])('goes back to %s', (url) => {
    expect(isWorthReturningTo(url)).toBe(true);
  });
  it.each(['//example.org', '/\\example.org', 'https://example.org', '/', '/sign-in?back=x'])(
    'does not go to %s',
    (url) => {
      expect(isWorthReturningTo(url)).toBe(false);
    },
  );
});
