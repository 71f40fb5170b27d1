import type { LonLat } from '../travel/great-circle';
import { isAlong, segmentOf, type RoadGraph } from './road-graph';
import type { RoadPoint } from './road-ends';
import { lineOf } from './storm-cover';

/**
 * The line of a way, from its first point to its last, in degrees. The first and the last lane are cut
 * where the drive begins and ends.
 */
export function lineOfWay(
  graph: RoadGraph,
  lanes: readonly number[],
  from: RoadPoint,
  to: RoadPoint,
): LonLat[] {
  const line: LonLat[] = [];
  if (lanes.length === 0) line.push(...part(lineOf(graph, from.segment), from.share, from.share));
  lanes.forEach((lane, i) => {
    const whole = lineOf(graph, segmentOf(lane));
    const share = (point: RoadPoint): number => (isAlong(lane) ? point.share : 1 - point.share);
    const driven = isAlong(lane) ? whole : whole.reverse();
    const begin = i === 0 ? share(from) : 0;
    const end = i === lanes.length - 1 ? share(to) : 1;
    for (const point of begin > 0 || end < 1 ? part(driven, begin, end) : driven) {
      const last = line.at(-1);
      if (!last || last[0] !== point[0] || last[1] !== point[1]) line.push(point);
    }
  });
  return line.length === 1 ? [line[0]!, line[0]!] : line;
}

/** A line between two shares of its length. */
function part(line: readonly LonLat[], begin: number, end: number): LonLat[] {
  const squeeze = Math.cos((line[0]![1] * Math.PI) / 180);
  const gone = [0];
  for (let i = 1; i < line.length; i++) {
    const [a, b] = [line[i - 1]!, line[i]!];
    gone.push(gone[i - 1]! + Math.hypot((b[0] - a[0]) * squeeze, b[1] - a[1]));
  }
  const total = gone.at(-1)!;
  const at = (share: number): LonLat => {
    const wanted = total * share;
    const i = Math.max(
      1,
      gone.findIndex((length, index) => index > 0 && length >= wanted),
    );
    const [a, b] = [line[i - 1]!, line[i]!];
    const length = gone[i]! - gone[i - 1]!;
    const blend = length === 0 ? 0 : (wanted - gone[i - 1]!) / length;
    return [degrees(a[0] + (b[0] - a[0]) * blend), degrees(a[1] + (b[1] - a[1]) * blend)];
  };
  const inner = line.filter((_, i) => gone[i]! > total * begin && gone[i]! < total * end);
  return [at(begin), ...inner, at(end)];
}

/** Rounded as the map's own points are. */
const degrees = (value: number): number => Math.round(value * 1e7) / 1e7;
