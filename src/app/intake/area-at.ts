import type { AreaDto } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';

/**
 * The outage area that a point lies in. Where areas overlap the one that lost power first counts,
 * which is the cautious reading.
 */
export function areaAt([lon, lat]: LonLat, areas: readonly AreaDto[]): AreaDto | null {
  const around = areas.filter(({ ring }) => isInside(lon, lat, ring));
  return around.reduce<AreaDto | null>(
    (first, area) => (first && first.outAt <= area.outAt ? first : area),
    null,
  );
}

/**
 * Whether a ray to the east crosses the ring an odd number of times. Each edge counts with its lower
 * end and without its upper one, so that a ray through a corner counts it once.
 */
function isInside(lon: number, lat: number, ring: readonly LonLat[]): boolean {
  let inside = false;
  for (let i = 1; i < ring.length; i++) {
    const [fromLon, fromLat] = ring[i - 1] ?? [0, 0];
    const [toLon, toLat] = ring[i] ?? [0, 0];
    if (fromLat > lat === toLat > lat) continue;
    const crossing = fromLon + ((lat - fromLat) / (toLat - fromLat)) * (toLon - fromLon);
    if (lon < crossing) inside = !inside;
  }
  return inside;
}
