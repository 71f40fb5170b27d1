import {
  DomUtil,
  Layer,
  type LeafletEventHandlerFn,
  type Map as LeafletMap,
  Point,
  type ZoomAnimEvent,
} from 'leaflet';
import { scaleAt, type View } from '../world';

/**
 * Drawn beyond the window's edges. The canvas moves with the map, so that moving costs nothing until
 * much of the margin is used up.
 */
const MARGIN_PX = 192;
const REDRAW_AFTER_PX = 80;

/**
 * A canvas of our own over the tiles. Leaflet's own vectors would be objects by the thousand; here
 * everything is drawn again, at most once for each frame of the screen. During the animation of a
 * zoom the picture is stretched as the tiles are.
 */
export abstract class ViewLayer extends Layer {
  protected readonly canvas = document.createElement('canvas');
  protected map: LeafletMap | null = null;
  private frame: number | null = null;
  private shown: View | null = null;
  private isStale = false;
  private isZooming = false;

  constructor() {
    super();
    this.canvas.className = 'leaflet-zoom-animated map-scene';
    this.canvas.setAttribute('aria-hidden', 'true');
  }

  /** Draws what is in view; the picture is shown with `show`, at once or later. */
  protected abstract draw(view: View, pixelRatio: number): void;

  /** Whether a picture is on its way; what has changed meanwhile is drawn after it. */
  protected abstract get isBusy(): boolean;

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
      viewreset: () => {
        this.stretch();
        this.refresh();
      },
      resize: () => this.refresh(),
      zoomanim: (event) => {
        const { center, zoom } = event as ZoomAnimEvent;
        this.isZooming = true;
        this.stretch(center, zoom);
      },
    };
  }

  /** Draws again from the next frame on. */
  refresh(): void {
    this.isStale = true;
    this.wake();
  }

  protected wake(): void {
    this.frame ??= requestAnimationFrame(() => {
      this.frame = null;
      // In the middle of an animated zoom the map is not where it says it is; its end draws again.
      if (!this.isStale || this.isBusy || this.isZooming) return;
      const view = this.viewNow();
      if (!view) return;
      this.isStale = false;
      this.draw(view, window.devicePixelRatio || 1);
    });
  }

  /** @returns whether the picture is still of use, and so is on screen now; an empty one is none. */
  protected show(view: View, hasPicture: boolean): boolean {
    const { canvas, map } = this;
    if (!map || this.isZooming || map.getZoom() !== view.zoom) return false;
    this.shown = view;
    // An empty canvas costs the screen its time, too.
    canvas.style.display = hasPicture ? '' : 'none';
    canvas.style.width = `${view.width}px`;
    canvas.style.height = `${view.height}px`;
    DomUtil.setPosition(
      canvas,
      new Point(view.left, view.top).subtract(map.getPixelOrigin()).round(),
    );
    return true;
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
    if (!this.isBusy && (map.getZoom() !== shown.zoom || away > REDRAW_AFTER_PX)) this.refresh();
  }

  private viewNow(): View | null {
    const size = this.map?.getSize();
    if (!this.map || !size || size.x === 0 || size.y === 0) return null;
    const corner = this.map.containerPointToLayerPoint([-MARGIN_PX, -MARGIN_PX]).round();
    const origin = this.map.getPixelOrigin();
    const zoom = this.map.getZoom();
    return {
      zoom,
      scale: scaleAt(zoom),
      left: origin.x + corner.x,
      top: origin.y + corner.y,
      width: size.x + 2 * MARGIN_PX,
      height: size.y + 2 * MARGIN_PX,
      margin: MARGIN_PX,
    };
  }

  /** Keeps the picture of one zoom on its ground while the map shows another. */
  private stretch(center = this.map?.getCenter(), zoom = this.map?.getZoom()): void {
    const { map, shown } = this;
    if (!map || !shown || !center || zoom === undefined) return;
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
