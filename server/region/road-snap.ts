import Flatbush from 'flatbush';
import { EARTH_RADIUS_KM, type LonLat } from '@shared/domain/travel/great-circle';
import type { RoadGraph } from '@shared/domain/roads/road-graph';
import type { RoadPoint } from '@shared/domain/roads/road-ends';

export interface SnappedPoint extends RoadPoint {
  /** The nearest point of the road's line. */
  readonly at: LonLat;
  /** How far it lies from the point that was asked for. */
  readonly metres: number;
}

/** Straight pieces are looked at in batches of this many, nearest boxes first. */
const BATCH = 8;
const METRES_PER_UNIT = (EARTH_RADIUS_KM * 1000 * Math.PI) / 180 / 1e7;

/** Finds the nearest road of a point. */
export class RoadSnap {
  private readonly index: Flatbush;
  /** Straight pieces before each segment's first one. */
  private readonly pieceFirst: Int32Array;
  /** How much shorter a degree east is than a degree north, in the middle of the region. */
  private readonly squeeze: number;

  /** @param graph has at least one segment */
  constructor(private readonly graph: RoadGraph) {
    const { segmentCount, lineFirst, lineLon, lineLat } = graph;
    this.pieceFirst = Int32Array.from(lineFirst, (first, segment) => first - segment);
    this.squeeze = Math.cos(((lineLat[lineLat.length >> 1] ?? 0) / 1e7) * (Math.PI / 180));
    this.index = new Flatbush(this.pieceFirst[segmentCount]!, 16, Int32Array);
    for (let segment = 0; segment < segmentCount; segment++) {
      for (let i = lineFirst[segment]! + 1; i < lineFirst[segment + 1]!; i++) {
        const [a, b] = [lineLon[i - 1]! * this.squeeze, lineLon[i]! * this.squeeze];
        const [c, d] = [lineLat[i - 1]!, lineLat[i]!];
        this.index.add(
          Math.floor(Math.min(a, b)),
          Math.min(c, d),
          Math.ceil(Math.max(a, b)),
          Math.max(c, d),
        );
      }
    }
    this.index.finish();
  }

  nearest([lon, lat]: LonLat): SnappedPoint {
    const x = lon * 1e7 * this.squeeze;
    const y = lat * 1e7;
    let best: Foot | null = null;
    for (let batch = BATCH; ; batch *= 4) {
      const pieces = this.index.neighbors(x, y, batch, best ? best.away + 1 : Infinity);
      for (const piece of pieces) {
        const foot = this.foot(piece, x, y);
        if (!best || foot.away < best.away) best = foot;
      }
      // A box is never farther than its piece: once a box is farther than the best foot, all are.
      if (pieces.length < batch || this.boxDistance(pieces.at(-1)!, x, y) >= best!.away) break;
    }
    return this.snapped(best!);
  }

  private foot(piece: number, x: number, y: number): Foot {
    const segment = this.segmentOf(piece);
    const { lineLon, lineLat } = this.graph;
    const i = piece + segment + 1;
    const [ax, ay] = [lineLon[i - 1]! * this.squeeze, lineLat[i - 1]!];
    const [dx, dy] = [lineLon[i]! * this.squeeze - ax, lineLat[i]! - ay];
    const square = dx * dx + dy * dy;
    const along =
      square === 0 ? 0 : Math.min(1, Math.max(0, ((x - ax) * dx + (y - ay) * dy) / square));
    return {
      segment,
      point: i,
      along,
      away: Math.hypot(ax + dx * along - x, ay + dy * along - y),
    };
  }

  private boxDistance(piece: number, x: number, y: number): number {
    const { lineLon, lineLat } = this.graph;
    const i = piece + this.segmentOf(piece) + 1;
    const outside = (value: number, a: number, b: number): number =>
      Math.max(0, Math.min(a, b) - value, value - Math.max(a, b));
    return Math.hypot(
      outside(x, lineLon[i - 1]! * this.squeeze, lineLon[i]! * this.squeeze),
      outside(y, lineLat[i - 1]!, lineLat[i]!),
    );
  }

  private segmentOf(piece: number): number {
    let low = 0;
    let high = this.graph.segmentCount - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.pieceFirst[middle]! <= piece) low = middle;
      else high = middle - 1;
    }
    return low;
  }

  private snapped({ segment, point, along, away }: Foot): SnappedPoint {
    const { lineFirst, lineLon, lineLat } = this.graph;
    let before = 0;
    let total = 0;
    for (let i = lineFirst[segment]! + 1; i < lineFirst[segment + 1]!; i++) {
      const length = Math.hypot(
        (lineLon[i]! - lineLon[i - 1]!) * this.squeeze,
        lineLat[i]! - lineLat[i - 1]!,
      );
      if (i < point) before += length;
      else if (i === point) before += length * along;
      total += length;
    }
    const blend = (line: Int32Array): number =>
      Math.round(line[point - 1]! + (line[point]! - line[point - 1]!) * along) / 1e7;
    return {
      segment,
      share: total === 0 ? 0 : Math.min(1, before / total),
      at: [blend(lineLon), blend(lineLat)],
      metres: away * METRES_PER_UNIT,
    };
  }
}

interface Foot {
  readonly segment: number;
  /** The line's point at the far end of the straight piece. */
  readonly point: number;
  readonly along: number;
  readonly away: number;
}
