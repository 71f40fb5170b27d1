import { Injectable, signal } from '@angular/core';
import { fromStorage, toStorage } from '../core/storage';

/** What the map can show or leave out, and the second key after `l`. */
export const MAP_LAYERS = [
  { layer: 'calls', name: 'Calls', key: 'c' },
  { layer: 'pockets', name: 'Pockets', key: 'p' },
  { layer: 'areas', name: 'Areas', key: 'a' },
  { layer: 'routes', name: 'Routes', key: 'r' },
  { layer: 'proposal', name: 'Proposal', key: 'n' },
  { layer: 'technicians', name: 'Technicians', key: 't' },
  { layer: 'storm-roads', name: 'Storm roads', key: 'o' },
  { layer: 'feeders', name: 'Feeders', key: 'f' },
] as const;
export type MapLayerName = (typeof MAP_LAYERS)[number]['layer'];

const HIDDEN_AS = 'thawline:map-hidden';

/** Which layers are shown; the choice stays in this browser. */
@Injectable({ providedIn: 'root' })
export class MapLayers {
  private readonly hidden = signal<ReadonlySet<string>>(
    new Set((fromStorage(HIDDEN_AS) ?? '').split(' ')),
  );

  isShown(layer: MapLayerName): boolean {
    return !this.hidden().has(layer);
  }

  toggle(layer: MapLayerName): void {
    const hidden = new Set(this.hidden());
    if (!hidden.delete(layer)) hidden.add(layer);
    this.hidden.set(hidden);
    toStorage(HIDDEN_AS, [...hidden].join(' '));
  }
}
