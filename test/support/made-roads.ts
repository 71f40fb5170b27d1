import { CLASS_SPEED_KMH, ROAD_CLASSES } from '@shared/domain/roads/road-class';
import type { Segment, SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import { SeededRandom } from '@shared/domain/planner/random';

/**
 * A made city without end: a grid of `side` × `side` junctions with a fifth of its blocks missing, as many
 * blocks a junction as real counties have. Harder than a county of the same size, for nothing in it is a
 * bottleneck that a hierarchy could use.
 */
export const madeGrid = (side: number, seed = 1): SegmentsAndTurns =>
  grid(side, seed, { missing: 0.19, oneWay: 0.05, longer: 0.2 });

/** The same with every block there, open both ways and as long as it looks. */
export const wholeGrid = (side: number): SegmentsAndTurns =>
  grid(side, 1, { missing: 0, oneWay: 0, longer: 0 });

function grid(
  side: number,
  seed: number,
  share: { readonly missing: number; readonly oneWay: number; readonly longer: number },
): SegmentsAndTurns {
  const random = new SeededRandom(seed);
  const segments: Segment[] = [];
  const lon = (x: number): number => -477_000_000 + x * 12_000;
  const lat = (y: number): number => 364_000_000 + y * 9_000;
  const street = (x: number, y: number, dx: number, dy: number, line: number): void => {
    if (random.unit() < share.missing && line % 12 !== 0) return;
    const roadClass = ROAD_CLASSES.indexOf(
      line % 48 === 0 ? 'primary' : line % 12 === 0 ? 'secondary' : 'residential',
    );
    const metres = (dx === 1 ? 107 : 100) * (1 + random.unit() * share.longer);
    const ms = Math.round((metres * 3600) / CLASS_SPEED_KMH[ROAD_CLASSES[roadClass]!]);
    const isOneWay = random.unit() < share.oneWay;
    segments.push({
      from: y * side + x,
      to: (y + dy) * side + x + dx,
      alongMs: ms,
      againstMs: isOneWay ? 0 : ms,
      dm: Math.round(metres * 10),
      roadClass,
      flags: 0,
      name: 0,
      lons: [lon(x), lon(x + dx)],
      lats: [lat(y), lat(y + dy)],
    });
  };
  for (let y = 0; y < side; y++) {
    for (let x = 0; x < side; x++) {
      if (x + 1 < side) street(x, y, 1, 0, y);
      if (y + 1 < side) street(x, y, 0, 1, x);
    }
  }
  return { junctions: side * side, segments, bannedPaths: [] };
}
