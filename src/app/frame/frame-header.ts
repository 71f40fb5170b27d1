import { ChangeDetectionStrategy, Component, computed, effect, inject } from '@angular/core';
import { Router, RouterLink, RouterLinkActive } from '@angular/router';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { Session } from '../core/session';
import { ClockTimePipe } from '../core/zone';
import { AccountMenu } from './account-menu';
import { DESTINATIONS } from './destinations';
import { LinkState } from './link-state';

/** Which storm, whether it is live, what time it is there, and where one can go. */
@Component({
  selector: 'thaw-frame-header',
  imports: [AccountMenu, ClockTimePipe, LinkState, RouterLink, RouterLinkActive],
  templateUrl: './frame-header.html',
  styleUrl: './frame-header.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FrameHeader {
  private readonly router = inject(Router);
  protected readonly session = inject(Session);
  protected readonly clock = inject(Clock);

  protected readonly destinations = computed(() => {
    const user = this.session.user();
    if (!user || user.mustChangePassword) return [];
    return DESTINATIONS.filter((destination) => destination.who.includes(user.role));
  });

  /** On a small screen the row of screens scrolls; where one is must not be what is cut off. */
  protected inSight(link: HTMLElement): void {
    const nav = link.parentElement;
    if (!nav) return;
    const [row, one] = [nav.getBoundingClientRect(), link.getBoundingClientRect()];
    nav.scrollLeft += one.left - row.left - (row.width - one.width) / 2;
  }

  constructor() {
    const keys = inject(Keys);
    // Those of this person only: the sheet of keys lists no screen that the header does not show.
    effect((onCleanup) => {
      const remove = keys.register(
        this.destinations().map(({ path, name, key }) => ({
          keys: `g ${key}`,
          does: name,
          scope: 'Go to',
          run: () => void this.router.navigateByUrl(path),
        })),
      );
      onCleanup(remove);
    });
  }
}
