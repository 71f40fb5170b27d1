import { LiveAnnouncer } from '@angular/cdk/a11y';
import { DestroyRef, inject, Injectable } from '@angular/core';
import { MatSnackBar } from '@angular/material/snack-bar';

/** WCAG 2.2, 4.1.3: a status may be told, and must not chatter; our own bound is 12 a minute. */
const QUIET_MS = 5_000;
/** A phone held upright. */
const NARROW_PX = 600;
const NOTICE_MS = 6_000;
/** Undo needs longer than reading does. */
const NOTICE_WITH_ACTION_MS = 10_000;

/** Tells people what happened: on screen for who acts, in speech for who listens. */
@Injectable({ providedIn: 'root' })
export class Announce {
  private readonly speech = inject(LiveAnnouncer);
  private readonly bar = inject(MatSnackBar);

  private readonly tallies = new Map<string, number>();
  private spokeAt = -Infinity;
  private timer: ReturnType<typeof setTimeout> | undefined;

  constructor() {
    inject(DestroyRef).onDestroy(() => clearTimeout(this.timer));
  }

  /** Spoken only, at once and politely: the answer to what this person just did. */
  say(words: string): void {
    void this.speech.announce(words, 'polite');
  }

  /** Spoken over everything else. Only for danger to people. */
  warn(words: string): void {
    void this.speech.announce(words, 'assertive');
  }

  /** Shown for a few seconds and spoken; with an action, such as Undo, for ten. */
  notice(words: string, action?: { readonly label: string; readonly run: () => void }): void {
    const shown = this.bar.open(words, action?.label, {
      duration: action ? NOTICE_WITH_ACTION_MS : NOTICE_MS,
      // On a narrow screen the buttons of a form are at the bottom, and must stay in reach.
      verticalPosition: window.innerWidth < NARROW_PX ? 'top' : 'bottom',
    });
    if (action) shown.onAction().subscribe(action.run);
  }

  /**
   * Counts something that comes by itself, such as `new call`, and speaks one summary ("4 new
   * calls, 1 reply") every five seconds at most.
   */
  tally(what: string, count = 1): void {
    if (count <= 0) return;
    this.tallies.set(what, (this.tallies.get(what) ?? 0) + count);
    this.timer ??= setTimeout(
      () => this.speakTallies(),
      Math.max(0, this.spokeAt + QUIET_MS - performance.now()),
    );
  }

  private speakTallies(): void {
    this.timer = undefined;
    this.spokeAt = performance.now();
    const parts = [...this.tallies].map(([what, n]) => `${n} ${n === 1 ? what : plural(what)}`);
    this.tallies.clear();
    this.say(parts.join(', '));
  }
}

const plural = (what: string): string =>
  what.endsWith('y') ? `${what.slice(0, -1)}ies` : `${what}s`;
