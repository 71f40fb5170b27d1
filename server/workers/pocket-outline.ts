import { buffer, convex, featureCollection, lineString, point } from '@turf/turf';
import type { Feature, Geometry, Polygon } from 'geojson';
import type { LonLat } from '@shared/domain/travel/great-circle';

/** Width of the margin around the outermost calls, so that no door lies on the line. */
const MARGIN_KM = 0.15;
/** Corners per quarter circle: enough to look round, few enough to send to every board. */
const CORNER_STEPS = 3;

/**
 * The outline of a pocket: the convex hull of its calls with a margin.
 *
 * Convex on purpose. A concave hull costs 120 ms for 300 points and 590 ms for 2,000, falls apart
 * into several polygons, and jumps when one call comes or goes; the convex one takes 1 and 80 ms.
 *
 * @param places at least one; they may coincide or lie in a line
 */
export function pocketOutline(places: readonly LonLat[]): Polygon {
  const ends = endsOf(places);
  const hull = convex(featureCollection(places.map((place) => point([...place]))));
  const core: Feature<Geometry> =
    hull ?? (isOnePlace(ends) ? point([...ends[0]]) : lineString(ends.map((end) => [...end])));
  const outline = buffer(core, MARGIN_KM, { units: 'kilometers', steps: CORNER_STEPS });
  if (outline?.geometry.type !== 'Polygon') {
    throw new Error(`The outline of ${places.length} calls is ${outline?.geometry.type}.`);
  }
  return outline.geometry;
}

/** The two places furthest apart along the order of longitude, then latitude. */
function endsOf(places: readonly LonLat[]): readonly [LonLat, LonLat] {
  const sorted = [...places].sort((a, b) => a[0] - b[0] || a[1] - b[1]);
  return [sorted[0]!, sorted.at(-1)!];
}

function isOnePlace([a, b]: readonly [LonLat, LonLat]): boolean {
  return a[0] === b[0] && a[1] === b[1];
}
