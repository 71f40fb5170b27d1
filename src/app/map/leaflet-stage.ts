import * as L from 'leaflet';
import type { RegionDto } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import { SceneLayer, type SceneSource } from './scene/scene-layer';
import { type Paint, TopLayer } from './scene/top-layer';
import { MAP_MAX_ZOOM, MAP_MIN_ZOOM } from './tiles/map-zoom';
import { PaintedTiles } from './tiles/painted-tiles';
import { groundColor, type MapTheme } from './tiles/palette';
import type { WorldPoint } from './world';

/** How close the map comes for one call. */
const CALL_ZOOM = 16;
const EDGE_PX = 36;
/** What of the map stays between a selected place and the nearest edge, as a share of its size. */
const FREE_SHARE = 0.2;
/** How far the map goes beyond the region, as a share of its size. */
const BEYOND = 0.35;
/** The same while a panel covers a part of the map. */
const BEYOND_BESIDE = 4;

/** So far a view may stray, by rounding, and still be the one that was fitted. */
const MOVED_PX = 2;

/** Pixels of the window that something lies over, at its left or its lower edge. */
export interface Covered {
  readonly left?: number;
  readonly below?: number;
}

interface Whole {
  readonly bounds: L.LatLngBounds;
  /** The closest zoom at which it is shown. */
  readonly closest: number;
}

export interface StageLook {
  readonly theme: MapTheme;
  readonly hasFeeders: boolean;
}

/** Leaflet, the tiles and two canvases: one for the picture, one for what changes with the pointer. */
export class LeafletStage {
  readonly map: L.Map;
  private readonly tiles: PaintedTiles;
  private readonly scene: SceneLayer;
  private readonly top: TopLayer;
  private readonly home: L.LatLngBounds;
  /** What was last shown as a whole, and the view that this made. */
  private fitted: { readonly whole: Whole; readonly centre: L.LatLng; readonly zoom: number };

  constructor(
    host: HTMLElement,
    private readonly region: RegionDto,
    { look, scene, paintTop }: { look: StageLook; scene: SceneSource; paintTop: Paint },
  ) {
    this.home = boundsOf(region);
    standOnWholePixels(host);
    this.map = L.map(host, {
      attributionControl: false,
      zoomControl: false,
      // Arrow keys do more than move the map here; the component has its own.
      keyboard: false,
      doubleClickZoom: false,
      // Fading is work for every tile in every frame.
      fadeAnimation: false,
      // One notch of a wheel is one step, also where a notch is 120 pixels.
      wheelPxPerZoomLevel: 120,
      minZoom: MAP_MIN_ZOOM,
      maxZoom: MAP_MAX_ZOOM,
      maxBounds: this.home.pad(BEYOND),
      maxBoundsViscosity: 0.8,
    });
    this.tiles = tilesOf(region, look).addTo(this.map);
    this.colorGround(look.theme);
    this.scene = new SceneLayer(scene, () => this.top.refresh()).addTo(this.map);
    this.top = new TopLayer(paintTop).addTo(this.map);
    this.map.fitBounds(this.home, { animate: false });
    this.fitted = {
      whole: { bounds: this.home, closest: CALL_ZOOM },
      centre: this.map.getCenter(),
      zoom: this.map.getZoom(),
    };
  }

  /** Whether it shows this region, made of the same data. */
  isOf(region: RegionDto): boolean {
    return region.tilesUrl === this.region.tilesUrl;
  }

  /** Draws anew what has been fetched already. */
  setLook(look: StageLook): void {
    this.tiles.setLook({ ...look, hasCoast: this.region.hasCoast });
    this.colorGround(look.theme);
  }

  refresh(): void {
    this.scene.refresh();
    this.top.refresh();
  }

  refreshTop(): void {
    this.top.refresh();
  }

  /** The pixels of the whole world under a point of the window. */
  worldPixel(point: L.Point): WorldPoint {
    const origin = this.map.getPixelBounds().min ?? new L.Point(0, 0);
    return { x: origin.x + point.x, y: origin.y + point.y };
  }

  /** Where a place stands in the window, in CSS pixels. */
  windowPoint([lon, lat]: LonLat): L.Point {
    return this.map.latLngToContainerPoint([lat, lon]);
  }

  /** The place under a point of the window. */
  placeAt({ x, y }: WorldPoint): LonLat {
    const { lng, lat } = this.map.containerPointToLatLng([x, y]);
    return [lng, lat];
  }

  /** Where a pointer is in the window. */
  pointOf(event: PointerEvent): L.Point {
    return this.map.mouseEventToContainerPoint(event);
  }

  centre(): LonLat {
    const { lng, lat } = this.map.getCenter();
    return [lng, lat];
  }

  zoomBy(steps: number): void {
    this.map.setZoom(this.map.getZoom() + steps);
  }

  /** Shows all of these places, or the whole region when there are none, beside or above what a panel covers. */
  showAll(
    places: readonly LonLat[],
    { closest = CALL_ZOOM, covered = {} }: { closest?: number; covered?: Covered } = {},
  ): void {
    const bounds = L.latLngBounds(places.map(([lon, lat]) => L.latLng(lat, lon)));
    this.fit({ bounds: bounds.isValid() ? bounds : this.home, closest }, covered);
  }

  /**
   * Another part of the window is covered now: what was shown as a whole is shown as a whole again. A
   * view that somebody has chosen since stays as it is.
   */
  fitAgain(covered: Covered): void {
    const isAsFitted = this.isAsFitted();
    this.leaveRoom(covered);
    if (isAsFitted) this.fit(this.fitted.whole, covered);
  }

  private fit(whole: Whole, covered: Covered): void {
    const { left = 0, below = 0 } = covered;
    this.leaveRoom(covered);
    this.map.once('moveend', () => {
      this.fitted = { whole, centre: this.map.getCenter(), zoom: this.map.getZoom() };
    });
    this.map.fitBounds(whole.bounds, {
      paddingTopLeft: [EDGE_PX + left, EDGE_PX],
      paddingBottomRight: [EDGE_PX, EDGE_PX + below],
      maxZoom: whole.closest,
    });
  }

  /** What is to stand above a panel needs room below it. */
  private leaveRoom({ left = 0, below = 0 }: Covered): void {
    this.map.setMaxBounds(this.home.pad(left + below > 0 ? BEYOND_BESIDE : BEYOND));
  }

  private isAsFitted(): boolean {
    const { centre, zoom } = this.fitted;
    const middle = this.map.getSize().divideBy(2);
    const moved = this.map.latLngToContainerPoint(centre).distanceTo(middle);
    return this.map.getZoom() === zoom && moved < MOVED_PX;
  }

  showCall([lon, lat]: LonLat): void {
    this.map.setView([lat, lon], Math.max(this.map.getZoom(), CALL_ZOOM));
  }

  /**
   * Moves the map only as far as the place needs to be seen with something around it, and not at all
   * when it is: at the very edge nobody sees what the place lies beside.
   */
  bringIntoSight([lon, lat]: LonLat): void {
    const { x, y } = this.map.getSize().multiplyBy(FREE_SHARE);
    this.map.panInside([lat, lon], { padding: [Math.max(x, EDGE_PX), Math.max(y, EDGE_PX)] });
  }

  /** The window has another size; what was in its middle stays there. */
  resized(): void {
    standOnWholePixels(this.map.getContainer());
    this.map.invalidateSize({ animate: false });
  }

  remove(): void {
    this.map.off();
    this.map.remove();
    this.tiles.end();
    this.scene.end();
  }

  private colorGround(theme: MapTheme): void {
    this.map.getContainer().style.background = groundColor(theme, this.region.hasCoast);
  }
}

/**
 * Columns of a page may begin between two points of the screen. Each tile would then be blended with the
 * ground at its edges, and the seams be seen.
 */
function standOnWholePixels(host: HTMLElement): void {
  const { left = 0, top = 0 } = host.parentElement?.getBoundingClientRect() ?? {};
  const ratio = window.devicePixelRatio || 1;
  const [x, y] = [left, top].map((px) => Math.round(px * ratio) / ratio - px);
  host.style.translate = `${x}px ${y}px`;
}

function boundsOf({ bbox: [west, south, east, north] }: RegionDto): L.LatLngBounds {
  return L.latLngBounds([south, west], [north, east]);
}

const tilesOf = (
  { tilesUrl, houseNumbersUrl, hasCoast }: RegionDto,
  look: StageLook,
): PaintedTiles =>
  new PaintedTiles({ ground: tilesUrl, numbers: houseNumbersUrl }, { ...look, hasCoast });
