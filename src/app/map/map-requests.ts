import { effect, inject, Injectable, untracked } from '@angular/core';
import { MapActions } from './map-actions';
import { MapPopover } from './map-popover';
import { MapWish } from './map-wish';
import { PinTool } from './pin-tool';

/** What other parts of the page ask of the map: a point for an address, a sight of something. */
@Injectable()
export class MapRequests {
  private readonly actions = inject(MapActions);
  private readonly pin = inject(PinTool);
  private readonly popover = inject(MapPopover);
  private readonly wish = inject(MapWish);
  private focusedBefore: HTMLElement | null = null;

  /** Called where effects may be made. */
  follow(): void {
    this.followPin();
    this.grantWishes();
  }

  private followPin(): void {
    effect(() => {
      const wanted = this.pin.wanted();
      const stage = this.actions.stage();
      untracked(() => {
        if (wanted && stage) {
          this.focusedBefore = document.activeElement as HTMLElement | null;
          this.popover.close();
          this.pin.reset();
          if (wanted.near) stage.showCall(wanted.near);
          this.actions.focus();
        } else if (!wanted && this.focusedBefore) {
          // Back to where the hands were, unless they have gone elsewhere already.
          if (document.activeElement === stage?.map.getContainer()) this.focusedBefore.focus();
          this.focusedBefore = null;
        }
      });
    });
  }

  private grantWishes(): void {
    effect(() => {
      const wanted = this.wish.wanted();
      const stage = this.actions.stage();
      if (!wanted || !stage) return;
      untracked(() => {
        this.wish.granted();
        // The page may have just made room for the map.
        requestAnimationFrame(() => {
          stage.resized();
          this.actions.show(wanted.sight);
        });
      });
    });
  }
}
