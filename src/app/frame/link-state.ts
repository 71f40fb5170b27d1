import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { BoardStore } from '../core/board-store';
import { DayStore } from '../core/day-store';
import { Live } from '../core/live';
import { Session } from '../core/session';
import { Zone } from '../core/zone';

/** Says in words whether what is on the screen is current, and if not, from when it is. */
@Component({
  selector: 'thaw-link-state',
  imports: [MatIcon],
  template: `
    <span class="state" [class.stale]="kind() !== 'live'">
      <mat-icon [svgIcon]="icon()" aria-hidden="true" />
      <span role="status">{{ words() }}</span>
    </span>
  `,
  styleUrl: './link-state.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LinkState {
  private readonly live = inject(Live);
  private readonly zone = inject(Zone);
  private readonly session = inject(Session);
  private readonly board = inject(BoardStore);
  private readonly day = inject(DayStore);

  protected readonly kind = computed<'connecting' | 'live' | 'reconnecting' | 'offline'>(() => {
    const link = this.session.isDesk() ? this.board.link() : this.day.link();
    if (link === 'live') return 'live';
    if (this.live.isOffline()) return 'offline';
    return this.live.lastContactAt() === null ? 'connecting' : 'reconnecting';
  });

  protected readonly words = computed(() => {
    const at = this.live.lastContactAt();
    const asOf = at === null ? '' : `, as of ${this.zone.clockTime(at)}`;
    switch (this.kind()) {
      case 'live':
        return 'Live';
      case 'connecting':
        return 'Connecting';
      case 'reconnecting':
        return `Reconnecting${asOf}`;
      case 'offline':
        return `Offline${asOf}`;
    }
  });

  protected readonly icon = computed(() => {
    switch (this.kind()) {
      case 'live':
        return 'check';
      case 'offline':
        return 'cloud-off';
      default:
        return 'sync';
    }
  });
}
