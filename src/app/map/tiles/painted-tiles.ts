import { type Coords, type DoneCallback, GridLayer } from 'leaflet';
import { fontFiles } from './font-files';
import type { TileLook, TileNews, TileOrder } from './tile-orders';
import { TILE_PX } from './tile-size';

/** A tile that could not be fetched is asked for again, a few times, ever later. */
const RETRY_AFTER_MS = [1000, 4000, 15_000];
/** More points would not be seen in a map, and cost as much. */
const MOST_PIXEL_RATIO = 2;

/** So much of each frame of the screen is spent on showing tiles that have come. */
const BUDGET_MS = 4;

interface Tile {
  readonly canvas: HTMLCanvasElement;
  readonly place: Coords;
  done: DoneCallback | null;
  tries: number;
  timer?: ReturnType<typeof setTimeout>;
}

/** The map's ground: tiles that another thread reads and paints, and that the page only shows. */
export class PaintedTiles extends GridLayer {
  private readonly thread = new Worker(new URL('./tile-worker', import.meta.url), {
    type: 'module',
    name: 'tiles',
  });
  private readonly tiles = new Map<number, Tile>();
  private readonly ids = new WeakMap<HTMLElement, number>();
  private readonly arrived: (TileNews & { readonly kind: 'painted' })[] = [];
  private frame: number | null = null;
  private lastId = 0;

  constructor(
    urls: { readonly ground: string; readonly numbers: string | null },
    private look: TileLook,
  ) {
    super({ tileSize: TILE_PX, keepBuffer: 2, updateWhenIdle: false, updateInterval: 120 });
    this.thread.onmessage = ({ data }: MessageEvent<TileNews>) => this.hear(data);
    this.order({
      kind: 'start',
      groundUrl: absolute(urls.ground),
      numbersUrl: urls.numbers === null ? null : absolute(urls.numbers),
      fonts: fontFiles('IBM Plex Sans'),
      look,
    });
    this.on('tileunload', ({ tile }) => this.drop(tile));
  }

  setLook(look: TileLook): void {
    if (JSON.stringify(look) === JSON.stringify(this.look)) return;
    this.look = look;
    this.order({ kind: 'look', look });
  }

  /** Ends the thread; the layer is of no more use. */
  end(): void {
    for (const { timer } of this.tiles.values()) clearTimeout(timer);
    this.tiles.clear();
    if (this.frame !== null) cancelAnimationFrame(this.frame);
    this.thread.terminate();
  }

  protected override createTile(place: Coords, done: DoneCallback): HTMLElement {
    const canvas = document.createElement('canvas');
    const id = ++this.lastId;
    this.ids.set(canvas, id);
    this.tiles.set(id, { canvas, place, done, tries: 0 });
    this.ask(id);
    return canvas;
  }

  private ask(id: number): void {
    const tile = this.tiles.get(id);
    if (!tile) return;
    const { z, x, y } = tile.place;
    const pixelRatio = Math.min(window.devicePixelRatio || 1, MOST_PIXEL_RATIO);
    this.order({ kind: 'paint', id, place: { z, x, y }, pixelRatio });
  }

  private hear(news: TileNews): void {
    if (news.kind === 'painted') {
      this.arrived.push(news);
      this.wake();
      return;
    }
    const tile = this.tiles.get(news.id);
    if (tile) this.tryAgain(news.id, tile);
  }

  private wake(): void {
    this.frame ??= requestAnimationFrame(() => {
      this.frame = null;
      const until = performance.now() + BUDGET_MS;
      do {
        const news = this.arrived.shift();
        if (news) this.show(news);
      } while (this.arrived.length > 0 && performance.now() < until);
      if (this.arrived.length > 0) this.wake();
    });
  }

  /** With each one that is new Leaflet takes away what it hides: many at once would hold up a frame. */
  private show({ id, picture }: TileNews & { readonly kind: 'painted' }): void {
    const tile = this.tiles.get(id);
    if (!tile) {
      picture.close();
      return;
    }
    tile.canvas.getContext('bitmaprenderer')?.transferFromImageBitmap(picture);
    tile.done?.(undefined, tile.canvas);
    tile.done = null;
  }

  /** Until it comes, what was there before stays, or the colour of the ground. */
  private tryAgain(id: number, tile: Tile): void {
    const after = RETRY_AFTER_MS[tile.tries++];
    if (after === undefined) return;
    tile.timer = setTimeout(() => this.ask(id), after);
  }

  private drop(canvas: HTMLElement): void {
    const id = this.ids.get(canvas);
    if (id === undefined) return;
    clearTimeout(this.tiles.get(id)?.timer);
    this.tiles.delete(id);
    this.order({ kind: 'drop', id });
  }

  private order(order: TileOrder): void {
    this.thread.postMessage(order);
  }
}

/** The thread has another base than the page. The braces of {z} are kept as they are. */
const absolute = (url: string): string => location.origin + url;
