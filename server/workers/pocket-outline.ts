import { convex, featureCollection, point } from '@turf/turf';
import type { Polygon } from 'geojson';
import { EARTH_RADIUS_KM, type LonLat } from '@shared/domain/travel/great-circle';

/** Width of the margin around the outermost calls, so that no door lies on the line. */
const MARGIN_KM = 0.15;
/** Corners of the ring around each outermost call: enough to look round, few enough to send. */
const RING_CORNERS = 12;

/**
 * The outline of a pocket: the convex hull of its calls with a margin.
 *
 * Convex on purpose. A concave hull costs 120 ms for 300 points and 590 ms for 2,000, falls apart
 * into several polygons, and jumps when one call comes or goes; the convex one takes 1 and 80 ms.
 * The margin is a ring around each corner of the hull and the hull of those rings: the same shape as
 * turf's buffer draws in ten times the time, and it holds for one door and for doors in a line.
 *
 * @param places at least one; they may coincide or lie in a line
 */
export function pocketOutline(places: readonly LonLat[]): Polygon {
  const outline = hullOf(cornersOf(places).flatMap(ringAround));
  if (!outline) throw new Error(`${places.length} calls have no outline.`);
  return outline;
}

function cornersOf(places: readonly LonLat[]): readonly LonLat[] {
  const hull = hullOf(places);
  if (hull) return hull.coordinates[0]!.map(([lon, lat]): LonLat => [lon!, lat!]);
  // No area: one door, or doors in a line, whose ends are the first and last in this order.
  const sorted = [...places].sort((a, b) => a[0] - b[0] || a[1] - b[1]);
  return [sorted[0]!, sorted.at(-1)!];
}

function hullOf(places: readonly LonLat[]): Polygon | null {
  return convex(featureCollection(places.map((place) => point([...place]))))?.geometry ?? null;
}

function ringAround([lon, lat]: LonLat): LonLat[] {
  const degrees = (MARGIN_KM / EARTH_RADIUS_KM) * (180 / Math.PI);
  const degreesEast = degrees / Math.cos((lat * Math.PI) / 180);
  return Array.from({ length: RING_CORNERS }, (_, corner): LonLat => {
    const angle = (2 * Math.PI * corner) / RING_CORNERS;
    return [lon + degreesEast * Math.cos(angle), lat + degrees * Math.sin(angle)];
  });
}
