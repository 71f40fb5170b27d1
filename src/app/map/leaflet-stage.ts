import * as L from 'leaflet';
import { type LabelRule, leafletLayer, type PaintRule } from 'protomaps-leaflet';
import type { RegionDto } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import {
  ADDRESS_MIN_ZOOM,
  loadMapFonts,
  MAP_MAX_ZOOM,
  MAP_MIN_ZOOM,
  mapStyle,
  type MapTheme,
} from './map-style';
import { type Paint, SceneLayer } from './scene-layer';
import type { WorldPoint } from './world';

// The tile layer is written for a page with a global Leaflet.
(globalThis as { L?: typeof L }).L = L;

/** Zoom of the closest tiles; closer views are drawn from these. */
const TILES_TO_ZOOM = 14;
const NUMBERS_TO_ZOOM = 16;
/** How close the map comes for one call. */
const CALL_ZOOM = 16;
const EDGE_PX = 36;

/** Leaflet, the tiles and two canvases: one for the picture, one for what changes with the pointer. */
export class LeafletStage {
  readonly map: L.Map;
  private readonly base: TileLayer;
  private readonly numbers: TileLayer | null;
  private readonly scene: SceneLayer;
  private readonly top: SceneLayer;
  private readonly home: L.LatLngBounds;
  private theme: MapTheme;

  constructor(
    host: HTMLElement,
    private readonly region: RegionDto,
    { theme, paint, paintTop }: { theme: MapTheme; paint: Paint; paintTop: Paint },
  ) {
    const [west, south, east, north] = region.bbox;
    this.home = L.latLngBounds([south, west], [north, east]);
    this.theme = theme;
    this.map = L.map(host, {
      attributionControl: false,
      zoomControl: false,
      // Arrow keys do more than move the map here; the component has its own.
      keyboard: false,
      doubleClickZoom: false,
      minZoom: MAP_MIN_ZOOM,
      maxZoom: MAP_MAX_ZOOM,
      maxBounds: this.home.pad(0.35),
      maxBoundsViscosity: 0.8,
    });
    this.base = this.makeBase();
    this.base.addTo(this.map);
    this.numbers = this.makeNumbers();
    this.numbers?.addTo(this.map);
    this.scene = new SceneLayer(paint).addTo(this.map);
    this.top = new SceneLayer(paintTop).addTo(this.map);
    this.map.fitBounds(this.home, { animate: false });
  }

  /** Draws in other colours what has been fetched already. */
  setTheme(theme: MapTheme): void {
    if (theme === this.theme) return;
    this.theme = theme;
    const { backgroundColor, paintRules, labelRules, addressLabelRules } = this.style();
    this.base.backgroundColor = backgroundColor;
    this.base.paintRules = paintRules;
    this.base.labelRules = labelRules;
    if (this.numbers) this.numbers.labelRules = addressLabelRules;
    for (const layer of [this.base, this.numbers]) {
      layer?.clearLayout();
      layer?.rerenderTiles();
    }
    this.map.getContainer().style.background = backgroundColor;
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
  showAll(places: readonly LonLat[], { closest = CALL_ZOOM, left = 0, below = 0 } = {}): void {
    const bounds = L.latLngBounds(places.map(([lon, lat]) => L.latLng(lat, lon)));
    this.map.fitBounds(bounds.isValid() ? bounds : this.home, {
      paddingTopLeft: [EDGE_PX + left, EDGE_PX],
      paddingBottomRight: [EDGE_PX, EDGE_PX + below],
      maxZoom: closest,
    });
  }

  showCall([lon, lat]: LonLat): void {
    this.map.setView([lat, lon], Math.max(this.map.getZoom(), CALL_ZOOM));
  }

  /** Moves the map only as far as the place needs to be seen, and not at all when it is. */
  bringIntoSight([lon, lat]: LonLat): void {
    this.map.panInside([lat, lon], { padding: [EDGE_PX, EDGE_PX] });
  }

  /** The window has another size. */
  resized(): void {
    this.map.invalidateSize({ animate: false, pan: false });
  }

  remove(): void {
    this.map.off();
    this.map.remove();
  }

  private style() {
    return mapStyle(this.theme, this.region.hasCoast);
  }

  private makeBase(): TileLayer {
    const { backgroundColor, paintRules, labelRules } = this.style();
    this.map.getContainer().style.background = backgroundColor;
    return tileLayer({
      url: this.region.tilesUrl,
      maxDataZoom: TILES_TO_ZOOM,
      backgroundColor,
      paintRules,
      labelRules,
      attribution: '',
      tasks: [fontsLoaded()],
    });
  }

  /** House numbers are many and wanted only close by, so they have tiles of their own. */
  private makeNumbers(): TileLayer | null {
    const url = this.region.houseNumbersUrl;
    if (url === null) return null;
    return tileLayer({
      url,
      minZoom: ADDRESS_MIN_ZOOM,
      maxDataZoom: NUMBERS_TO_ZOOM,
      paintRules: [],
      labelRules: this.style().addressLabelRules,
      attribution: '',
      tasks: [fontsLoaded()],
    });
  }
}

/** What the tile layer can do; its own types know no Leaflet. */
interface TileLayer extends L.GridLayer {
  backgroundColor?: string | undefined;
  paintRules: PaintRule[];
  labelRules: LabelRule[];
  clearLayout(): void;
  rerenderTiles(): void;
}

const fontsLoaded = () =>
  loadMapFonts().then(() => ({ status: 'fulfilled', reason: new Error('The fonts are there.') }));

const tileLayer = (options: Parameters<typeof leafletLayer>[0]): TileLayer =>
  leafletLayer(options) as unknown as TileLayer;
