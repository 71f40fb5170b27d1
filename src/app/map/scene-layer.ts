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
 * most of the margin is used up.
 */
const MARGIN_PX = 128;
const REDRAW_AFTER_PX = 96;

/** Draws what is in view; the context counts in CSS pixels from the canvas's top left corner. */
export type Paint = (ctx: CanvasRenderingContext2D, view: View, pixelRatio: number) => void;

/**
 * A canvas of our own over the tiles. Leaflet's own vectors would be objects by the thousand; here
 * everything is drawn again in one go, at most once for each frame of the screen.
 */
export class SceneLayer extends Layer {
  private readonly canvas = document.createElement('canvas');
  private readonly ctx = this.canvas.getContext('2d');
  private map: LeafletMap | null = null;
  private frame: number | null = null;
  private shown: View | null = null;
  private isZooming = false;

  constructor(private readonly paint: Paint) {
    super();
    this.canvas.className = 'leaflet-zoom-animated map-scene';
    this.canvas.setAttribute('aria-hidden', 'true');
  }

  override onAdd(map: LeafletMap): this {
    this.map = map;
    map.getPane('overlayPane')?.appendChild(this.canvas);
    this.refresh();
    return this;
  }

  override onRemove(): this {
    if (this.frame !== null) cancelAnimationFrame(this.frame);
    this.frame = null;
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
      viewreset: () => this.refresh(),
      resize: () => this.refresh(),
      zoomanim: (event) => this.follow(event as ZoomAnimEvent),
    };
  }

  /** Draws again in the next frame. */
  refresh(): void {
    this.frame ??= requestAnimationFrame(() => {
      this.frame = null;
      this.draw();
    });
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
    if (map.getZoom() !== shown.zoom || away > REDRAW_AFTER_PX) this.refresh();
  }

  private draw(): void {
    const { map, ctx, canvas } = this;
    // In the middle of an animated zoom the map is not where it says it is; its end draws again.
    if (!map || !ctx || this.isZooming) return;
    const size = map.getSize();
    if (size.x === 0 || size.y === 0) return;
    const width = size.x + 2 * MARGIN_PX;
    const height = size.y + 2 * MARGIN_PX;
    const pixelRatio = window.devicePixelRatio || 1;
    if (
      canvas.width !== Math.round(width * pixelRatio) ||
      canvas.height !== Math.round(height * pixelRatio)
    ) {
      canvas.width = Math.round(width * pixelRatio);
      canvas.height = Math.round(height * pixelRatio);
      canvas.style.width = `${width}px`;
      canvas.style.height = `${height}px`;
    }
    const corner = map.containerPointToLayerPoint([-MARGIN_PX, -MARGIN_PX]).round();
    DomUtil.setPosition(canvas, corner);
    const origin = map.getPixelOrigin();
    const zoom = map.getZoom();
    this.shown = {
      zoom,
      scale: scaleAt(zoom),
      left: origin.x + corner.x,
      top: origin.y + corner.y,
      width,
      height,
      margin: MARGIN_PX,
    };
    ctx.setTransform(pixelRatio, 0, 0, pixelRatio, 0, 0);
    ctx.clearRect(0, 0, width, height);
    this.paint(ctx, this.shown, pixelRatio);
  }

  /** During the animation of a zoom the picture is stretched as the tiles are. */
  private follow({ center, zoom }: ZoomAnimEvent): void {
    const { map, shown } = this;
    if (!map || !shown) return;
    this.isZooming = true;
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
