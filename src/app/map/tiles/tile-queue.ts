import type { TilePlace } from './tile-orders';

/** A tile that is in the window. */
export interface WantedTile {
  readonly id: number;
  readonly place: TilePlace;
  readonly pixelRatio: number;
}

/**
 * Which tiles wait to be painted: new ones in the order in which they were asked for, those of the
 * zoom asked for last before all others, and after them those that are painted once more.
 */
export class TileQueue {
  private readonly wanted = new Map<number, WantedTile>();
  private readonly fresh = new Set<number>();
  private readonly again = new Set<number>();
  private zoom = 0;

  add(tile: WantedTile): void {
    this.wanted.set(tile.id, tile);
    this.fresh.add(tile.id);
    this.again.delete(tile.id);
    this.zoom = tile.place.z;
  }

  drop(id: number): void {
    this.wanted.delete(id);
    this.fresh.delete(id);
    this.again.delete(id);
  }

  isWanted(id: number): boolean {
    return this.wanted.has(id);
  }

  /** Paints a tile of the window once more; one that has not been painted yet waits as it did. */
  repaint(isMeant: (place: TilePlace) => boolean): void {
    for (const { id, place } of this.wanted.values())
      if (!this.fresh.has(id) && isMeant(place)) this.again.add(id);
  }

  next(): WantedTile | null {
    for (const waiting of [this.fresh, this.again]) {
      const id = this.firstOf(waiting);
      if (id === null) continue;
      waiting.delete(id);
      return this.wanted.get(id) ?? null;
    }
    return null;
  }

  private firstOf(waiting: ReadonlySet<number>): number | null {
    let first: number | null = null;
    for (const id of waiting) {
      if (this.wanted.get(id)?.place.z === this.zoom) return id;
      first ??= id;
    }
    return first;
  }
}
