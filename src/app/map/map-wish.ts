import { Injectable, signal } from '@angular/core';

export type MapSight = 'all' | 'selected-call' | 'pocket';

/**
 * What another part of the screen would like the map to show. It knows nothing of maps, so that
 * asking does not fetch one.
 */
@Injectable({ providedIn: 'root' })
export class MapWish {
  private readonly wantedNow = signal<{ readonly sight: MapSight } | null>(null);
  /** A new object for each wish; `null` when it has been granted. */
  readonly wanted = this.wantedNow.asReadonly();

  show(sight: MapSight): void {
    this.wantedNow.set({ sight });
  }

  granted(): void {
    this.wantedNow.set(null);
  }
}
