import type { Box } from '../label-boxes';
import type { MapInk } from '../map-ink';
import type { FontFile } from '../tiles/tile-orders';
import type { View } from '../world';
import type { SceneChanges } from './packed-scene';

/** What the page asks of the thread that draws the scene. */
export type SceneOrder =
  | { readonly kind: 'start'; readonly fonts: readonly FontFile[] }
  | {
      readonly kind: 'paint';
      readonly view: View;
      readonly pixelRatio: number;
      /** `null` while the colours are those of the order before. */
      readonly ink: MapInk | null;
      readonly changes: SceneChanges;
    };

/** What can be clicked, in pixels of the picture, in the order in which it was drawn. */
export interface ScenePlaces {
  /** How each call stands there, in the order of the scene: with a full mark or as a dot, and how many in its place. */
  readonly marks: { readonly isFull: Uint8Array; readonly counts: Uint16Array };
  readonly plates: readonly { readonly technicianId: string; readonly box: Box }[];
  readonly roadSigns: readonly { readonly roadId: string; readonly box: Box }[];
  readonly pocketLabels: readonly { readonly pocketKey: string; readonly box: Box }[];
  readonly areaLabels: readonly { readonly areaId: string; readonly box: Box }[];
}

export const NO_PLACES: ScenePlaces = {
  marks: { isFull: new Uint8Array(), counts: new Uint16Array() },
  plates: [],
  roadSigns: [],
  pocketLabels: [],
  areaLabels: [],
};

/** One comes back for each order to paint; without a picture when there is nothing to see. */
export interface SceneNews {
  readonly view: View;
  readonly picture: ImageBitmap | null;
  readonly places: ScenePlaces;
}
