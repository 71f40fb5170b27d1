import { DOCUMENT } from '@angular/common';
import { DestroyRef, inject, Injectable, signal } from '@angular/core';
import type { Instant } from '@shared/domain/instant';

const TICK_MS = 10_000;

/** The server's time, as well as this machine can know it. */
@Injectable({ providedIn: 'root' })
export class Clock {
  private offsetMs = 0;
  private readonly ticking = signal<Instant>(Date.now());

  /** Moves every 10 seconds; for what stands on a screen. */
  readonly now = this.ticking.asReadonly();

  constructor() {
    const document = inject(DOCUMENT);
    const tick = (): void => this.ticking.set(this.exact());
    const timer = setInterval(tick, TICK_MS);
    // Browsers slow the timers of hidden pages; the first look must not show an old time.
    document.addEventListener('visibilitychange', tick);
    inject(DestroyRef).onDestroy(() => {
      clearInterval(timer);
      document.removeEventListener('visibilitychange', tick);
    });
  }

  /** This very moment; for running timers and for what is written down. */
  exact(): Instant {
    return Date.now() + this.offsetMs;
  }

  /** Takes the server's time from an answer that has just come. */
  correct(serverNow: Instant): void {
    this.offsetMs = serverNow - Date.now();
    this.ticking.set(serverNow);
  }
}
