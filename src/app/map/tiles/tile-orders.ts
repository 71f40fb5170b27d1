import type { MapTheme } from './palette';

/** A tile of the map on screen. */
export interface TilePlace {
  readonly z: number;
  readonly x: number;
  readonly y: number;
}

/** Where a font lies; the painter's thread has no style sheets of its own. */
export interface FontFile {
  readonly family: string;
  readonly url: string;
  readonly weight: string;
  readonly style: string;
  readonly range: string;
}

export interface TileLook {
  readonly theme: MapTheme;
  readonly hasCoast: boolean;
  readonly hasFeeders: boolean;
}

/** What the page asks of the painter's thread. */
export type TileOrder =
  | {
      readonly kind: 'start';
      /** With {z}, {x} and {y}, from the page's own host. */
      readonly groundUrl: string;
      readonly numbersUrl: string | null;
      readonly fonts: readonly FontFile[];
      readonly look: TileLook;
    }
  | {
      readonly kind: 'paint';
      readonly id: number;
      readonly place: TilePlace;
      readonly pixelRatio: number;
    }
  /** The tile has left the window; nothing of it is wanted any more. */
  | { readonly kind: 'drop'; readonly id: number }
  /** Everything that is in the window is painted once more. */
  | { readonly kind: 'look'; readonly look: TileLook };

/** What comes back: a picture, which may come more than once for a tile, or word that there is none. */
export type TileNews =
  | { readonly kind: 'painted'; readonly id: number; readonly picture: ImageBitmap }
  | { readonly kind: 'failed'; readonly id: number };
