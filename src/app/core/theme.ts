import { DOCUMENT } from '@angular/common';
import { computed, DestroyRef, effect, inject, Injectable, signal } from '@angular/core';
import { fromStorage, toStorage } from './storage';

export const THEMES = ['system', 'light', 'dark'] as const;
export type ThemeChoice = (typeof THEMES)[number];

const THEME_AS = 'thawline:theme';
const CONTRAST_AS = 'thawline:contrast';

/**
 * Light or dark, and how much contrast. The system's wish holds until this person says otherwise;
 * the choice stays in this browser. Styles follow `data-theme` and `data-contrast` of the page.
 */
@Injectable({ providedIn: 'root' })
export class Theme {
  private readonly root = inject(DOCUMENT).documentElement;
  private readonly chosen = signal<ThemeChoice>(storedTheme());
  private readonly moreContrast = signal(fromStorage(CONTRAST_AS) === 'more');
  private readonly systemIsDark = signal(false);

  readonly choice = this.chosen.asReadonly();
  readonly hasMoreContrast = this.moreContrast.asReadonly();
  /** What is shown now. A canvas reads it in order to draw itself again when it changes. */
  readonly scheme = computed<'light' | 'dark'>(() => {
    const choice = this.chosen();
    if (choice !== 'system') return choice;
    return this.systemIsDark() ? 'dark' : 'light';
  });

  constructor() {
    this.watchSystem();
    effect(() => {
      this.root.dataset['theme'] = this.chosen();
      this.root.dataset['contrast'] = this.moreContrast() ? 'more' : 'system';
    });
  }

  choose(choice: ThemeChoice): void {
    this.chosen.set(choice);
    toStorage(THEME_AS, choice);
  }

  setContrast(contrast: 'more' | 'system'): void {
    this.moreContrast.set(contrast === 'more');
    toStorage(CONTRAST_AS, contrast);
  }

  /** A colour as the page shows it now, such as `color('--thaw-accent')`; for canvases. */
  color(token: `--thaw-${string}`): string {
    return getComputedStyle(this.root).getPropertyValue(token).trim();
  }

  private watchSystem(): void {
    const query = this.root.ownerDocument.defaultView?.matchMedia?.('(prefers-color-scheme: dark)');
    if (!query) return;
    const follow = (): void => this.systemIsDark.set(query.matches);
    follow();
    query.addEventListener('change', follow);
    inject(DestroyRef).onDestroy(() => query.removeEventListener('change', follow));
  }
}

/** Sets the page's theme before anything is drawn, so that a dark room sees no white flash. */
export function applyStoredTheme(root: HTMLElement): void {
  root.dataset['theme'] = storedTheme();
  root.dataset['contrast'] = fromStorage(CONTRAST_AS) === 'more' ? 'more' : 'system';
}

function storedTheme(): ThemeChoice {
  const stored = fromStorage(THEME_AS);
  return THEMES.find((theme) => theme === stored) ?? 'system';
}
