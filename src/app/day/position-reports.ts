import { DOCUMENT } from '@angular/common';
import { DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { greatCircleKm } from '@shared/domain/travel/great-circle';
import { Api } from '../core/api';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { fromStorage, toStorage } from '../core/storage';

const STORED_AS = 'thawline:share-position';
const REPORT_EVERY_MS = 30_000;
/** Exact positions drain the battery; they are worth it only near the door. */
const NEAR_KM = 2;
const FIRST_FIX_WITHIN_MS = 6_000;
const MOST_AGE_MS = 60_000;

/** Whether this person lets the desk see where they drive; `unasked` before the first drive. */
export type Sharing = 'unasked' | 'yes' | 'no';

/**
 * Where the van is while it drives: a hint for the desk and the arrival time, never something that
 * the work depends on. Nothing is kept or sent later, and nothing is measured while the page is hidden.
 */
@Injectable()
export class PositionReports {
  private readonly api = inject(Api);
  private readonly clock = inject(Clock);
  private readonly document = inject(DOCUMENT);
  private readonly geolocation = this.document.defaultView?.navigator.geolocation;

  private readonly choice = signal<Sharing>(storedChoice());
  private readonly target = signal<{ readonly to: LonLat | null } | null>(null);
  private readonly isVisible = signal(this.document.visibilityState === 'visible');
  private readonly isNear = signal(false);
  private readonly isBlocked = signal(false);
  private reportedAt = -Infinity;

  readonly sharing = this.choice.asReadonly();
  /** The phone itself said no, whatever was chosen here. */
  readonly blocked = this.isBlocked.asReadonly();

  constructor() {
    const changed = (): void => this.isVisible.set(this.document.visibilityState === 'visible');
    this.document.addEventListener('visibilitychange', changed);
    let watch: number | undefined;
    const stop = (): void => {
      if (watch !== undefined) this.geolocation?.clearWatch(watch);
      watch = undefined;
    };
    effect(() => {
      const isWanted = this.target() !== null && this.isVisible() && this.choice() === 'yes';
      const enableHighAccuracy = this.isNear();
      stop();
      if (!isWanted) return;
      untracked(() => {
        watch = this.geolocation?.watchPosition(
          (fix) => void this.report(fix),
          (error) => this.isBlocked.set(error.code === error.PERMISSION_DENIED),
          { enableHighAccuracy, maximumAge: 10_000 },
        );
      });
    });
    inject(DestroyRef).onDestroy(() => {
      stop();
      this.document.removeEventListener('visibilitychange', changed);
    });
  }

  choose(sharing: 'yes' | 'no'): void {
    this.choice.set(sharing);
    toStorage(STORED_AS, sharing);
  }

  /** @param to where the drive goes; `null` while nobody drives */
  follow(to: { readonly to: LonLat | null } | null): void {
    if (
      to?.to?.join() === this.target()?.to?.join() &&
      (to === null) === (this.target() === null)
    ) {
      return;
    }
    this.isNear.set(false);
    this.target.set(to);
  }

  /** Where the phone is now; `null` when it does not say so within seconds. */
  here(): Promise<LonLat | null> {
    return this.choice() === 'yes' ? this.once() : Promise.resolve(null);
  }

  /** As `here`, for something that the person asks for now, whatever they said of sharing while driving. */
  once(): Promise<LonLat | null> {
    const { geolocation } = this;
    if (!geolocation) return Promise.resolve(null);
    return new Promise((resolve) => {
      // Browsers leave the question to the person open; the drive does not wait for it.
      const late = setTimeout(() => resolve(null), FIRST_FIX_WITHIN_MS + 1_000);
      geolocation.getCurrentPosition(
        ({ coords }) => {
          clearTimeout(late);
          resolve([coords.longitude, coords.latitude]);
        },
        (error) => {
          clearTimeout(late);
          this.isBlocked.set(error.code === error.PERMISSION_DENIED);
          resolve(null);
        },
        { timeout: FIRST_FIX_WITHIN_MS, maximumAge: MOST_AGE_MS },
      );
    });
  }

  private async report({ coords }: GeolocationPosition): Promise<void> {
    this.isBlocked.set(false);
    const lonLat: LonLat = [coords.longitude, coords.latitude];
    const to = this.target()?.to;
    if (to) this.isNear.set(greatCircleKm(lonLat, to) < NEAR_KM);
    const now = this.clock.exact();
    if (now - this.reportedAt < REPORT_EVERY_MS) return;
    this.reportedAt = now;
    try {
      const position = { lonLat, at: Math.round(now), accuracyMeters: coords.accuracy };
      await this.api.call('reportPosition', { body: { position } });
    } catch (error) {
      // The next position is newer than this one; nothing is sent twice.
      if (!(error instanceof ProblemError)) throw error;
    }
  }
}

function storedChoice(): Sharing {
  const stored = fromStorage(STORED_AS);
  return stored === 'yes' || stored === 'no' ? stored : 'unasked';
}
