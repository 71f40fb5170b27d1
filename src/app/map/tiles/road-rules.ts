import { linear, LineSymbolizer, type PaintRule } from 'protomaps-leaflet';
import { BridgeSymbolizer } from './bridge-symbolizer';
import type { Palette, RoadClass } from './palette';
import { isBridgeOf, isStreet } from './rule-filters';

/** Zoom and width in pixels. Below the first stop a street is not drawn. */
const WIDTHS: Readonly<Record<RoadClass, number[][]>> = {
  motorway: [
    [9, 1.4],
    [12, 2.6],
    [14, 4.5],
    [16, 11],
    [18, 24],
  ],
  primary: [
    [9, 1.2],
    [12, 2.2],
    [14, 4],
    [16, 10],
    [18, 22],
  ],
  secondary: [
    [9, 0.7],
    [12, 1.6],
    [14, 3.2],
    [16, 8.5],
    [18, 20],
  ],
  tertiary: [
    [10, 0.6],
    [13, 1.3],
    [14, 2.4],
    [16, 7.5],
    [18, 18],
  ],
  local: [
    [11, 0.4],
    [13, 0.9],
    [14, 1.6],
    [16, 6],
    [18, 16],
  ],
  service: [
    [14, 0.5],
    [16, 2.5],
    [18, 8],
  ],
};

/** From the least street to the greatest, so that the greater lies on top. */
const DRAWN: readonly RoadClass[] = [
  'service',
  'local',
  'tertiary',
  'secondary',
  'primary',
  'motorway',
];
const BRIDGES_FROM_ZOOM = 13;

/** Bridges after all streets: what they cross lies below them, whatever its class. */
export function roadRules({ roads, bridgeEdge }: Palette): PaintRule[] {
  const minzoomOf = (roadClass: RoadClass): number => WIDTHS[roadClass][0]?.[0] ?? 0;
  const streets = DRAWN.map((roadClass): PaintRule => ({
    dataLayer: 'roads',
    minzoom: minzoomOf(roadClass),
    filter: isStreet(roadClass),
    symbolizer: new LineSymbolizer({
      color: roads[roadClass],
      width: linear(WIDTHS[roadClass]),
      lineCap: 'round',
      lineJoin: 'round',
    }),
  }));
  const bridges = DRAWN.map((roadClass): PaintRule => ({
    dataLayer: 'roads',
    minzoom: Math.max(BRIDGES_FROM_ZOOM, minzoomOf(roadClass)),
    filter: isBridgeOf(roadClass),
    symbolizer: new BridgeSymbolizer(bridgeEdge, roads[roadClass], linear(WIDTHS[roadClass])),
  }));
  return [...streets, ...bridges];
}
