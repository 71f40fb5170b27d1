import { featureCollection, multiPolygon, polygon, simplify, union } from '@turf/turf';
import type { AreaShape } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import type { FeederMap } from '@shared/contract/feeders';
import { Refusal } from '@shared/domain/errors';
import { MOST_SHAPE_POINTS } from '@shared/domain/outage-shape';

/** Slivers between neighbours that were mapped a hand's breadth apart are no ground of their own. */
const LEAST_RING_DEGREES_2 = 1e-9;
/** From two metres on, doubled until the outline has few enough points. */
const FIRST_TOLERANCE_DEGREES = 2e-5;

/**
 * The ground that some feeders serve together, without the borders between neighbours.
 *
 * @throws Refusal `not-found` when the region has no such feeder
 */
export function shapeOfFeeders({ feeders }: FeederMap, ids: readonly string[]): AreaShape {
  const chosen = [...new Set(ids)].map((id) => {
    const feeder = feeders.find((one) => one.id === id);
    if (!feeder) throw new Refusal('not-found', `The region has no feeder ${id}.`);
    return feeder;
  });
  const parts = chosen.flatMap(({ polygons }) => polygons.map((rings) => polygon(rings)));
  const merged = parts.length > 1 ? union(featureCollection(parts)) : parts[0];
  if (!merged) throw new Refusal('not-found', 'These feeders have no ground.');
  const { geometry } = merged;
  const shape = geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
  return fewEnough(
    shape
      .map((rings) => rings.filter((ring) => areaOf(ring) > LEAST_RING_DEGREES_2))
      .filter((rings) => rings.length > 0),
  );
}

function fewEnough(shape: number[][][][]): AreaShape {
  let thin = shape;
  for (let tolerance = FIRST_TOLERANCE_DEGREES; pointsOf(thin) > MOST_SHAPE_POINTS; tolerance *= 2)
    thin = simplify(multiPolygon(shape), { tolerance }).geometry.coordinates;
  return thin.map((rings) =>
    rings.map((ring) => ring.map(([lon = 0, lat = 0]): LonLat => [lon, lat])),
  );
}

const pointsOf = (shape: readonly (readonly (readonly unknown[])[])[]): number =>
  shape.flat().reduce((sum, ring) => sum + ring.length, 0);

/** The shoelace formula, in square degrees. */
const areaOf = (ring: readonly number[][]): number =>
  Math.abs(
    ring.slice(1).reduce((sum, [x = 0, y = 0], i) => {
      const [px = 0, py = 0] = ring[i] ?? [];
      return sum + px * y - x * py;
    }, 0),
  ) / 2;
