import {
  Labelers,
  paint,
  type PreparedTile,
  sourcesToViews,
  type View,
  type Zxy,
} from 'protomaps-leaflet';
import { mapStyle, type MapStyle } from './map-style';
import { GROUND_DATA_ZOOM, NUMBERS_DATA_ZOOM, NUMBERS_MIN_ZOOM } from './map-zoom';
import { groundColor } from './palette';
import { GROUND, NUMBERS } from './sources';
import type { TileLook, TilePlace } from './tile-orders';
import { TILE_PX } from './tile-size';

/** How far beside a tile something may begin that reaches into it. */
const REACH_PX = 16;
/** As many tiles as a large window shows keep their names in mind, or names come and go. */
const NAMED_TILES = 72;

type Prepared = Map<string, PreparedTile[]>;

/** Draws tiles onto canvases of their own, without a page. */
export class TilePainter {
  private readonly views: Map<string, View>;
  private readonly scratch = new OffscreenCanvas(1, 1).getContext('2d');
  private style: MapStyle;
  private ground: string;
  private names: Labelers;

  /** @param staleNames the tiles, as "x:y:z", into which names of another have come to reach */
  constructor(
    urls: { readonly ground: string; readonly numbers: string | null },
    look: TileLook,
    private readonly staleNames: (keys: ReadonlySet<string>) => void,
  ) {
    this.views = sourcesToViews({
      sources: {
        [GROUND]: { url: urls.ground, maxDataZoom: GROUND_DATA_ZOOM },
        ...(urls.numbers === null
          ? {}
          : { [NUMBERS]: { url: urls.numbers, maxDataZoom: NUMBERS_DATA_ZOOM } }),
      },
    });
    this.style = mapStyle(look.theme, look.hasFeeders);
    this.ground = groundColor(look.theme, look.hasCoast);
    this.names = this.noNames();
  }

  setLook({ theme, hasCoast, hasFeeders }: TileLook): void {
    this.style = mapStyle(theme, hasFeeders);
    this.ground = groundColor(theme, hasCoast);
    this.names = this.noNames();
  }

  /** Fetches and reads what a tile is drawn from. @throws what fetching throws */
  async prepare(place: TilePlace): Promise<Prepared> {
    const wanted = [...this.views].filter(
      ([source]) => source !== NUMBERS || place.z >= NUMBERS_MIN_ZOOM,
    );
    return new Map(
      await Promise.all(
        wanted.map(async ([source, view]): Promise<[string, PreparedTile[]]> => [
          source,
          [await view.getDisplayTile(place)],
        ]),
      ),
    );
  }

  draw({ z, x, y }: TilePlace, prepared: Prepared, pixelRatio: number): ImageBitmap {
    const size = Math.round(TILE_PX * pixelRatio);
    const canvas = new OffscreenCanvas(size, size);
    // The library's types know pages only; it draws with what both kinds of context have.
    const ctx = canvas.getContext('2d', { alpha: false }) as unknown as CanvasRenderingContext2D;
    this.names.add(z, prepared);
    ctx.setTransform(size / TILE_PX, 0, 0, size / TILE_PX, 0, 0);
    ctx.fillStyle = this.ground;
    ctx.fillRect(0, 0, TILE_PX, TILE_PX);
    const left = TILE_PX * x;
    const top = TILE_PX * y;
    paint(
      ctx,
      z,
      prepared,
      this.names.getIndex(z) ?? null,
      this.style.paintRules,
      {
        minX: left - REACH_PX,
        minY: top - REACH_PX,
        maxX: left + TILE_PX + REACH_PX,
        maxY: top + TILE_PX + REACH_PX,
      },
      originAt(prepared, left, top),
      false,
    );
    return canvas.transferToImageBitmap();
  }

  private noNames(): Labelers {
    return new Labelers(
      this.scratch as unknown as CanvasRenderingContext2D,
      this.style.labelRules,
      NAMED_TILES,
      (keys) => this.staleNames(keys),
    );
  }
}

export const keyOf = ({ x, y, z }: Zxy): string => `${x}:${y}:${z}`;

/** A point of the library's own kind, made from one that it gave. */
function originAt(prepared: Prepared, x: number, y: number): PreparedTile['origin'] {
  const known = [...prepared.values()][0]?.[0]?.origin;
  if (!known) throw new Error('a tile without a place');
  const origin = known.clone();
  origin.x = x;
  origin.y = y;
  return origin;
}
