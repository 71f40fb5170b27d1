import {
  DomUtil,
  Layer,
  type LeafletEventHandlerFn,
  type Map as LeafletMap,
  Point,
  type ZoomAnimEvent,
} from 'leaflet';
import { scaleAt, type View } from './world';

/**
 * Drawn beyond the window's edges. The canvas moves with the map, so that moving costs nothing until
 * much of the margin is used up.
 */
const MARGIN_PX = 192;
const REDRAW_AFTER_PX = 80;
/** Of each frame of the screen, so much is spent on drawing; the rest is for the hand on the map. */
const BUDGET_MS = 9;

/** Draws one part of what is in view; the context counts in CSS pixels from the top left corner. */
export type Step = (ctx: CanvasRenderingContext2D) => void;
/** What is in view, in parts that are drawn one after the other, in one frame or in several. */
export type Paint = (view: View, pixelRatio: number) => readonly Step[];

/** A picture that is being drawn behind the one on screen. */
interface Work {
  readonly view: View;
  readonly corner: Point;
  readonly steps: readonly Step[];
  done: number;
}

/**
 * A canvas of our own over the tiles. Leaflet's own vectors would be objects by the thousand; here
 * everything is drawn again, at most once for each frame of the screen, out of sight and part by
 * part, so that no frame waits for all of it.
 */
export class SceneLayer extends Layer {
  private readonly canvas = document.createElement('canvas');
  private readonly ctx = this.canvas.getContext('2d');
  /** Drawn on by the processor, so that what was drawn is finished within its own frame. */
  private readonly behind = document.createElement('canvas');
  private readonly pen = this.behind.getContext('2d', { willReadFrequently: true });
  private map: LeafletMap | null = null;
  private frame: number | null = null;
  private shown: View | null = null;
  private work: Work | null = null;
  private isStale = false;
  /** What is on screen is in the wrong place: better one long frame than several wrong ones. */
  private isUrgent = true;
  private isZooming = false;

  constructor(private readonly paint: Paint) {
    super();
    this.canvas.className = 'leaflet-zoom-animated map-scene';
    this.canvas.setAttribute('aria-hidden', 'true');
  }

  override onAdd(map: LeafletMap): this {
    this.map = map;
    map.getPane('overlayPane')?.appendChild(this.canvas);
    this.refreshAtOnce();
    return this;
  }

  override onRemove(): this {
    if (this.frame !== null) cancelAnimationFrame(this.frame);
    this.frame = null;
    this.work = null;
    this.map = null;
    this.canvas.remove();
    return this;
  }

  override getEvents(): Record<string, LeafletEventHandlerFn> {
    return {
      move: () => this.moved(),
      moveend: () => this.refresh(),
      zoomend: () => {
        this.isZooming = false;
        this.refresh();
      },
      viewreset: () => this.refreshAtOnce(),
      resize: () => this.refreshAtOnce(),
      zoomanim: (event) => this.follow(event as ZoomAnimEvent),
    };
  }

  /** Draws again from the next frame on. */
  refresh(): void {
    this.isStale = true;
    this.wake();
  }

  private refreshAtOnce(): void {
    this.isUrgent = true;
    this.work = null;
    this.refresh();
  }

  /** What the canvas shows now, or `null` before it has been drawn. */
  get view(): View | null {
    return this.shown;
  }

  private moved(): void {
    const { map, shown } = this;
    if (!map || !shown) return;
    const origin = map.getPixelBounds().min ?? new Point(0, 0);
    const away = Math.max(
      Math.abs(origin.x - MARGIN_PX - shown.left),
      Math.abs(origin.y - MARGIN_PX - shown.top),
    );
    // While one is being drawn the next would only begin anew; its end looks again.
    if (!this.work && (map.getZoom() !== shown.zoom || away > REDRAW_AFTER_PX)) this.refresh();
  }

  private wake(): void {
    this.frame ??= requestAnimationFrame(() => {
      this.frame = null;
      this.draw();
    });
  }

  private draw(): void {
    // In the middle of an animated zoom the map is not where it says it is; its end draws again.
    if (!this.map || !this.pen || this.isZooming) return;
    this.work ??= this.isStale ? this.begin(this.map) : null;
    const { work } = this;
    if (!work) return;
    const until = this.isUrgent ? Infinity : performance.now() + BUDGET_MS;
    while (work.done < work.steps.length && performance.now() < until) {
      work.steps[work.done++]?.(this.pen);
      // What was drawn is only noted down until somebody looks at it.
      if (!this.isUrgent) this.pen.getImageData(0, 0, 1, 1);
    }
    if (work.done >= work.steps.length) {
      this.isUrgent = false;
      this.show(work);
    }
    if (this.work || this.isStale) this.wake();
  }

  private begin(map: LeafletMap): Work | null {
    this.isStale = false;
    const size = map.getSize();
    if (size.x === 0 || size.y === 0) return null;
    const width = size.x + 2 * MARGIN_PX;
    const height = size.y + 2 * MARGIN_PX;
    const pixelRatio = window.devicePixelRatio || 1;
    const corner = map.containerPointToLayerPoint([-MARGIN_PX, -MARGIN_PX]).round();
    const origin = map.getPixelOrigin();
    const zoom = map.getZoom();
    const view: View = {
      zoom,
      scale: scaleAt(zoom),
      left: origin.x + corner.x,
      top: origin.y + corner.y,
      width,
      height,
      margin: MARGIN_PX,
    };
    const steps = this.paint(view, pixelRatio);
    if (steps.length > 0) {
      this.fit(this.behind, width * pixelRatio, height * pixelRatio);
      this.pen?.setTransform(pixelRatio, 0, 0, pixelRatio, 0, 0);
      this.pen?.clearRect(0, 0, width, height);
    }
    return { view, corner, steps, done: 0 };
  }

  /** Puts the finished picture in place of the one on screen. */
  private show({ view, corner, steps }: Work): void {
    this.work = null;
    const { canvas, ctx, behind, map } = this;
    // Another zoom has begun meanwhile, or has ended: a picture of the one before is of no use.
    if (!ctx || !map || map.getZoom() !== view.zoom) return;
    this.shown = view;
    // An empty picture is none, and costs no screen its time.
    canvas.style.display = steps.length === 0 ? 'none' : '';
    if (steps.length === 0) return;
    this.fit(canvas, behind.width, behind.height);
    canvas.style.width = `${view.width}px`;
    canvas.style.height = `${view.height}px`;
    DomUtil.setPosition(canvas, corner);
    ctx.globalCompositeOperation = 'copy';
    ctx.drawImage(behind, 0, 0);
  }

  private fit(canvas: HTMLCanvasElement, width: number, height: number): void {
    const [w, h] = [Math.round(width), Math.round(height)];
    if (canvas.width !== w) canvas.width = w;
    if (canvas.height !== h) canvas.height = h;
  }

  /** During the animation of a zoom the picture is stretched as the tiles are. */
  private follow({ center, zoom }: ZoomAnimEvent): void {
    const { map, shown } = this;
    if (!map || !shown) return;
    this.isZooming = true;
    this.work = null;
    const scale = map.getZoomScale(zoom, shown.zoom);
    const origin = map
      .project(center, zoom)
      .subtract(map.getSize().divideBy(2))
      .add(map.layerPointToContainerPoint([0, 0]))
      .round();
    const corner = new Point(shown.left, shown.top).multiplyBy(scale).subtract(origin);
    DomUtil.setTransform(this.canvas, corner, scale);
  }
}
