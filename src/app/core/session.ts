import { computed, inject, Injectable, signal } from '@angular/core';
import { Router } from '@angular/router';
import type { Role } from '@shared/contract/common';
import type { Settings, StormDto } from '@shared/contract/office';
import type { ReplyOf } from '@shared/contract/http';
import { Api } from './api';
import { Clock } from './clock';
import { Drafts } from './drafts';
import { ProblemError } from './problem-error';

export type Me = ReplyOf<'signIn'>;

/** `unreachable`: the server has not yet said whether anybody is signed in. */
export type SessionState = 'asking' | 'signed-in' | 'signed-out' | 'unreachable';

/**
 * Who is signed in, and what every screen needs first. A 401 anywhere ends in `signed-out` with
 * the address and the drafts kept, so that signing in again goes on where the work stopped.
 */
@Injectable({ providedIn: 'root' })
export class Session {
  private readonly api = inject(Api);
  private readonly router = inject(Router);
  private readonly clock = inject(Clock);
  private readonly drafts = inject(Drafts);

  private readonly known = signal<Me | null>(null);
  private readonly stateNow = signal<SessionState>('asking');
  private readonly endedBecause = signal<string | null>(null);

  readonly me = this.known.asReadonly();
  readonly state = this.stateNow.asReadonly();
  /** Why the last session ended, when it was not this person's own doing. */
  readonly endReason = this.endedBecause.asReadonly();

  readonly user = computed(() => this.known()?.user ?? null);
  readonly role = computed<Role | null>(() => this.known()?.user.role ?? null);
  readonly storm = computed(() => this.known()?.storm ?? null);
  /** Whether there is a storm to work in. */
  readonly hasOpenStorm = computed(() => this.storm()?.state === 'open');
  readonly region = computed(() => this.known()?.region ?? null);
  readonly settings = computed(() => this.known()?.settings ?? null);
  /** The region's IANA time zone; UTC before anyone is signed in. */
  readonly zone = computed(() => this.known()?.region.timeZone ?? 'UTC');
  /** Whether this person works at a desk, with the shared board. */
  readonly isDesk = computed(() => this.role() !== null && this.role() !== 'technician');
  readonly isOffice = computed(() => this.role() === 'manager' || this.role() === 'owner');

  constructor() {
    this.api.sessionLost.subscribe(() => this.end(null));
  }

  /** Asks the server who is signed in. Never rejects: being unreachable is a state. */
  async refresh(): Promise<void> {
    try {
      const { me } = await this.api.call('me');
      if (me) this.take(me);
      else this.forget();
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (this.stateNow() === 'asking') this.stateNow.set('unreachable');
    }
  }

  /** Signs in, or rejects with `sign-in-failed` or `too-many-attempts`. */
  async signIn(signInName: string, password: string): Promise<Me> {
    const me = await this.api.call('signIn', { body: { signInName, password } });
    this.endedBecause.set(null);
    this.take(me);
    return me;
  }

  /** Drafts are cleared, since the next person at this desk is another, unless asked to stay. */
  async signOut(drafts: 'clear-drafts' | 'keep-drafts' = 'clear-drafts'): Promise<void> {
    await this.api.call('signOut');
    if (drafts === 'clear-drafts') this.drafts.clearAll();
    this.forget();
    await this.router.navigateByUrl('/sign-in');
  }

  /** The server ended the session, or answered that there is none. */
  end(reason: string | null): void {
    if (this.stateNow() === 'signed-out') return;
    this.endedBecause.set(reason ?? 'You have been signed out. Sign in to go on where you were.');
    this.forget();
    const back = this.router.url;
    void this.router.navigate(['/sign-in'], {
      queryParams: isWorthReturningTo(back) ? { back } : {},
    });
  }

  /** Where this person's work begins. */
  home(): string {
    const me = this.known();
    if (!me) return '/sign-in';
    if (me.user.mustChangePassword) return '/password';
    return HOMES[me.user.role];
  }

  /** A newer storm or newer settings arrived with the board's changes. */
  takeStorm(storm: StormDto): void {
    this.known.update((me) => {
      if (!me || (me.storm?.id === storm.id && me.storm.version >= storm.version)) return me;
      return { ...me, storm };
    });
  }

  takeSettings(settings: Settings): void {
    this.known.update((me) =>
      me && me.settings.version < settings.version ? { ...me, settings } : me,
    );
  }

  /** Another region is in use: its map, its zone, its addresses. */
  takeRegion(region: Me['region']): void {
    this.known.update((me) =>
      me && me.region.tilesUrl !== region.tilesUrl ? { ...me, region } : me,
    );
  }

  /** Asks which region is in use, after a time in which nobody could tell. Never rejects. */
  async refreshRegion(): Promise<void> {
    if (!this.known()) return;
    try {
      this.takeRegion(await this.api.call('region'));
    } catch (error) {
      // The next connection asks again.
      if (!(error instanceof ProblemError)) throw error;
    }
  }

  /** Asks which storm is open, after the one on the screen has ended. Never rejects. */
  async refreshStorm(): Promise<void> {
    if (!this.known()) return;
    try {
      const { me } = await this.api.call('me');
      if (me?.storm) this.takeStorm(me.storm);
    } catch (error) {
      // It is asked again soon.
      if (!(error instanceof ProblemError)) throw error;
    }
  }

  passwordChanged(): void {
    this.known.update((me) =>
      me ? { ...me, user: { ...me.user, mustChangePassword: false } } : me,
    );
  }

  private take(me: Me): void {
    this.clock.correct(me.serverNow);
    this.drafts.of(me.user.id);
    this.known.set(me);
    this.stateNow.set('signed-in');
  }

  private forget(): void {
    this.known.set(null);
    this.stateNow.set('signed-out');
  }
}

const HOMES: Readonly<Record<Role, string>> = {
  technician: '/day',
  dispatcher: '/board',
  manager: '/drain',
  owner: '/drain',
};

/** Only a path of this application; never an address of another host that someone put into a link. */
export const isWorthReturningTo = (url: string): boolean =>
  /^\/(?![/\\])/.test(url) && url !== '/' && !/^\/(sign-in|password)\b/.test(url);
