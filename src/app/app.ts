import { DOCUMENT } from '@angular/common';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  type ElementRef,
  inject,
  untracked,
  viewChild,
} from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { NavigationEnd, Router, RouterOutlet } from '@angular/router';
import { filter, skip } from 'rxjs';
import { BoardStore } from './core/board-store';
import { DayStore } from './core/day-store';
import { Session } from './core/session';
import { Theme } from './core/theme';
import { FrameHeader } from './frame/frame-header';

const ASK_AGAIN_MS = 4_000;

/** The frame around every screen: who is signed in decides what stands in it. */
@Component({
  selector: 'thaw-app',
  imports: [FrameHeader, MatButton, RouterOutlet],
  templateUrl: './app.html',
  styleUrl: './app.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class App {
  private readonly router = inject(Router);
  private readonly board = inject(BoardStore);
  private readonly day = inject(DayStore);
  private readonly root = inject(DOCUMENT).documentElement;
  private readonly main = viewChild.required<ElementRef<HTMLElement>>('main');
  private isBegun = false;

  protected readonly session = inject(Session);
  protected readonly size = computed(() =>
    this.session.role() === 'technician' ? 'thaw-phone' : 'thaw-desk',
  );

  constructor() {
    inject(Theme); // Made here so that the choice holds from the first screen on.
    this.setSize();
    this.followWork();
    this.moveFocusWithPages();
    void this.begin();
  }

  protected skipToMain(event: Event): void {
    event.preventDefault();
    this.main().nativeElement.focus();
  }

  protected async begin(): Promise<void> {
    await this.session.refresh();
    if (this.session.state() === 'unreachable') {
      setTimeout(() => void this.begin(), ASK_AGAIN_MS);
    } else if (!this.isBegun) {
      this.isBegun = true;
      this.router.initialNavigation();
    }
  }

  /** The page's class, not the component's: dialogs and menus live outside of it. */
  private setSize(): void {
    effect(() => {
      const size = this.size();
      this.root.classList.toggle('thaw-phone', size === 'thaw-phone');
      this.root.classList.toggle('thaw-desk', size === 'thaw-desk');
    });
  }

  private followWork(): void {
    const work = computed(() => {
      const user = this.session.user();
      if (!user || user.mustChangePassword) return 'none';
      return user.role === 'technician' ? 'day' : 'board';
    });
    // The id too: another person at the same desk gets a picture of their own.
    const whose = computed(() => this.session.user()?.id);
    effect(() => {
      const kind = work();
      whose();
      untracked(() => {
        this.board.close();
        this.day.close();
        if (kind === 'board') this.board.open();
        if (kind === 'day') this.day.open();
      });
    });
  }

  /** Who listens, or works by keyboard, goes on at the top of the new page. */
  private moveFocusWithPages(): void {
    this.router.events
      .pipe(
        filter((event) => event instanceof NavigationEnd),
        skip(1),
        takeUntilDestroyed(),
      )
      .subscribe(() => this.main().nativeElement.focus({ preventScroll: true }));
  }
}
